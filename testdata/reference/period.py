"""Periodic steady state of x' = f(t, x) by shooting with SciPy's integrators, and waveforms over one period."""

import numpy as np
from scipy.integrate import solve_ivp

SAMPLES = 20000  # per period; even, for Simpson's rule


def integrate(f, x, start, stop, method, rtol, dense=False, step=None):
    """Solve from start to stop; the result of solve_ivp."""
    result = solve_ivp(f, (start, stop), x, method=method, rtol=rtol, atol=rtol * 1e-2,
                       max_step=step or (stop - start) / 200, dense_output=dense)
    if not result.success:
        raise ArithmeticError(result.message)
    return result


def settle(f, x, T, rtol=1e-10, method="LSODA", slope=None, plain=2, verbose=False):
    """State at the start of the periodic steady state, and the monodromy matrix.

    Newton's method on x(T) - x(0) = 0 with the matrix by finite differences (Aprille and Trick 1972).
    With a slope matrix given, that is used throughout (chord method): few periods, for a second method.
    """
    x = np.array(x, float)
    end = lambda y: integrate(f, y, 0, T, method, rtol).y[:, -1]
    if slope is None:
        for _ in range(plain):
            x = end(x)
    given, last = slope, np.inf
    for k in range(40):
        e = end(x)
        gap = np.max(np.abs(e - x) / (1 + np.abs(x)))
        if verbose:
            print("   ", k, gap, x)
        if gap < 30 * rtol or (gap < 1e3 * rtol and gap > 0.5 * last):
            return x, slope
        last = gap
        if given is None and (k < 3 or k % 4 == 0 or slope is None):
            slope = np.empty((len(x), len(x)))
            for j in range(len(x)):
                h = 1e-5 * (1 + abs(x[j]))
                y = x.copy()
                y[j] += h
                slope[:, j] = (end(y) - e) / h
        x = x + np.linalg.solve(np.eye(len(x)) - slope, e - x)
    raise ArithmeticError("no periodic steady state: gap %g" % gap)


def waveform(equations, x, start, stop, method, rtol, samples=SAMPLES, step=None):
    """Times, states, node voltages and element currents at equal intervals."""
    f = lambda t, y: equations(t, y)[0]
    result = integrate(f, x, start, stop, method, rtol, dense=True, step=step)
    t = np.linspace(start, stop, samples + 1)
    y = result.sol(t)
    y[:, 0], y[:, -1] = x, result.y[:, -1]
    nodes, currents = {}, {}
    for k in range(samples + 1):
        _, v, i = equations(t[k], y[:, k])
        for store, row in ((nodes, v), (currents, i)):
            for name, value in row.items():
                store.setdefault(name, np.empty(samples + 1))[k] = value
    nodes["0"] = np.zeros(samples + 1)
    return t, y, nodes, currents


def mean(t, y):
    """Mean by Simpson's rule over an even number of equal intervals."""
    w = np.ones(len(t))
    w[1:-1:2], w[2:-1:2] = 4, 2
    return float(np.dot(w, y) / np.sum(w))


def highest(t, y, periodic=True):
    """Maximum, refined by a parabola through three points."""
    k = int(np.argmax(y))
    n = len(y) - 1
    if 0 < k < n:
        a, b, c = y[k - 1], y[k], y[k + 1]
    elif periodic:
        a, b, c = y[n - 1], y[k], y[1]
    else:
        return float(y[k])
    bend = a - 2 * b + c
    return float(b - (a - c) ** 2 / (8 * bend)) if bend < 0 else float(b)
