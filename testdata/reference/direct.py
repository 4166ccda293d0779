"""Direct sources (operating points), breakdown of a rectifier, shared sources, and more regulators."""

from math import pi, sin

from scipy.optimize import brentq

from circuits import circuit
from laws import Bridge, Diode, bipolar, root
from rectifiers import DR, DR_CARD, W50, fed_diode
from shunts import DZ12, DZ12_CARD, QN, QN_CARD
from variants import BRIDGE_CARDS, bridge_currents, bridge_nodes


@circuit("dc-zener", f"""Zener reference from a battery
V1 IN 0 DC 28
R1 IN OUT 470
DZ 0 OUT DZ12
RL OUT 0 1k
{DZ12_CARD}
.end""", [], instants=8)
def dc_zener():
    """(28 - o)/470 = o/1000 - z(-o)."""
    z = Diode(**DZ12)

    def equations(t, x):
        o = brentq(lambda o: (28 - o) / 470 - o / 1000 + z(-o)[0], 0, 28, xtol=1e-14)
        return ([], {"IN": 28.0, "OUT": o},
                {"V1": -(28 - o) / 470, "R1": (28 - o) / 470, "DZ": z(-o)[0], "RL": o / 1000})
    return equations


@circuit("dc-series-pass", f"""Emitter follower from a direct supply
V1 P 0 DC 20
RB P Z 470
DZ 0 Z DZ12
Q1 P Z OUT QN
RL OUT 0 20
{DZ12_CARD}
{QN_CARD}
.end""", [], instants=8)
def dc_series_pass():
    """Base b: (20-b)/RB + z(-b) = ib, output o: ic + ib = o/RL; nested."""
    z = Diode(**DZ12)

    def output(b):
        return brentq(lambda o: sum(bipolar(b - o, b - 20, **QN)) - o / 20, b - 1.2, b, xtol=1e-14)

    def equations(t, x):
        b = brentq(lambda b: (20 - b) / 470 + z(-b)[0] - bipolar(b - output(b), b - 20, **QN)[1], 2, 19, xtol=1e-14)
        o = output(b)
        ic, ib = bipolar(b - o, b - 20, **QN)
        ir = (20 - b) / 470
        return ([], {"P": 20.0, "Z": b, "OUT": o},
                {"V1": -ir - ic, "RB": ir, "DZ": z(-b)[0], "Q1.c": ic, "Q1.b": ib, "RL": o / 20})
    return equations


@circuit("dc-error-amplifier", """Two-transistor series regulator with a zener in the emitter of the amplifier
V1 P 0 DC 22
RB P B 1.2k
Q1 P B OUT QA
Q2 B F E QA
DZ 0 E DZ6
RE OUT E 560
R1 OUT F 1.8k
R2 F 0 2.2k
RL OUT 0 60
.model DZ6 D(IS=10f N=1 RS=3 BV=5.6 IBV=5m)
.model QA NPN(IS=10f BF=90 BR=2)
.end""", [], instants=8)
def dc_error_amplifier():
    """Unknowns nested: given o, the pass base b carries all of the output current; F, E follow; the loop closes at B.

    i1 = o/RL + (o-e)/RE + (o-f)/R1 = ie(Q1) gives b; (o-e)/RE + ie(Q2) = -z(-e) gives e for a given f;
    (o-f)/R1 = f/R2 + ib(Q2) gives f; and (22-b)/RB = ib(Q1) + ic(Q2).
    """
    z = Diode(IS=1e-14, N=1, RS=3, BV=5.6, IBV=5e-3)
    q = dict(IS=1e-14, BF=90, BR=2)

    def amplifier(o, b):
        """f and e for given o and b."""
        def emitter(f):
            return brentq(lambda e: -z(-e)[0] - (o - e) / 560 - sum(bipolar(f - e, f - b, **q)), 0, 12, xtol=1e-14)

        def balance(f):
            return (o - f) / 1800 - f / 2200 - bipolar(f - emitter(f), f - b, **q)[1]
        f = brentq(balance, 1, 6.8, xtol=1e-14)
        return f, emitter(f)

    def base(o):
        """b for a given o."""
        def short(b):
            f, e = amplifier(o, b)
            return sum(bipolar(b - o, b - 22, **q)) - o / 60 - (o - e) / 560 - (o - f) / 1800
        return brentq(short, o + 0.4, o + 0.9, xtol=1e-14)

    def loop(o):
        b = base(o)
        f, e = amplifier(o, b)
        return (22 - b) / 1200 - bipolar(b - o, b - 22, **q)[1] - bipolar(f - e, f - b, **q)[0]
    o = brentq(loop, 9, 13, xtol=1e-13)
    b = base(o)
    f, e = amplifier(o, b)
    (c1, b1), (c2, b2) = bipolar(b - o, b - 22, **q), bipolar(f - e, f - b, **q)
    ir = (22 - b) / 1200

    def equations(t, x):
        return ([], {"P": 22.0, "B": b, "OUT": o, "F": f, "E": e},
                {"V1": -ir - c1, "RB": ir, "Q1.c": c1, "Q1.b": b1, "Q2.c": c2, "Q2.b": b2, "DZ": z(-e)[0],
                 "RE": (o - e) / 560, "R1": (o - f) / 1800, "R2": f / 2200, "RL": o / 60})
    return equations


@circuit("half-wave-avalanche", """Half-wave feeder whose diode breaks down before twice the crest
V1 S 0 SIN(0 40 50)
RW S A 47
D1 A OUT DB
C1 OUT 0 100u
RL OUT 0 4.7k
.model DB D(IS=5n N=1.8 RS=0.04 BV=60 IBV=1m)
.end""", [28.0])
def half_wave_avalanche():
    """The half-wave rectifier; with BV = 60 V < 2 x 40 V the diode conducts backwards at the negative crest."""
    d = Diode(IS=5e-9, N=1.8, RS=0.04, BV=60, IBV=1e-3)

    def equations(t, x):
        v, e = x[0], 40 * sin(W50 * t)
        i, a = fed_diode(d, e, 47, v)
        ic = i - v / 4700
        return [ic / 100e-6], {"S": e, "A": a, "OUT": v}, {"V1": -i, "RW": i, "D1": i, "C1": ic, "RL": v / 4700}
    return equations


@circuit("linear-controlled", """All four linear controlled sources on a sine with an offset
V1 IN 0 SIN(2 3 50)
R1 IN A 100
C1 A 0 22u
E1 X 0 A 0 4
VS X Y 0
R2 Y 0 200
F1 0 B VS 0.5
R3 B 0 100
G1 0 C B 0 20m
R4 C 0 75
H1 D 0 VS 150
R5 D 0 1k
.end""", [2.0])
def linear_controlled():
    """100 x 22u u' = e - u; x = 4u, is = x/200, b = 100 x 0.5 is = u, c = 75 x 0.02 b = 1.5u, d = 150 is = 3u."""
    def equations(t, x):
        u, e = x[0], 2 + 3 * sin(W50 * t)
        i = (e - u) / 100
        s = 4 * u / 200
        return ([i / 22e-6], {"IN": e, "A": u, "X": 4 * u, "Y": 4 * u, "B": u, "C": 1.5 * u, "D": 3 * u},
                {"V1": -i, "R1": i, "C1": i, "E1": -s, "VS": s, "R2": s, "F1": 0.5 * s, "R3": u / 100,
                 "G1": 0.02 * u, "R4": 1.5 * u / 75, "H1": -3 * u / 1000, "R5": 3 * u / 1000})
    return equations


@circuit("series-capacitors", f"""Inverter link: bridge into two capacitors in series with unequal sharing resistors
V1 S B SIN(0 140 50)
RW S A 1.2
{BRIDGE_CARDS}
C1 OUT M 330u
C2 M 0 470u
R1 OUT M 10k
R2 M 0 15k
RL OUT 0 680
{DR_CARD}
.end""", [56.0, 80.0])
def series_capacitors():
    """u across C1, v across C2: C1 u' = j - u/R1 - (u+v)/RL, C2 v' = j - v/R2 - (u+v)/RL with j = f + r."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        u, v = x
        p = u + v
        e = 140 * sin(W50 * t)
        w, f, r = b.fed(e, 1.2, p)
        j = f + r - p / 680
        c1, c2 = j - u / 10e3, j - v / 15e3
        return ([c1 / 330e-6, c2 / 470e-6], {**bridge_nodes(e, w, p), "OUT": p, "M": v},
                {**bridge_currents(f, r), "C1": c1, "C2": c2, "R1": u / 10e3, "R2": v / 15e3, "RL": p / 680})
    return equations


@circuit("regulators-dual", f"""Operational amplifier supply, +12 V and -12 V with unequal loads
V1 S1 0 SIN(0 20 50)
V2 0 S2 SIN(0 20 50)
RW1 S1 A1 0.9
RW2 S2 A2 0.9
D1 A1 POS DR
D2 A2 POS DR
D3 NEG A1 DR
D4 NEG A2 DR
C1 POS 0 1000u
C2 0 NEG 1000u
X1 POS 0 VPOS 7812
*: rate X1 VOUT=12V VDO=2V IQ=5mA
X2 NEG 0 VNEG 7912
*: rate X2 VOUT=12V VDO=2V IQ=4mA
RL1 VPOS 0 30
RL2 0 VNEG 82
{DR_CARD}
.end""", [16.0, -18.0])
def regulators_dual():
    """C1 p' = i1 + i2 - IQ1 - a/RL1, C2 (-n)' = i3 + i4 - IQ2 - b/RL2, a = min(12, p-2), b = min(12, -n-2)."""
    d = Diode(**DR)

    def end(e, p, n):
        def residual(a):
            up, gu = d(a - p)
            down, gd = d(n - a)
            return a + 0.9 * (up - down) - e, 1 + 0.9 * (gu + gd)
        a = root(residual, -abs(e) - 1, abs(e) + 1)
        return a, d(a - p)[0], d(n - a)[0]

    def equations(t, x):
        p, n = x
        e = 20 * sin(W50 * t)
        a1, i1, i3 = end(e, p, n)
        a2, i2, i4 = end(-e, p, n)
        a, b = min(12.0, p - 2), min(12.0, -n - 2)
        c1, c2 = i1 + i2 - 5e-3 - a / 30, i3 + i4 - 4e-3 - b / 82
        return ([c1 / 1000e-6, -c2 / 1000e-6],
                {"S1": e, "S2": -e, "A1": a1, "A2": a2, "POS": p, "NEG": n, "VPOS": a, "VNEG": -b},
                {"V1": i3 - i1, "V2": i2 - i4, "RW1": i1 - i3, "RW2": i2 - i4, "D1": i1, "D2": i2, "D3": i3, "D4": i4,
                 "C1": c1, "C2": c2, "X1.in": a / 30 + 5e-3, "X1.out": -a / 30, "X2.in": -b / 82 - 4e-3, "X2.out": b / 82,
                 "RL1": a / 30, "RL2": b / 82})
    return equations


@circuit("bridge-small-reservoir", f"""Bridge with a reservoir so small that the ripple reaches far down
V1 S B SIN(0 30 50)
RW S A 2
{BRIDGE_CARDS}
C1 OUT 0 10u
RL OUT 0 220
{DR_CARD}
.end""", [5.0])
def bridge_small_reservoir():
    """w C R = 0.7."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p, e = x[0], 30 * sin(W50 * t)
        w, f, r = b.fed(e, 2, p)
        ic = f + r - p / 220
        return ([ic / 10e-6], {**bridge_nodes(e, w, p), "OUT": p}, {**bridge_currents(f, r), "C1": ic, "RL": p / 220})
    return equations


@circuit("capacitor-dropper", f"""Night light: series capacitor into a bridge and a zener
V1 S B SIN(0 325 50)
CD S X 330n
RX X A 220
{BRIDGE_CARDS}
C1 OUT 0 220u
DZ 0 OUT DZ24
RL OUT 0 2.2k
{DR_CARD}
.model DZ24 D(IS=10f N=1 RS=8 BV=24 IBV=5m)
.end""", [0.0, 24.0])
def capacitor_dropper():
    """CD u' = f - r, C1 p' = f + r - p/R + z(-p), with w + RX (f - r) = e - u."""
    b, z = Bridge(Diode(**DR)), Diode(IS=1e-14, N=1, RS=8, BV=24, IBV=5e-3)

    def equations(t, x):
        u, p = x
        e = 325 * sin(W50 * t)
        w, f, r = b.fed(e - u, 220, p)
        i, iz = f - r, z(-p)[0]
        ic = f + r - p / 2200 + iz
        nb = (p - w) / 2
        return ([i / 330e-9, ic / 220e-6], {"S": nb + e, "X": nb + e - u, "A": nb + w, "B": nb, "OUT": p},
                {"V1": -i, "CD": i, "RX": i, "D1": f, "D2": r, "D3": r, "D4": f, "C1": ic, "DZ": iz, "RL": p / 2200})
    return equations


@circuit("two-frequencies", f"""Railway test rig: 50 Hz and 100 Hz windings in series ahead of a bridge
V1 S B SIN(0 20 50)
V2 T S SIN(0 6 100 0 0 40)
RW T A 0.9
{BRIDGE_CARDS}
C1 OUT 0 1500u
RL OUT 0 47
{DR_CARD}
.end""", [20.0])
def two_frequencies():
    """Bridge with winding resistance on the sum of two sines: the half-cycles differ."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p = x[0]
        e1 = 20 * sin(W50 * t)
        e = e1 + 6 * sin(2 * pi * 100 * t + 40 * pi / 180)
        w, f, r = b.fed(e, 0.9, p)
        ic = f + r - p / 47
        nb = (p - w) / 2
        return ([ic / 1500e-6], {"S": nb + e1, "T": nb + e, "A": nb + w, "B": nb, "OUT": p},
                {"V1": r - f, "V2": r - f, "RW": f - r, "D1": f, "D2": r, "D3": r, "D4": f, "C1": ic, "RL": p / 47})
    return equations
