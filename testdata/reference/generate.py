"""Writes the reference solutions: NAME.cir and NAME.json for every circuit.

    nice /usr/bin/python3 generate.py [-v] [NAME...]

Each circuit is a function that builds `equations(t, x)`, written by hand from Kirchhoff's laws, which returns the
derivatives of the states, the node voltages and the element currents (from first to second node). This file only
runs them: steady state, two methods, residuals, files. See README.md.
"""

import json
import os
import sys
import time

import numpy as np
import scipy

import circuits
import measure
import period

HERE = os.path.dirname(os.path.abspath(__file__))
FLOOR = {"V": 0.1, "A": 1e-3, "W": 1e-3, "A2s": 1e-6, "": 1e-2}  # below these the error counts absolutely


def difference(rows, others):
    """Largest relative difference of two lists of rows, and where."""
    worst = (0.0, "")
    for (e, q, a, unit), (_, _, b, _) in zip(rows, others):
        worst = max(worst, (abs(a - b) / max(abs(a), FLOOR[unit]), e + " " + q))
    return worst


def steady(c, verbose):
    """Rows of the periodic steady state by two methods, their difference and the residual."""
    equations, x0, cards = c.build(), c.start, c.cards
    f = lambda t, x: equations(t, x)[0]
    tight, second = c.rtol, c.second
    x, slope = period.settle(f, x0, c.period, rtol=tight, verbose=verbose) if len(x0) else (np.zeros(0), None)
    if not len(x0):  # no states: an algebraic circuit
        t, nodes, currents = algebraic(equations, c.period, period.SAMPLES)
        other = algebraic(equations, c.period, period.SAMPLES // 2)
        rows, rows2 = measure.stresses(cards, t, nodes, currents), measure.stresses(cards, *other)
        return rows, difference(rows, rows2), measure.residual(cards, t, nodes, currents)
    t, _, nodes, currents = period.waveform(equations, x, 0, c.period, "LSODA", tight)
    rows = measure.stresses(cards, t, nodes, currents)
    method, rtol = second
    x2, _ = period.settle(f, x, c.period, rtol=rtol, method=method, slope=slope, verbose=verbose)
    step = c.period / 2000 if method == "Radau" else None
    t2, _, nodes2, currents2 = period.waveform(equations, x2, 0, c.period, method, rtol, step=step)
    rows2 = measure.stresses(cards, t2, nodes2, currents2)
    return rows, difference(rows, rows2), measure.residual(cards, t, nodes, currents)


def algebraic(equations, T, samples):
    t = np.linspace(0, T, samples + 1)
    nodes, currents = {"0": np.zeros(samples + 1)}, {}
    for k in range(samples + 1):
        _, v, i = equations(t[k], ())
        for store, row in ((nodes, v), (currents, i)):
            for name, value in row.items():
                store.setdefault(name, np.empty(samples + 1))[k] = value
    return t, nodes, currents


def cold(c, verbose):
    """Surge rows of the switch-on transient by two methods."""
    equations, cards = c.build(), c.cards
    samples = 10000 * c.cycles
    runs = []
    for method, rtol in (("LSODA", c.rtol), c.second):
        t, _, nodes, currents = period.waveform(equations, np.array(c.start, float), 0, c.cycles * c.period,
                                                method, rtol, samples=samples, step=c.period / 400)
        runs.append(measure.surges(cards, t, currents, c.period)[0])
        if len(runs) == 1:
            fault = measure.residual(cards, t, nodes, currents)
            if verbose:
                print("    left out:", measure.surges(cards, t, currents, c.period)[1])
    return runs[0], difference(*runs), fault


def write(c, verbose):
    began = time.time()
    rows, error, fault = (cold if c.mode == "cold-start" else steady)(c, verbose)
    if c.closed_form:
        rows2 = [(e, q, c.closed_form.get((e, q), v), u) for e, q, v, u in rows]
        error = max(error, difference(rows, rows2))
    method, rtol = c.second
    if not len(c.start):
        how = "algebraic: node equations solved at %d instants of a period" % period.SAMPLES
    else:
        how = "scipy solve_ivp LSODA rtol %g, %s; checked with %s rtol %g" % (
            c.rtol, "from rest over %d cycles" % c.cycles if c.mode == "cold-start" else "shooting", method, rtol)
    out = {
        "schema": "railproof-reference/1", "circuit": c.name + ".cir", "method": how,
        "versions": {"python": "%d.%d.%d" % sys.version_info[:3], "scipy": scipy.__version__, "numpy": np.__version__},
        "estimated_error": float("%.1e" % max(error[0], 1e-9)), "law_residual": float("%.1e" % max(fault[0], 1e-12)),
        "mode": c.mode,
    }
    head = json.dumps(out, indent=1)[:-2]
    lines = [json.dumps({"element": e, "quantity": q, "value": float("%.9g" % v), "unit": u}) for e, q, v, u in rows]
    with open(os.path.join(HERE, c.name + ".json"), "w") as file:
        file.write(head + ',\n "expected": [\n  ' + ",\n  ".join(lines) + "\n ]\n}\n")
    with open(os.path.join(HERE, c.name + ".cir"), "w") as file:
        file.write(c.cards.strip() + "\n")
    print("%-34s %5.1f s  error %.1e (%s)  residual %.1e (%s)" % (c.name, time.time() - began, *error, *fault), flush=True)
    if error[0] > 1e-5 or fault[0] > 2e-5:
        print("    ABOVE 1e-5" if error[0] > 1e-5 else "    RESIDUAL")


def main():
    verbose = "-v" in sys.argv
    wanted = [a for a in sys.argv[1:] if a != "-v"]
    for c in circuits.every():
        if not wanted or c.name in wanted:
            write(c, verbose)


if __name__ == "__main__":
    main()
