"""Writes rectifier-curves.json: the reservoir rectifier with an ideal diode, own calculation.

    nice /usr/bin/python3 rectifier_curves.py

Sine of unit crest behind Rs, ideal diode(s), reservoir C with load R, angle x = w t. While a diode conducts
    wCR v' = (|sin x| - v)/s - v,   s = Rs/R,
a linear equation solved in closed form; while it blocks v = v2 exp(-(x - x2)/wCR). The conduction begins at x1 where
sin x1 = v and ends at x2 where the current (sin x - v)/s returns to zero; x1 closes the period. n = 1: half-wave,
n = 2: full-wave. Three checks: the same equation integrated by solve_ivp; the limit of a large reservoir,
tan(h) - h = (pi/n) s with Vdc = cos(h); charge balance.
"""

import json
import os
import sys
from math import atan2, cos, exp, pi, sin, sqrt, tan

import numpy as np
import scipy
from scipy.integrate import simpson, solve_ivp
from scipy.optimize import brentq

WCR = (1, 2, 5, 10, 20, 50, 100, 1000)
RATIO = (0.001, 0.005, 0.01, 0.02, 0.05, 0.1, 0.3)


def conduction(n, wcr, s):
    """x1, x2 and the voltage as a function of x in between."""
    rate = (1 / s + 1) / wcr  # v' = -rate v + sin x/(s wcr)
    gain = 1 / (s * wcr) / sqrt(rate * rate + 1)
    lag = atan2(1, rate)

    def voltage(x1):
        free = sin(x1) - gain * sin(x1 - lag)
        return lambda x: gain * np.sin(x - lag) + free * np.exp(-rate * (x - x1))

    def end(x1):
        v = voltage(x1)
        grid = np.linspace(x1, pi, 4001)[1:]
        after = grid[np.flatnonzero(np.sin(grid) - v(grid) < 0)[0]]
        before = after - (pi - x1) / 4000
        return brentq(lambda x: sin(x) - float(v(x)), before, after, xtol=1e-15)

    def closes(x1):
        x2 = end(x1)
        return sin(x2) * exp(-(x1 + 2 * pi / n - x2) / wcr) - sin(x1)
    low = 1e-9
    high = pi / 2 - 1e-6
    x1 = brentq(closes, low, high, xtol=1e-14)
    return x1, end(x1), voltage(x1)


def row(n, wcr, s):
    """One row; lengths of integration in x, currents in units of 1/R."""
    x1, x2, v = conduction(n, wcr, s)
    span = 2 * pi / n
    x = np.linspace(x1, x2, 4001)
    i = (np.sin(x) - v(x)) / s
    y = np.linspace(x2, x1 + span, 4001)
    u = sin(x2) * np.exp(-(y - x2) / wcr)
    dc = (simpson(v(x), x=x) + simpson(u, x=y)) / span
    square = simpson(i * i, x=x) / span
    k = int(np.argmax(v(x)))
    peak_v = brentq(lambda z: (sin(z) - float(v(z))) / s - float(v(z)), x[max(k - 2, 0)], x[min(k + 2, 4000)])
    top = float(v(peak_v))
    net = lambda z: (sin(z) - float(v(z))) / s - float(v(z))  # the voltage still falls until the source carries the load
    k = int(np.flatnonzero((np.sin(x) - v(x)) / s > v(x))[0])
    bottom = float(v(brentq(net, x[k - 1], x[k])))
    k = int(np.argmax(i))
    slope = lambda z: cos(z) - ((sin(z) - float(v(z))) / s - float(v(z))) / wcr
    a, b = x[max(k - 2, 0)], x[min(k + 2, 4000)]
    at = brentq(slope, a, b) if slope(a) * slope(b) < 0 else x[k]
    peak_i = (sin(at) - float(v(at))) / s
    cap = sqrt(simpson((i - v(x)) ** 2, x=x) / span + simpson(u * u, x=y) / span)
    charge = abs(simpson(i, x=x) / span - dc) / dc
    # Vpp f C/Idc with f = n w/(2 pi): (top - bottom) wCR n/(2 pi)/Idc
    result = {"n": n, "wCR": wcr, "Rs/R": s, "Vdc/Vm": dc, "Irms/Idc": sqrt(square) / dc, "Ipk/Idc": peak_i / dc,
              "Icap/Idc": cap / dc, "VppfC/Idc": (top - bottom) * wcr * n / (2 * pi) / dc,
              "conduction_deg": (x2 - x1) * 180 / pi}
    return result, charge


def again(n, wcr, s):
    """Vdc and Irms/Idc with solve_ivp from x1 over one period of the ripple."""
    x1, _, _ = conduction(n, wcr, s)
    span = 2 * pi / n

    def f(x, y):
        e = abs(sin(x)) if n == 2 else sin(x)
        i = max(e - y[0], 0.0) / s
        return [(i - y[0]) / wcr, y[0], i * i]
    end = solve_ivp(f, (x1, x1 + span), [sin(x1), 0, 0], method="LSODA", rtol=1e-10, atol=1e-13, max_step=0.01).y[:, -1]
    dc = end[1] / span
    return dc, sqrt(end[2] / span) / dc, abs(end[0] - sin(x1))


def main():
    rows, worst, charge = [], 0.0, 0.0
    for n in (1, 2):
        for wcr in WCR:
            for s in RATIO:
                r, q = row(n, wcr, s)
                dc, rms, gap = again(n, wcr, s)
                worst = max(worst, abs(dc / r["Vdc/Vm"] - 1), abs(rms / r["Irms/Idc"] - 1), gap)
                charge = max(charge, q)
                rows.append(json.dumps({k: float("%.8g" % v) if isinstance(v, float) else v for k, v in r.items()}))
    limit = 0.0
    for n in (1, 2):
        for s in RATIO:
            h = brentq(lambda h: tan(h) - h - pi / n * s, 1e-6, pi / 2 - 1e-6)
            limit = max(limit, abs(row(n, 1e6, s)[0]["Vdc/Vm"] - cos(h)))
    head = {"schema": "railproof-curves/1", "source": "own calculation", "method": "closed form of each interval, "
            "its ends by brentq; checked with solve_ivp LSODA rtol 1e-10 and the limit of a large reservoir",
            "versions": {"python": "%d.%d.%d" % sys.version_info[:3], "scipy": scipy.__version__, "numpy": np.__version__},
            "estimated_error": float("%.1e" % worst), "charge_balance": float("%.1e" % charge),
            "large_reservoir_limit": float("%.1e" % limit),
            "columns": "f = n x line frequency; Irms, Ipk: current of the source (of the winding under a bridge)"}
    path = os.path.join(os.path.dirname(os.path.abspath(__file__)), "rectifier-curves.json")
    with open(path, "w") as file:
        file.write(json.dumps(head, indent=1)[:-2] + ',\n "rows": [\n  ' + ",\n  ".join(rows) + "\n ]\n}\n")
    print(len(rows), "rows, error %.1e, charge %.1e, limit %.1e" % (worst, charge, limit))


if __name__ == "__main__":
    main()
