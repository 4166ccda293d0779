"""Periodic steady state of x' = f(t, x) by shooting with SciPy's integrators, and waveforms over one period."""

import numpy as np
from scipy.integrate import solve_ivp


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
    measure = lambda y: np.max(np.abs(end(y) - y) / (1 + np.abs(y)))
    given, last = slope, np.inf
    for k in range(60):
        e = end(x)
        gap = np.max(np.abs(e - x) / (1 + np.abs(x)))
        if verbose:
            print("   ", k, gap, x)
        if gap < 30 * rtol or (gap < 1e3 * rtol and gap > 0.5 * last):
            return x, slope
        stale = gap > 0.1 * last
        last = gap
        if given is None and (slope is None or stale):
            slope = np.empty((len(x), len(x)))
            for j in range(len(x)):
                h = 1e-5 * (1 + abs(x[j]))
                y = x.copy()
                y[j] += h
                slope[:, j] = (end(y) - e) / h
        step = np.linalg.solve(np.eye(len(x)) - slope, e - x)
        share = 1.0
        while gap > 1e-4 and share > 0.05 and measure(x + share * step) > gap:
            share /= 2  # far off: go only as far as it helps
        x = x + share * step if share > 0.05 else end(e)
    raise ArithmeticError("no periodic steady state: gap %g" % gap)


def waveform(equations, x, start, stop, method, rtol, step, parts=4, breaks=()):
    """Times, node voltages and element currents over the span.

    Sampled at the integrator's own steps, each cut into four (an even number of) equal parts, so that the samples
    crowd where the solution bends or jumps and Simpson's rule applies to each pair of parts. Breaks are instants at
    which a source bends or a switch acts: the integration is taken up anew at each.
    """
    f = lambda t, y: equations(t, y)[0]
    times, states = [np.array([start])], [np.array(x, float)[:, None]]
    for begin, end in zip((start, *breaks), (*breaks, stop)):
        result = integrate(f, states[-1][:, -1], begin, end, method, rtol, dense=True, step=step)
        t = (result.t[:-1, None] + np.diff(result.t)[:, None] * np.arange(parts) / parts).ravel()
        t = np.append(t, end)
        y = result.sol(t)
        y[:, ::parts] = result.y
        times.append(t[1:])
        states.append(y[:, 1:])
    return sampled(equations, np.concatenate(times), np.concatenate(states, axis=1))


def sampled(equations, t, y):
    """Node voltages and element currents at times t with states y."""
    nodes, currents = {}, {}
    for k in range(len(t)):
        _, v, i = equations(t[k], y[:, k])
        for store, row in ((nodes, v), (currents, i)):
            for name, value in row.items():
                store.setdefault(name, np.empty(len(t)))[k] = value
    nodes["0"] = np.zeros(len(t))
    return t, nodes, currents


def integral(t, y):
    """Running integral by Simpson's rule, at every second sample; spacing equal within each pair of intervals."""
    pairs = (t[2::2] - t[:-2:2]) / 6 * (y[:-2:2] + 4 * y[1:-1:2] + y[2::2])
    return np.concatenate(([0.0], np.cumsum(pairs)))


def mean(t, y):
    return float(integral(t, y)[-1] / (t[-1] - t[0]))


def highest(t, y):
    """Maximum, refined by a parabola through three points where the curve is smooth (not at a kink, jump or end)."""
    k = int(np.argmax(y))
    if not 1 < k < len(y) - 2:
        return float(y[k])

    def parabola(k):
        h0, h1 = t[k] - t[k - 1], t[k + 1] - t[k]
        s0, s1 = (y[k] - y[k - 1]) / h0, (y[k + 1] - y[k]) / h1
        return (s1 - s0) / (h0 + h1), (s0 * h1 + s1 * h0) / (h0 + h1)  # half the second derivative, slope
    before, after = parabola(k - 1)[0], parabola(k + 1)[0]
    bend, slope = parabola(k)
    if before >= 0 or after >= 0 or bend < 3 * min(before, after):
        return float(y[k])
    return float(y[k] - slope * slope / (4 * bend))
