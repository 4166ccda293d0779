"""Switches and diodes that commutate: a booster, a half-wave choke with freewheel diode, a snubber that rings."""

from math import sin

from circuits import circuit
from laws import Diode, root
from rectifiers import DR, DR_CARD, W50


@circuit("booster", """Booster: a switch charges a choke from 12 V, a diode hands it on
V1 IN 0 DC 12
L1 IN B 220u
RDC B X 0.15
S1 X 0 C 0 SW
VC C 0 PULSE(0 5 0 100n 100n 22u 50u)
D1 X OUT DF
C1 OUT 0 47u
RL OUT 0 47
.model DF D(IS=20n N=1.4 RS=0.03)
.model SW SW(VT=2.5 VH=0 RON=80m ROFF=1meg)
.end""", [0.7, 20.0], period=50e-6, steps=1000, breaks=(50e-9, 100e-9, 22.1e-6, 22.15e-6, 22.2e-6), second=("LSODA", 1e-9))
def booster():
    """L i' = 12 - RDC i - x, C v' = d(x-v) - v/RL, and x/Rs + d(x-v) = i gives x."""
    d = Diode(IS=20e-9, N=1.4, RS=0.03)

    def equations(t, x):
        i, v = x
        s = t % 50e-6
        c = 5 * max(0.0, min(s / 100e-9, 1.0, (22.2e-6 - s) / 100e-9))
        g = 1 / 0.08 if c > 2.5 else 1e-6

        def residual(x):
            j, gj = d(x - v)
            return g * x + j - i, g + gj
        x = root(residual, -1, 40)
        j = d(x - v)[0]
        ic = j - v / 47
        return ([(12 - 0.15 * i - x) / 220e-6, ic / 47e-6], {"IN": 12.0, "B": x + 0.15 * i, "X": x, "C": c, "OUT": v},
                {"V1": -i, "L1": i, "RDC": i, "S1": g * x, "VC": 0.0, "D1": j, "C1": ic, "RL": v / 47})
    return equations


@circuit("freewheel-choke", f"""Half-wave into a choke with a freewheel diode: field winding of a small motor
V1 S 0 SIN(0 60 50)
RW S A 1.2
D1 A P DR
D2 0 P DR
L1 P Q 400m
RL Q 0 30
{DR_CARD}
.end""", [0.5])
def freewheel_choke():
    """L i' = p - RL i; d1(a-p) + d2(-p) = i with a = e - RW d1: the source resistance and RS of D1 are in series."""
    d, behind = Diode(**DR), Diode(IS=5e-9, N=1.8, RS=1.24)

    def equations(t, x):
        i, e = x[0], 60 * sin(W50 * t)

        def residual(p):
            i1, g1 = behind(e - p)
            i2, g2 = d(-p)
            return i - i1 - i2, g1 + g2
        p = root(residual, -3, 61)
        i1, i2 = behind(e - p)[0], d(-p)[0]
        return ([(p - 30 * i) / 0.4], {"S": e, "A": e - 1.2 * i1, "P": p, "Q": 30 * i},
                {"V1": -i1, "RW": i1, "D1": i1, "D2": i2, "L1": i, "RL": i})
    return equations


@circuit("snubber", f"""Half-wave behind leakage inductance, a damped capacitor across the diode
V1 S 0 SIN(0 40 50)
RW S B 1
LW B A 2m
D1 A OUT DR
RS A M 220
CS M OUT 100n
C1 OUT 0 470u
RL OUT 0 180
{DR_CARD}
.end""", [0.0, -20.0, 35.0], second=("LSODA", 1e-9))
def snubber():
    """LW i' = e - RW i - a; CS u' = (y-u)/RS with y = a - v; d(y) + (y-u)/RS = i gives y; C1 v' = i - v/RL."""
    d = Diode(**DR)

    def equations(t, x):
        i, u, v = x
        e = 40 * sin(W50 * t)

        def residual(y):
            j, g = d(y)
            return j + (y - u) / 220 - i, g + 1 / 220
        y = root(residual, -100, 5)
        s, j = (y - u) / 220, d(y)[0]
        ic = i - v / 180
        return ([(e - i - y - v) / 2e-3, s / 100e-9, ic / 470e-6],
                {"S": e, "B": e - i, "A": y + v, "M": u + v, "OUT": v},
                {"V1": -i, "RW": i, "LW": i, "D1": j, "RS": s, "CS": s, "C1": ic, "RL": v / 180})
    return equations
