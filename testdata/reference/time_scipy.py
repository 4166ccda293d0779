"""Times SciPy's stiff methods on a bridge with reservoir, from rest to the periodic steady state.

    /usr/bin/python3 time_scipy.py [--json]

The circuit is bridge-timing.cir: C v' = (f + r) - v/R with the algebraic part solved inside by Newton's method from the
last solution (two or three iterations), in plain Python floats, no dictionaries. Two ways to write that part:
    nodal    the two AC nodes and four diodes, as the netlist has them;
    reduced  one unknown, by the symmetry of four equal diodes (a trick that only this circuit allows).
Two ways to the steady state:
    plain     period after period from an empty reservoir until a period changes the state by less than 0.01 %;
    shooting  a secant on the one state, from the open-circuit crest.
Every method runs at the fastest of a few tolerances that keep mean, trough and crest within 0.1 % and peak and rms current
within 0.5 % of a tight solution; the best of five runs counts. The last waveform, from which stresses would be read,
is part of the time.
"""

import json
import sys
import time
from math import exp, pi, sin

import numpy as np
from scipy.integrate import solve_ivp

PEAK, RW, C, R, T = 21.2, 0.8, 2200e-6, 33.0, 0.02
IS, SCALE, GMIN = 5e-9, 1.8 * 1.380649e-23 * 300.15 / 1.602176634e-19, 1e-12
last = [0.0, 0.0]


def junction(v):
    e = IS * exp(v / SCALE if v < 40 * SCALE else 40.0)
    return e - IS + GMIN * v, e / SCALE + GMIN


def reduced(t, p):
    """Current into the DC side and the winding current, by one unknown."""
    e = PEAK * sin(2 * pi * 50 * t)
    w = last[0]
    for _ in range(60):
        f, gf = junction((w - p) / 2)
        r, gr = junction((-w - p) / 2)
        step = (w + RW * (f - r) - e) / (1 + RW * (gf + gr) / 2)
        w -= min(max(step, -1.0), 1.0)
        if abs(step) < 1e-10:
            break
    last[0] = w
    return f + r, f - r


def nodal(t, p):
    """The same by two unknowns, the AC nodes a and b, and four diodes."""
    e = PEAK * sin(2 * pi * 50 * t)
    a, b = last
    g = 1 / RW
    for _ in range(60):
        i1, g1 = junction(a - p)
        i2, g2 = junction(b - p)
        i3, g3 = junction(-a)
        i4, g4 = junction(-b)
        i = (e - a + b) * g
        ra, rb = i1 - i3 - i, i2 - i4 + i
        ja, jb = g1 + g3 + g, g2 + g4 + g
        det = ja * jb - g * g
        da, db = (ra * jb + rb * g) / det, (rb * ja + ra * g) / det
        a -= min(max(da, -1.0), 1.0)
        b -= min(max(db, -1.0), 1.0)
        if abs(da) + abs(db) < 1e-10:
            break
    last[:] = a, b
    return i1 + i2, i


def period(law, v, method, rtol, dense=False):
    last[:] = [0.0, 0.0] if law is reduced else [v / 2, v / 2]

    def slope(t, x):
        return [(law(t, x[0])[0] - x[0] / R) / C]
    return solve_ivp(slope, (0, T), [v], method=method, rtol=rtol, atol=rtol * 1e-3, max_step=T / 20, dense_output=dense)


def settle(law, way, method, rtol):
    """Waveform of the last period and the number of periods integrated."""
    if way == "plain":
        v = 0.0
        for periods in range(1, 60):
            result = period(law, v, method, rtol, dense=True)
            new = result.y[0, -1]
            if abs(new - v) < 1e-4 * abs(new):
                return result, periods
            v = new
        raise ArithmeticError("not settled")
    v, h = PEAK, 0.05
    end = period(law, v, method, rtol).y[0, -1]
    m = (end - period(law, v - h, method, rtol).y[0, -1]) / h
    for periods in range(3, 40):
        before, v = v, v + (end - v) / (1 - m)
        result = period(law, v, method, rtol, dense=True)
        new = result.y[0, -1]
        if abs(new - v) < 1e-4 * abs(v):
            return result, periods
        m, end = (new - end) / (v - before), new
    raise ArithmeticError("not settled")


def figures(law, result):
    """Mean, trough and crest, peak and rms winding current at 512 points of the period."""
    t = np.linspace(0, T, 513)
    v = result.sol(t)[0]
    i = np.array([law(a, b)[1] for a, b in zip(t, v)])
    return np.array([np.mean(v[:-1]), np.min(v), np.max(v), np.max(np.abs(i)), np.sqrt(np.mean(i[:-1] ** 2))])


def main():
    exact = figures(reduced, settle(reduced, "shooting", "LSODA", 1e-10)[0])
    limits = np.array([1e-3, 1e-3, 1e-3, 5e-3, 5e-3])
    rows = []
    for law in (nodal, reduced):
        for way in ("plain", "shooting"):
            for method in ("LSODA", "BDF", "Radau"):
                fastest = None
                for rtol in (1e-2, 1e-3, 1e-4, 1e-5, 1e-6, 1e-7):
                    try:
                        error = np.abs(figures(law, settle(law, way, method, rtol)[0]) / exact - 1)
                    except ArithmeticError:  # too loose to repeat from period to period
                        continue
                    if np.any(error >= limits):
                        continue
                    best = np.inf
                    for _ in range(5):
                        began = time.perf_counter()
                        _, periods = settle(law, way, method, rtol)
                        best = min(best, time.perf_counter() - began)
                    if fastest is None or best < fastest["seconds"]:
                        fastest = {"equations": law.__name__, "way": way, "method": method, "rtol": rtol, "periods": periods,
                                   "seconds": round(best, 6), "worst_error": float("%.1e" % np.max(error))}
                rows.append(fastest)
    fastest = {k: min((r for r in rows if k in (r["equations"] + "-" + r["way"])), key=lambda r: r["seconds"])["seconds"]
               for k in ("nodal-plain", "nodal-shooting", "reduced-plain", "reduced-shooting")}
    if "--json" in sys.argv:
        print(json.dumps({"circuit": "bridge-timing.cir", "mean": exact[0], "trough": exact[1], "crest": exact[2], "peak": exact[3],
                          "rms": exact[4], "rows": rows, "fastest_seconds": fastest}))
        return
    for r in rows:
        print("%-8s %-9s %-6s rtol %.0e  %2d periods  %.4f s (%.1f ms a period)  worst error %.1e" % (
            r["equations"], r["way"], r["method"], r["rtol"], r["periods"], r["seconds"],
            1e3 * r["seconds"] / r["periods"], r["worst_error"]))
    print("fastest:", ", ".join("%s %.4f s" % f for f in fastest.items()))


if __name__ == "__main__":
    main()
