"""Corner cases: no leakage and no resistance, undamped leakage, a tiny choke load, square waves, a feedback loop."""

from math import cos, sin, sqrt

import numpy as np

import period
from circuits import circuit
from filters import choke_cards, choke_input
from laws import Bridge, Diode, bipolar, root
from rectifiers import DR, DR_CARD, W50, fed_diode
from shunts import front
from variants import BRIDGE_CARDS, bridge_currents, bridge_nodes


@circuit("transformer-k1-lossless-primary", f"""Half-wave on a transformer without leakage and without primary resistance
VP P 0 SIN(0 325 50)
LP P 0 10
LS X 0 25m
K1 LP LS 1
RS X A 0.4
D1 A OUT DR
C1 OUT 0 1000u
RL OUT 0 68
{DR_CARD}
.end""", [13.0])
def transformer_k1_lossless_primary():
    """u = n e whatever the load. The primary current is im + n js with LP im' = e: im = m0 - 325/(w LP) cos(w t).

    m0 is free; the netlist does not say. It is chosen so that the primary current has no mean: m0 = -n mean(js).
    """
    d = Diode(**DR)
    n = sqrt(25e-3 / 10)

    def equations(t, x, m0=0.0):
        v, e = x[0], 325 * sin(W50 * t)
        js, a = fed_diode(d, n * e, 0.4, v)
        ip = m0 - 325 / (W50 * 10) * cos(W50 * t) + n * js
        ic = js - v / 68
        return ([ic / 1000e-6], {"P": e, "X": n * e, "A": a, "OUT": v},
                {"VP": -ip, "LP": ip, "LS": -js, "RS": js, "D1": js, "C1": ic, "RL": v / 68})
    x, _ = period.settle(lambda t, x: equations(t, x)[0], [13.0], 0.02)
    t, _, currents = period.waveform(equations, x, 0, 0.02, "LSODA", 1e-10, 2e-5)
    m0 = -n * period.mean(t, currents["RS"])
    return lambda t, x: equations(t, x, m0)


@circuit("leakage-undamped", f"""Bridge fed through leakage inductance, nothing across the winding
V1 S B SIN(0 24 50)
LW S X 1.5m
RW X A 0.4
{BRIDGE_CARDS}
C1 OUT 0 3300u
RL OUT 0 12
{DR_CARD}
.end""", [0.0, 19.0])
def leakage_undamped():
    """As leakage-reservoir; a conductance of 1 nS that the netlist does not have (24 nA) keeps the time constant at 1.5 ps."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        i, p = x
        e = 24 * sin(W50 * t)

        def residual(w):
            f, r, gf, gr = b(w, p)
            return w * 1e-9 + f - r - i, 1e-9 + (gf + gr) / 2
        w = root(residual, -30, 30)
        f, r, _, _ = b(w, p)
        ic = f + r - p / 12
        return ([(e - w - 0.4 * i) / 1.5e-3, ic / 3300e-6],
                {**bridge_nodes(e, w, p), "X": (p + w) / 2 + 0.4 * i, "OUT": p},
                {**bridge_currents(f, r), "V1": -i, "LW": i, "RW": i, "C1": ic, "RL": p / 12})
    return equations


@circuit("choke-input-tiny-load", choke_cards("Transmitter bench rail with a bleeder only: the choke barely conducts",
                                              48, 50, "300m", 3, "470u", "33k"), [46.0, 46.0])
def choke_input_tiny_load():
    """The output climbs to the crest."""
    return choke_input(48, W50, 0.3, 3, 470e-6, 33e3)


@circuit("square-wave", """Converter winding: half-wave on a square wave of 20 kHz with sloping edges
V1 S 0 PULSE(-15 15 0 1u 1u 24u 50u)
RW S A 0.3
D1 A OUT DF
C1 OUT 0 4.7u
RL OUT 0 33
.model DF D(IS=20n N=1.4 RS=0.03)
.end""", [13.0], period=50e-6, steps=5000)
def square_wave():
    """C v' = i - v/R behind a trapezoidal source."""
    d = Diode(IS=20e-9, N=1.4, RS=0.03)

    def wave(t):
        t = t % 50e-6
        if t < 1e-6:
            return -15 + 30 * t / 1e-6
        if t < 25e-6:
            return 15.0
        return max(-15.0, 15 - 30 * (t - 25e-6) / 1e-6)

    def equations(t, x):
        v, e = x[0], wave(t)
        i, a = fed_diode(d, e, 0.3, v)
        ic = i - v / 33
        return [ic / 4.7e-6], {"S": e, "A": a, "OUT": v}, {"V1": -i, "RW": i, "D1": i, "C1": ic, "RL": v / 33}
    return equations


@circuit("series-pass-feedback", f"""Bench rail: pass transistor and error amplifier with a zener in its emitter
V1 S B SIN(0 25 50)
RW S A 0.8
{BRIDGE_CARDS.replace("OUT", "P")}
C1 P 0 2200u
RB P N 1.2k
Q1 P N OUT QA
Q2 N F E QA
DZ 0 E DZ6
RE OUT E 560
R1 OUT F 1.8k
R2 F 0 2.2k
C2 OUT 0 47u
RL OUT 0 60
{DR_CARD}
.model DZ6 D(IS=10f N=1 RS=3 BV=5.6 IBV=5m)
.model QA NPN(IS=10f BF=90 BR=2)
.end""", [21.0, 11.7], second=("LSODA", 1e-8))
def series_pass_feedback():
    """The loop of dc-error-amplifier with o on a capacitor: three node equations for n, f and e."""
    br, z = Bridge(Diode(**DR)), Diode(IS=1e-14, N=1, RS=3, BV=5.6, IBV=5e-3)
    q = dict(IS=1e-14, BF=90, BR=2)
    last = np.array([12.4, 6.4, 5.7])

    def currents_out(y, p, o):
        n, f, e = y
        (c1, b1), (c2, b2) = bipolar(n - o, n - p, **q), bipolar(f - e, f - n, **q)
        return np.array([b1 + c2 - (p - n) / 1200, f / 2200 + b2 - (o - f) / 1800, -z(-e)[0] - (o - e) / 560 - c2 - b2])

    def loop(p, o):
        """Newton's method from the last solution, steps held to 0.1 V."""
        y = last.copy()
        for _ in range(200):
            r = currents_out(y, p, o)
            matrix = np.stack([(currents_out(y + d, p, o) - r) / 1e-7 for d in 1e-7 * np.eye(3)], axis=1)
            step = np.linalg.solve(matrix, r)
            size = np.max(np.abs(step))
            y = y - step * min(1.0, 0.1 / size)
            if size < 1e-12:
                break
        last[:] = y
        return y

    def equations(t, x):
        p, o = x
        n, f, e = loop(p, o)
        (c1, b1), (c2, b2) = bipolar(n - o, n - p, **q), bipolar(f - e, f - n, **q)
        nodes, currents, j = front(t, p, 25, 0.8, br)
        ir = (p - n) / 1200
        i1, i2 = j - ir - c1, c1 + b1 - (o - e) / 560 - (o - f) / 1800 - o / 60
        return ([i1 / 2200e-6, i2 / 47e-6], {**nodes, "P": p, "N": n, "OUT": o, "F": f, "E": e},
                {**currents, "C1": i1, "RB": ir, "Q1.c": c1, "Q1.b": b1, "Q2.c": c2, "Q2.b": b2, "DZ": z(-e)[0],
                 "RE": (o - e) / 560, "R1": (o - f) / 1800, "R2": f / 2200, "C2": i2, "RL": o / 60})
    return equations


@circuit("bridge-hum-pickup", f"""Bridge whose winding carries an offset from a half-wave load elsewhere
V1 S B SIN(1.5 20 50)
RW S A 0.7
{BRIDGE_CARDS}
C1 OUT 0 1000u
RL OUT 0 47
{DR_CARD}
.end""", [17.0])
def bridge_hum_pickup():
    """Bridge with winding resistance on a sine with an offset: unequal half-cycles, mean winding current not zero."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p, e = x[0], 1.5 + 20 * sin(W50 * t)
        w, f, r = b.fed(e, 0.7, p)
        ic = f + r - p / 47
        return ([ic / 1000e-6], {**bridge_nodes(e, w, p), "OUT": p}, {**bridge_currents(f, r), "C1": ic, "RL": p / 47})
    return equations


@circuit("constant-power-load", f"""Converter input: a load of constant power behind a bridge
V1 S B SIN(0 28 50)
RW S A 0.7
{BRIDGE_CARDS}
C1 OUT 0 2200u
B1 OUT 0 I=15/max(V(OUT),5)
{DR_CARD}
.end""", [25.0])
def constant_power_load():
    """C p' = f + r - 15 W/p."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p = x[0]
        nodes, currents, j = front(t, p, 28, 0.7, b)
        i = 15 / max(p, 5)
        return [(j - i) / 2200e-6], {**nodes, "OUT": p}, {**currents, "C1": j - i, "B1": i}
    return equations
