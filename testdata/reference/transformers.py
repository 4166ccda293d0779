"""Transformers as coupled inductors and as controlled sources, and linear circuits with closed forms."""

from cmath import phase
from math import cos, pi, sin, sqrt

from circuits import circuit
from laws import Bridge, Diode, root
from rectifiers import DR, DR_CARD, W50, fed_diode
from variants import BRIDGE_CARDS


@circuit("transformer-k0998", f"""Bench supply with its transformer drawn as coupled inductors
VP S 0 SIN(0 325 50)
RP S P 18
LP P 0 6
LS X B 30m
K1 LP LS 0.998
RS X A 0.3
RD A B 10k
{BRIDGE_CARDS}
C1 OUT 0 2200u
RL OUT 0 30
{DR_CARD}
.end""", [0.0, 0.0, 20.0])
def transformer_k0998():
    """LP i' + M s' = e - RP i and M i' + LS s' = u for the currents into the dotted ends i and s = -is.

    u = w + RS is is the voltage of LS; the secondary delivers is = w/RD + f - r into the bridge.
    """
    b = Bridge(Diode(**DR))
    lp, ls = 6.0, 0.03
    m = 0.998 * sqrt(lp * ls)
    det = lp * ls - m * m

    def equations(t, x):
        ip, js, p = x  # js delivered by the secondary
        e = 325 * sin(W50 * t)

        def residual(w):
            f, r, gf, gr = b(w, p)
            return w / 1e4 + f - r - js, 1e-4 + (gf + gr) / 2
        w = root(residual, -40, 40)
        f, r, _, _ = b(w, p)
        v1, v2 = e - 18 * ip, w + 0.3 * js
        ic = f + r - p / 30
        nb = (p - w) / 2
        return ([(ls * v1 - m * v2) / det, -(lp * v2 - m * v1) / det, ic / 2200e-6],
                {"S": e, "P": v1, "X": nb + v2, "A": nb + w, "B": nb, "OUT": p},
                {"VP": -ip, "RP": ip, "LP": ip, "LS": -js, "RS": js, "RD": w / 1e4,
                 "D1": f, "D2": r, "D3": r, "D4": f, "C1": ic, "RL": p / 30})
    return equations


@circuit("transformer-half-wave", f"""Doorbell supply: half-wave on a coupled transformer, direct current in the winding
VP S 0 SIN(0 170 60)
RP S P 25
LP P 0 4
LS X 0 40m
K1 LP LS 0.995
RS X A 0.8
RD A 0 10k
D1 A OUT DR
C1 OUT 0 1000u
RL OUT 0 120
{DR_CARD}
.end""", [0.0, 0.0, 14.0], period=1 / 60)
def transformer_half_wave():
    """As above with one diode: js = w/RD + f(w - v)."""
    d = Diode(**DR)
    lp, ls = 4.0, 0.04
    m = 0.995 * sqrt(lp * ls)
    det = lp * ls - m * m

    def equations(t, x):
        ip, js, v = x
        e = 170 * sin(2 * pi * 60 * t)

        def residual(w):
            i, g = d(w - v)
            return w / 1e4 + i - js, 1e-4 + g
        w = root(residual, -40, 40)
        i, _ = d(w - v)
        v1, v2 = e - 25 * ip, w + 0.8 * js
        ic = i - v / 120
        return ([(ls * v1 - m * v2) / det, -(lp * v2 - m * v1) / det, ic / 1000e-6],
                {"S": e, "P": v1, "X": v2, "A": w, "OUT": v},
                {"VP": -ip, "RP": ip, "LP": ip, "LS": -js, "RS": js, "RD": w / 1e4, "D1": i, "C1": ic, "RL": v / 120})
    return equations


@circuit("transformer-k1", f"""Lab supply with a transformer without leakage, K = 1
VP S 0 SIN(0 325 50)
RP S P 20
LP P 0 8
LS X B 32m
K1 LP LS 1
RS X A 0.2
{BRIDGE_CARDS}
C1 OUT 0 3300u
RL OUT 0 25
{DR_CARD}
.end""", [0.0, 19.0])
def transformer_k1():
    """LP LS = M^2, ratio n = sqrt(LS/LP) = 1/15.81: u = n v1, magnetising current im = ip - n js, LP im' = v1.

    w + RS js = n (e - RP (im + n js)) with js = f - r gives w.
    """
    b = Bridge(Diode(**DR))
    n = sqrt(32e-3 / 8)
    seen = 0.2 + n * n * 20

    def equations(t, x):
        im, p = x
        e = 325 * sin(W50 * t)
        w, f, r = b.fed(n * (e - 20 * im), seen, p)
        js = f - r
        ip = im + n * js
        v1 = e - 20 * ip
        ic = f + r - p / 25
        nb = (p - w) / 2
        return ([v1 / 8, ic / 3300e-6], {"S": e, "P": v1, "X": nb + n * v1, "A": nb + w, "B": nb, "OUT": p},
                {"VP": -ip, "RP": ip, "LP": ip, "LS": -js, "RS": js, "D1": f, "D2": r, "D3": r, "D4": f,
                 "C1": ic, "RL": p / 25})
    return equations


@circuit("transformer-controlled", f"""Charger with an ideal transformer from two controlled sources
VP S 0 SIN(0 325 50)
RP S P 22
E1 X B P 0 0.05
F1 P 0 VS 0.05
VS X Y 0
RS Y A 0.25
{BRIDGE_CARDS}
C1 OUT 0 2200u
RL OUT 0 22
{DR_CARD}
.end""", [14.0])
def transformer_controlled():
    """Ratio n = 0.05: secondary emf n v1, primary current n js."""
    b = Bridge(Diode(**DR))
    n = 0.05

    def equations(t, x):
        p = x[0]
        e = 325 * sin(W50 * t)
        w, f, r = b.fed(n * e, 0.25 + n * n * 22, p)
        js = f - r
        v1 = e - 22 * n * js
        ic = f + r - p / 22
        nb = (p - w) / 2
        x2 = nb + w + 0.25 * js
        return ([ic / 2200e-6], {"S": e, "P": v1, "X": x2, "Y": x2, "A": nb + w, "B": nb, "OUT": p},
                {"VP": -n * js, "RP": n * js, "E1": -js, "F1": n * js, "VS": js, "RS": js,
                 "D1": f, "D2": r, "D3": r, "D4": f, "C1": ic, "RL": p / 22})
    return equations


def phasor_rows(name, z, amplitude, w, offset=0.0):
    """Closed form of rms, mean, peak and lowest current through an impedance z behind a sine of an amplitude."""
    i = amplitude / abs(z)
    return {(name, "rms-current"): sqrt(offset ** 2 + i * i / 2), (name, "peak-current"): abs(offset) + i,
            (name, "min-current"): offset - i, (name, "mean-current"): offset}


@circuit("linear-rl", """Solenoid on a sine with an offset
V1 IN 0 SIN(6 24 50)
R1 IN A 15
L1 A 0 80m
.end""", [0.0], closed_form=phasor_rows("L1", 15 + 1j * W50 * 0.08, 24, W50, 6 / 15))
def linear_rl():
    """L i' = e - R i; i = 6/15 + 24/|R + jwL| sin(wt - arg)."""
    def equations(t, x):
        i, e = x[0], 6 + 24 * sin(W50 * t)
        return [(e - 15 * i) / 0.08], {"IN": e, "A": e - 15 * i}, {"V1": -i, "R1": i, "L1": i}
    return equations


RC_RATIO = 1 / abs(1 + 1j * W50 * 1000 * 4.7e-6)


@circuit("linear-rc", """Smoothing section on a sine with an offset
V1 IN 0 SIN(10 10 50 0 0 30)
R1 IN OUT 1k
C1 OUT 0 4.7u
.end""", [10.0], closed_form={
    ("C1", "max-voltage"): 10 + 10 * RC_RATIO, ("C1", "min-voltage"): 10 - 10 * RC_RATIO, ("C1", "mean-voltage"): 10.0,
    ("C1", "ripple-current-rms"): 10 / sqrt(2) * W50 * 4.7e-6 * RC_RATIO,
    ("node:OUT", "ripple-peak-to-peak"): 20 * RC_RATIO, ("node:OUT", "ripple-rms"): 10 / sqrt(2) * RC_RATIO})
def linear_rc():
    """RC v' = e - v; amplitude 10/sqrt(1 + (wRC)^2)."""
    def equations(t, x):
        v, e = x[0], 10 + 10 * sin(W50 * t + pi / 6)
        i = (e - v) / 1000
        return [i / 4.7e-6], {"IN": e, "OUT": v}, {"V1": -i, "R1": i, "C1": i}
    return equations


RLC = 4 + 1j * (W50 * 0.15 - 1 / (W50 * 47e-6))


@circuit("linear-rlc", """Series resonant trap near 60 Hz, driven at 50 Hz
V1 IN 0 SIN(0 12 50)
R1 IN A 4
L1 A B 150m
C1 B 0 47u
.end""", [0.0, 0.0], closed_form={
    **phasor_rows("L1", RLC, 12, W50), ("C1", "max-voltage"): 12 / abs(RLC) / (W50 * 47e-6),
    ("R1", "mean-power"): 0.5 * 4 * (12 / abs(RLC)) ** 2, ("V1", "mean-power"): -0.5 * 144 / abs(RLC) * cos(phase(RLC))})
def linear_rlc():
    """L i' = e - R i - v, C v' = i."""
    def equations(t, x):
        i, v = x
        e = 12 * sin(W50 * t)
        return ([(e - 4 * i - v) / 0.15, i / 47e-6], {"IN": e, "A": e - 4 * i, "B": v},
                {"V1": -i, "R1": i, "L1": i, "C1": i})
    return equations


@circuit("two-sources", f"""Two windings of different phase into one reservoir
V1 S1 0 SIN(0 20 50)
V2 S2 0 SIN(0 22 50 0 0 90)
RW1 S1 A1 0.7
RW2 S2 A2 1.2
D1 A1 OUT DR
D2 A2 OUT DR
C1 OUT 0 1500u
RL OUT 0 40
{DR_CARD}
.end""", [19.0])
def two_sources():
    """C v' = i1 + i2 - v/R."""
    d = Diode(**DR)

    def equations(t, x):
        v = x[0]
        e1, e2 = 20 * sin(W50 * t), 22 * sin(W50 * t + pi / 2)
        i1, a1 = fed_diode(d, e1, 0.7, v)
        i2, a2 = fed_diode(d, e2, 1.2, v)
        ic = i1 + i2 - v / 40
        return ([ic / 1500e-6], {"S1": e1, "S2": e2, "A1": a1, "A2": a2, "OUT": v},
                {"V1": -i1, "V2": -i2, "RW1": i1, "RW2": i2, "D1": i1, "D2": i2, "C1": ic, "RL": v / 40})
    return equations
