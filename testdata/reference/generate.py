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

sys.dont_write_bytecode = True

import circuits  # noqa: E402
import measure  # noqa: E402
import period  # noqa: E402

HERE = os.path.dirname(os.path.abspath(__file__))
NEAR_ZERO = 1e-3  # below this part of the largest value of its unit in the circuit an error counts absolutely


def difference(rows, others):
    """Largest relative difference of two lists of rows, and where."""
    largest = {}
    for _, _, value, unit in rows:
        largest[unit] = max(largest.get(unit, 1e-2 if unit == "" else 1e-9), abs(value))
    worst = (0.0, "")
    for (e, q, a, unit), (_, _, b, _) in zip(rows, others):
        worst = max(worst, (abs(a - b) / max(abs(a), NEAR_ZERO * largest[unit]), e + " " + q))
    return worst


def steady(c, verbose):
    """Rows of the periodic steady state by two methods, their difference and the residual."""
    equations, x0, cards = c.build(), c.start, c.cards
    f = lambda t, x: equations(t, x)[0]
    tight, second = c.rtol, c.second
    x, slope = period.settle(f, x0, c.period, rtol=tight, plain=c.plain, verbose=verbose) if len(x0) else (np.zeros(0), None)
    if not len(x0):  # no states: an algebraic circuit
        rows, rows2 = [], []
        for samples, out in ((c.instants, rows), (c.instants // 2, rows2)):
            t, nodes, currents = period.sampled(equations, np.linspace(0, c.period, samples + 1), np.empty((0, samples + 1)))
            out += measure.stresses(cards, t, nodes, currents)
        return rows, difference(rows, rows2), measure.residual(cards, t, nodes, currents)
    t, nodes, currents = period.waveform(equations, x, 0, c.period, "LSODA", tight, c.period / c.steps, breaks=c.breaks)
    rows = measure.stresses(cards, t, nodes, currents)
    method, rtol = second
    x2, _ = period.settle(f, x, c.period, rtol=rtol, method=method, slope=slope, verbose=verbose)
    t2, nodes2, currents2 = period.waveform(equations, x2, 0, c.period, method, rtol, c.period / (2 * c.steps),
                                             breaks=c.breaks)
    rows2 = measure.stresses(cards, t2, nodes2, currents2)
    return rows, difference(rows, rows2), measure.residual(cards, t, nodes, currents)


def cold(c, verbose):
    """Surge rows of the switch-on transient by two methods."""
    equations, cards = c.build(), c.cards
    runs = []
    for method, rtol in (("LSODA", c.rtol), c.second):
        t, nodes, currents = period.waveform(equations, np.array(c.start, float), 0, c.cycles * c.period,
                                             method, rtol, c.period / 1000)
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
        how = "algebraic: node equations solved at %d instants of a period" % c.instants
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
