"""Reads the cards of a reference circuit, holds a solution against them, and takes the stresses from it.

The solution comes from equations written by hand; here every node is held against Kirchhoff's current law and
every element against its own law with the values on its card, so that a slip in the equations cannot pass.
"""

import re

import numpy as np

from laws import GMIN, VT
from period import highest, integral, mean

FACTORS = {"": 1, "f": 1e-15, "p": 1e-12, "n": 1e-9, "u": 1e-6, "m": 1e-3, "k": 1e3, "meg": 1e6, "g": 1e9}


def number(text):
    """A SPICE number: 2200u, 4.7k, 1meg, 1e-6."""
    m = re.fullmatch(r"([-+]?[\d.]+(?:e[-+]?\d+)?)(meg|[fpnumkg]?)", text, re.I)
    return float(m.group(1)) * FACTORS[m.group(2).lower()]


def read(cards):
    """Elements {name: fields}, models {name: parameters} and inline rates {name: ratings} of a circuit file."""
    elements, models, rates = {}, {}, {}
    for line in cards.strip().splitlines()[1:]:
        if line.startswith(".model"):
            name, kind, body = re.fullmatch(r"\.model (\S+) (\w+)\((.*)\)", line).groups()
            models[name] = {k: number(v) for k, v in (p.split("=") for p in body.split())}
            models[name]["polarity"] = kind
        elif line.startswith("*: rate"):
            fields = line.split()
            rates[fields[2]] = {k: number(re.sub("(Ohm|[VA])$", "", v)) for k, v in (p.split("=") for p in fields[3:])}
        elif line[0].isalpha():
            fields = line.split()
            elements[fields[0]] = fields[1:]
    return elements, models, rates


def wave(fields, t):
    """The waveform of SIN(VO VA FREQ TD THETA PHASE), of PULSE(V1 V2 TD TR TF PW PER) or of a constant."""
    m = re.fullmatch(r"(SIN|PULSE)\((.*)\)", " ".join(fields))
    if not m:
        return np.full(len(t), number(fields[-1]))
    p = [number(x) for x in m.group(2).split()] + [0, 0, 0]
    if m.group(1) == "SIN":
        return p[0] + p[1] * np.sin(2 * np.pi * p[2] * t + np.pi / 180 * p[5])
    corners = np.cumsum([0, p[3], p[5], p[4]])
    return np.interp((t - p[2]) % p[6], corners, [p[0], p[1], p[1], p[0]])


def pins(fields, rate, nodes):
    """Voltages in and out over the ground or adjust pin, as magnitudes, the sign, and the set voltage."""
    vset = rate["VOUT"] if "VOUT" in rate else rate["VREF"]
    sign = -1 if fields[3].startswith("79") or vset < 0 else 1
    ground = nodes[fields[1]]
    return sign * (nodes[fields[0]] - ground), sign * (nodes[fields[2]] - ground), sign, abs(vset)


def drain(fields, m, nodes):
    """Level 1 drain current for vds >= 0 with body effect and channel-length modulation; bulk is the fourth node."""
    d, g, s, b = (nodes[n] for n in fields[:4])
    size = {k: number(v) for k, v in (p.split("=") for p in fields[5:])}
    vds, gamma, phi = d - s, m.get("GAMMA", 0), m.get("PHI", 0.6)
    over = np.maximum(g - s - m["VTO"] - gamma * (np.sqrt(phi - np.minimum(b - s, phi)) - phi ** 0.5), 0)
    low = np.minimum(vds, over)
    return m["KP"] * size["W"] / size["L"] * (over - low / 2) * low * (1 + m.get("LAMBDA", 0) * vds) + GMIN * vds


def residual(cards, t, nodes, currents):
    """Largest relative violation of Kirchhoff's current law or of an element's law, with its place."""
    elements, models, rates = read(cards)
    legs, faults = {}, []

    def leg(node, i):
        legs.setdefault(node, []).append(i)

    def fault(name, found, wanted, floor=1e-12):
        scale = max(np.max(np.abs(wanted)), np.max(np.abs(found)), floor)
        faults.append((float(np.max(np.abs(found - wanted)) / scale), name))

    inductances = {e: number(f[2]) for e, f in elements.items() if e[0] == "L"}
    couplings = [(f[0], f[1], number(f[2])) for e, f in elements.items() if e[0] == "K"]
    for e, f in elements.items():
        kind = e[0]
        if kind == "K":
            continue
        if kind == "Q":
            ic, ib = currents[e + ".c"], currents[e + ".b"]
            leg(f[0], ic), leg(f[1], ib), leg(f[2], -ic - ib)
            m = models[f[3]]
            sign = -1 if m["polarity"] == "PNP" else 1
            ebe, ebc = (np.exp(sign * (nodes[f[1]] - nodes[n]) / VT) - 1 for n in (f[2], f[0]))
            fault(e + ".c", sign * ic, m["IS"] * (ebe - ebc - ebc / m["BR"]))
            fault(e + ".b", sign * ib, m["IS"] * (ebe / m["BF"] + ebc / m["BR"]), np.max(np.abs(ic)) * 1e-3)
            continue
        if kind == "M":
            leg(f[0], currents[e]), leg(f[2], -currents[e])
            fault(e, currents[e], drain(f, models[f[4]], nodes))
            continue
        if kind == "X" and "VDO" not in rates[e]:  # shunt reference: cathode, reference, anode
            i, vref = currents[e], nodes[f[1]] - nodes[f[2]]
            leg(f[0], i), leg(f[2], -i)
            on = i > 1e-12
            fault(e, np.where(on, vref, np.maximum(vref, rates[e]["VREF"])), np.full(len(t), rates[e]["VREF"]))
            continue
        if kind == "X":
            into, out = currents[e + ".in"], currents[e + ".out"]
            leg(f[0], into), leg(f[2], out), leg(f[1], -into - out)
            rate = rates[e]
            vin, vout, sign, vset = pins(f, rate, nodes)
            fault(e + " IQ", sign * (into + out), np.full(len(t), rate.get("IQ", rate.get("IADJ"))))
            blocked = np.abs(out) < 1e-9  # output held above its target by a capacitor
            target = np.minimum(vset, vin - rate["VDO"]) + sign * rate.get("Rout", 0) * out
            fault(e + " law", np.where(blocked, 0, vout), np.where(blocked, 0, target))
            continue
        i, v = currents[e], nodes[f[0]] - nodes[f[1]]
        leg(f[0], i), leg(f[1], -i)
        if kind == "R":
            fault(e, i * number(f[2]), v)
        elif kind == "S":
            m = models[f[4]]
            closed = nodes[f[2]] - nodes[f[3]] > m["VT"]
            fault(e, i, v / np.where(closed, m["RON"], m["ROFF"]))
        elif kind == "I":
            fault(e, i, wave(f[2:], t))
        elif kind == "V":
            fault(e, v, wave(f[2:], t))
        elif kind == "C":
            fault(e, integral(t, i) / number(f[2]), (v - v[0])[::2], 1e-3 * np.max(np.abs(v)))
        elif kind == "L":
            flux = inductances[e] * (i - i[0])
            for a, b, k in couplings:
                if e in (a, b):
                    other = b if e == a else a
                    flux = flux + k * np.sqrt(inductances[a] * inductances[b]) * (currents[other] - currents[other][0])
            scale = inductances[e] * np.max(np.abs(i))
            fault(e, integral(t, v), flux[::2], 1e-2 * scale)
        elif kind == "D":
            m = models[f[2]]
            u = v - m.get("RS", 0) * i
            scale = m.get("N", 1) * VT
            law = m["IS"] * (np.exp(u / scale) - 1) + GMIN * u
            if "BV" in m:
                law = law - m.get("IBV", 1e-3) * np.exp(-(u + m["BV"]) / VT)
            fault(e, i, law)
        elif kind == "E":
            fault(e, v, number(f[4]) * (nodes[f[2]] - nodes[f[3]]))
        elif kind == "G":
            fault(e, i, number(f[4]) * (nodes[f[2]] - nodes[f[3]]))
        elif kind == "H":
            fault(e, v, number(f[3]) * currents[f[2]])
        elif kind == "F":
            fault(e, i, number(f[3]) * currents[f[2]])
    for node, parts in legs.items():
        if node != "0":
            fault("node " + node, sum(parts), np.zeros(len(t)), max(np.max(np.abs(p)) for p in parts) + 1e-12)
    return max(faults)


def stresses(cards, t, nodes, currents):
    """Rows (element, quantity, value, unit) of one period in the order of the cards, then of the nodes."""
    elements, _, rates = read(cards)
    rows = []

    def rms(y):
        return mean(t, y * y) ** 0.5

    def low(y):
        return -highest(t, -y)

    def add(e, quantity, value, unit):
        rows.append((e, quantity, value, unit))

    def flow(e, v, i):
        add(e, "rms-current", rms(i), "A")
        add(e, "mean-current", mean(t, i), "A")
        add(e, "peak-current", highest(t, np.abs(i)), "A")
        add(e, "min-current", low(i), "A")
        add(e, "mean-power", mean(t, v * i), "W")

    for e, f in elements.items():
        kind = e[0]
        if kind == "K":
            continue
        if kind == "X":
            if "VDO" not in rates[e]:
                v, i = nodes[f[0]] - nodes[f[2]], currents[e]
                add(e, "mean-power", mean(t, v * i), "W")
                add(e, "max-input-voltage", highest(t, v), "V")
                add(e, "max-output-current", highest(t, i), "A")
                add(e, "min-current", low(i), "A")
                continue
            vin, vout, sign, vset = pins(f, rates[e], nodes)
            iin, iout = sign * currents[e + ".in"], -sign * currents[e + ".out"]
            add(e, "min-differential", low(vin - vout), "V")
            add(e, "min-headroom", low(vin) - vset - rates[e]["VDO"], "V")
            add(e, "max-input-voltage", highest(t, vin), "V")
            add(e, "mean-power", mean(t, vin * iin - vout * iout), "W")
            add(e, "max-output-current", highest(t, iout), "A")
            continue
        if kind == "Q":
            ic, ib = currents[e + ".c"], currents[e + ".b"]
            vce, vbe = nodes[f[0]] - nodes[f[2]], nodes[f[1]] - nodes[f[2]]
            add(e, "max-vce", highest(t, np.abs(vce)), "V")
            add(e, "peak-current", highest(t, np.abs(ic)), "A")
            add(e, "mean-power", mean(t, vce * ic + vbe * ib), "W")
            continue
        v, i = nodes[f[0]] - nodes[f[1]], currents[e] if e in currents else None
        if kind == "M":
            v = nodes[f[0]] - nodes[f[2]]
            add(e, "max-vds", highest(t, np.abs(v)), "V")
            add(e, "peak-current", highest(t, np.abs(i)), "A")
            add(e, "mean-power", mean(t, v * i), "W")
        elif kind == "D":
            add(e, "peak-reverse-voltage", max(0.0, highest(t, -v)), "V")
            add(e, "mean-current", mean(t, i), "A")
            add(e, "rms-current", rms(i), "A")
            add(e, "peak-current", highest(t, np.abs(i)), "A")
            add(e, "mean-power", mean(t, v * i), "W")
        elif kind == "C":
            add(e, "max-voltage", highest(t, v), "V")
            add(e, "min-voltage", low(v), "V")
            add(e, "mean-voltage", mean(t, v), "V")
            add(e, "ripple-current-rms", rms(i), "A")
        elif kind in "RS":
            add(e, "mean-power", mean(t, v * i), "W")
            add(e, "peak-voltage", highest(t, np.abs(v)), "V")
            add(e, "rms-current", rms(i), "A")
        else:
            flow(e, v, i)
    for n in dict.fromkeys(n for e, f in elements.items() for n in terminals(e, f)):
        if n == "0":
            continue
        v = nodes[n]
        m = mean(t, v)
        ripple = rms(v - m)
        add("node:" + n, "mean-voltage", m, "V")
        add("node:" + n, "min-voltage", low(v), "V")
        add("node:" + n, "max-voltage", highest(t, v), "V")
        add("node:" + n, "ripple-rms", ripple, "V")
        add("node:" + n, "ripple-peak-to-peak", highest(t, v) + highest(t, -v), "V")
        if abs(m) > 1e-2 * np.max(np.abs(v)):
            add("node:" + n, "ripple-factor", ripple / abs(m), "")
    return rows


def terminals(element, fields):
    """Names of the nodes among the fields of a card."""
    return fields[:{"Q": 3, "M": 4, "X": 3, "K": 0, "E": 4, "G": 4, "S": 4}.get(element[0], 2)]


def surges(cards, t, currents, T):
    """Surge rows of the diodes from a switch-on transient that starts at t = 0, in whole line cycles.

    surge-current is the largest current, surge-i2t the largest integral of i^2 over one conduction pulse.
    Two readings of the pulse are compared: the stretch between zeros of the current (below 1e-4 of the peak), and
    the line cycle counted from switch-on. Where they differ by more than 1e-3 the I2t row is left out.
    """
    elements, _, _ = read(cards)
    rows, left_out = [], []
    even = t[::2]
    starts = [int(np.searchsorted(even, k * T - 1e-9)) for k in range(int(round(t[-1] / T)) + 1)]
    for e, f in elements.items():
        if e[0] != "D":
            continue
        i = np.maximum(currents[e], 0)
        peak = highest(t, i)
        rows.append((e, "surge-current", peak, "A"))
        total = integral(t, i * i)
        cycle = max(total[b] - total[a] for a, b in zip(starts, starts[1:]))
        on = i[::2] > 1e-4 * peak
        bounds = [0, *np.flatnonzero(np.diff(on.astype(int))), len(even) - 1]
        pulse = max(total[b] - total[a] for a, b in zip(bounds, bounds[1:]))
        if abs(pulse - cycle) < 1e-3 * cycle:
            rows.append((e, "surge-i2t", pulse, "A2s"))
        else:
            left_out.append("%s pulse %.6g cycle %.6g" % (e, pulse, cycle))
    return rows, left_out
