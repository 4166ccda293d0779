"""Deep ripple, long and short time constants, ladders, several supplies, switched sources."""

from math import pi, sin

from circuits import circuit
from filters import choke_cards, choke_input
from laws import Bridge, Diode, root
from rectifiers import DR, DR_CARD, W50, fed_diode
from shunts import front
from variants import BRIDGE_CARDS, bridge_currents, bridge_nodes

SHARP = dict(IS=1e-9, N=0.02, RS=0.02)
SHARP_CARD = ".model DS D(IS=1n N=0.02 RS=20m)"


@circuit("deep-ripple", f"""Bridge of nearly ideal diodes: the reservoir falls to a fifth of the crest
V1 S B SIN(0 30 50)
RW S A 0.05
{BRIDGE_CARDS.replace("DR", "DS")}
C1 OUT 0 11u
RL OUT 0 220
{SHARP_CARD}
.end""", [20.0], steps=4000, second=("LSODA", 1e-9))
def deep_ripple():
    """C p' = f + r - p/R; the trough is a kink where the rising half sine meets the falling voltage."""
    b = Bridge(Diode(**SHARP))

    def equations(t, x):
        p, e = x[0], 30 * sin(W50 * t)
        w, f, r = b.fed(e, 0.05, p)
        ic = f + r - p / 220
        return ([ic / 11e-6], {**bridge_nodes(e, w, p), "OUT": p}, {**bridge_currents(f, r), "C1": ic, "RL": p / 220})
    return equations


@circuit("deep-ripple-half-wave", f"""Half-wave, nearly ideal diode and a constant current that empties the reservoir to a fifth
V1 S 0 SIN(0 30 50)
RW S A 0.05
D1 A OUT DS
C1 OUT 0 100u
ILOAD OUT 0 0.155
{SHARP_CARD}
.end""", [10.0], steps=4000, second=("LSODA", 1e-9))
def deep_ripple_half_wave():
    """C v' = i - I."""
    d = Diode(**SHARP)

    def equations(t, x):
        v, e = x[0], 30 * sin(W50 * t)
        i, a = fed_diode(d, e, 0.05, v)
        ic = i - 0.155
        return [ic / 100e-6], {"S": e, "A": a, "OUT": v}, {"V1": -i, "RW": i, "D1": i, "C1": ic, "ILOAD": 0.155}
    return equations


@circuit("choke-input-critical", choke_cards("Bench rail whose choke current just touches zero", 48, 50, "300m", 3, "470u", 283),
         [0.0, 30.0])
def choke_input_critical():
    """Critical inductance R/(3w) = 0.3 H."""
    return choke_input(48, W50, 0.3, 3, 470e-6, 283)


@circuit("filter-c-r-c-r-c", f"""Phono preamplifier rail with three reservoirs
V1 S B SIN(0 32 50)
RW S A 2.2
{BRIDGE_CARDS}
C1 OUT 0 470u
R1 OUT OUT2 47
C2 OUT2 0 470u
R2 OUT2 OUT3 150
C3 OUT3 0 220u
RL1 OUT2 0 1.2k
RL3 OUT3 0 1.8k
{DR_CARD}
.end""", [30.0, 28.0, 26.0])
def crcrc():
    """C1 p' = f + r - i1, C2 q' = i1 - i2 - q/RL1, C3 s' = i2 - s/RL3."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p, q, s = x
        nodes, currents, j = front(t, p, 32, 2.2, b)
        i1, i2 = (p - q) / 47, (q - s) / 150
        c1, c2, c3 = j - i1, i1 - i2 - q / 1200, i2 - s / 1800
        return ([c1 / 470e-6, c2 / 470e-6, c3 / 220e-6], {**nodes, "OUT": p, "OUT2": q, "OUT3": s},
                {**currents, "C1": c1, "R1": i1, "C2": c2, "R2": i2, "C3": c3, "RL1": q / 1200, "RL3": s / 1800})
    return equations


@circuit("half-wave-tiny-load", f"""Memory hold-up rail: half-wave, time constant a quarter of an hour
V1 S 0 SIN(0 12 50)
RW S A 4.7
D1 A OUT DR
C1 OUT 0 1000u
RL OUT 0 1meg
{DR_CARD}
.end""", [11.7], rtol=1e-12, second=("LSODA", 1e-11))
def half_wave_tiny_load():
    """Half-wave rectifier with winding resistance."""
    d = Diode(**DR)

    def equations(t, x):
        v, e = x[0], 12 * sin(W50 * t)
        i, a = fed_diode(d, e, 4.7, v)
        ic = i - v / 1e6
        return [ic / 1000e-6], {"S": e, "A": a, "OUT": v}, {"V1": -i, "RW": i, "D1": i, "C1": ic, "RL": v / 1e6}
    return equations


@circuit("stacked-supplies", f"""A floating half-wave supply that stands on top of a bridge, and a load on each and on both
V1 S B SIN(0 20 50)
RW S A 0.8
{BRIDGE_CARDS}
C1 OUT 0 1500u
RL1 OUT 0 82
V2 T OUT SIN(0 28 50 0 0 60)
RW2 T U 2.5
D5 U TOP DR
C2 TOP OUT 470u
RL2 TOP OUT 560
RL3 TOP 0 390
{DR_CARD}
.end""", [18.0, 25.0])
def stacked_supplies():
    """p on C1, q on C2: C1 p' = f + r - p/RL1 - (p+q)/RL3, C2 q' = i5 - q/RL2 - (p+q)/RL3; V2 returns to OUT."""
    b, d = Bridge(Diode(**DR)), Diode(**DR)

    def equations(t, x):
        p, q = x
        nodes, currents, j = front(t, p, 20, 0.8, b)
        e = 28 * sin(W50 * t + pi / 3)
        i5, u = fed_diode(d, e, 2.5, q)
        i1, i2, i3 = p / 82, q / 560, (p + q) / 390
        c1, c2 = j - i1 - i3, i5 - i2 - i3
        return ([c1 / 1500e-6, c2 / 470e-6], {**nodes, "OUT": p, "T": p + e, "U": p + u, "TOP": p + q},
                {**currents, "C1": c1, "RL1": i1, "V2": -i5, "RW2": i5, "D5": i5, "C2": c2, "RL2": i2, "RL3": i3})
    return equations


@circuit("two-supplies", f"""Two supplies that share nothing but ground: a bridge at 50 Hz and a negative half-wave at 60 Hz
V1 S B SIN(0 20 50)
RW S A 0.8
{BRIDGE_CARDS}
C1 OUT 0 1000u
RL1 OUT 0 68
V2 T 0 SIN(0 35 60 0 0 20)
RW2 T K 8
D5 NEG K DR
C2 0 NEG 100u
RL2 NEG 0 2.7k
{DR_CARD}
.end""", [17.0, 32.0], period=0.1, second=("LSODA", 1e-9))
def two_supplies():
    """Side by side; q = -NEG. Common period 5 cycles of 50 Hz, 6 of 60 Hz."""
    b, d = Bridge(Diode(**DR)), Diode(**DR)

    def equations(t, x):
        p, q = x
        nodes, currents, j = front(t, p, 20, 0.8, b)
        e = 35 * sin(2 * pi * 60 * t + pi / 9)
        i, a = fed_diode(d, -e, 8, q)  # mirrored: a = -K
        c1, c2 = j - p / 68, i - q / 2700
        return ([c1 / 1000e-6, c2 / 100e-6], {**nodes, "OUT": p, "T": e, "K": -a, "NEG": -q},
                {**currents, "C1": c1, "RL1": p / 68, "V2": i, "RW2": -i, "D5": i, "C2": c2, "RL2": -q / 2700})
    return equations


def chopper_cards(title, inductance, load):
    return f"""{title}
V1 S 0 PULSE(0 24 0 200n 200n 19.8u 50u)
RS S X 0.08
D1 X A DF
D2 0 A DF
RA A 0 10k
L1 A B {inductance}
RDC B OUT 0.1
C1 OUT 0 100u
RL OUT 0 {load}
.model DF D(IS=20n N=1.4 RS=0.03)
.end"""


def chopper(inductance, load):
    """L i' = a - RDC i - v, C v' = i - v/RL; d1(x-a) + d2(-a) = i + a/RA with x = e - RS d1 gives a."""
    d = Diode(IS=20e-9, N=1.4, RS=0.03)
    behind = Diode(IS=20e-9, N=1.4, RS=0.11)  # RS of the source and of the diode are in series: one resistance

    def wave(t):
        t = t % 50e-6
        return 24 * max(0.0, min(t / 200e-9, 1.0, (20.2e-6 - t) / 200e-9))

    def equations(t, x):
        i, v = x
        e = wave(t)

        def residual(a):
            i1, g1 = behind(e - a)
            i2, g2 = d(-a)
            return i + a / 1e4 - i1 - i2, 1e-4 + g1 + g2
        a = root(residual, -2, 25)
        i1, i2 = behind(e - a)[0], d(-a)[0]
        ic = i - v / load
        return ([(a - 0.1 * i - v) / inductance, ic / 100e-6], {"S": e, "X": e - 0.08 * i1, "A": a, "B": v + 0.1 * i, "OUT": v},
                {"V1": -i1, "RS": i1, "D1": i1, "D2": i2, "RA": a / 1e4, "L1": i, "RDC": i, "C1": ic, "RL": v / load})
    return equations


@circuit("chopper-continuous", chopper_cards("Chopped 24 V into a choke with a freewheel diode", "220u", 6), [1.4, 8.9],
         period=50e-6, steps=2000, breaks=(200e-9, 20e-6, 20.2e-6), second=("LSODA", 1e-9))
def chopper_continuous():
    return chopper(220e-6, 6)


@circuit("chopper-discontinuous", chopper_cards("Chopped 24 V, light load: the choke runs dry in each period", "100u", 150),
         [0.0, 17.0], period=50e-6, steps=2000, breaks=(200e-9, 20e-6, 20.2e-6), second=("LSODA", 1e-9))
def chopper_discontinuous():
    return chopper(100e-6, 150)


@circuit("switched-load", f"""Relay driver: a second load that a switch connects for 8 ms of every cycle
V1 S B SIN(0 21 50)
RW S A 0.8
{BRIDGE_CARDS}
C1 OUT 0 1000u
RL OUT 0 82
RL2 OUT D 12
S1 D 0 C 0 SW
VC C 0 PULSE(0 5 4m 10u 10u 8m 20m)
{DR_CARD}
.model SW SW(VT=2.5 VH=0 RON=50m ROFF=1meg)
.end""", [18.0], breaks=(4e-3, 4.005e-3, 4.01e-3, 12.01e-3, 12.015e-3, 12.02e-3), second=("LSODA", 1e-9))
def switched_load():
    """C p' = f + r - p/RL - p/(RL2 + Rs) with Rs = RON while the control lies above VT, else ROFF."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p = x[0]
        nodes, currents, j = front(t, p, 21, 0.8, b)
        c = 5 * max(0.0, min((t - 4e-3) / 10e-6, 1.0, (12.02e-3 - t) / 10e-6))
        rs = 0.05 if c > 2.5 else 1e6
        i2 = p / (12 + rs)
        ic = j - p / 82 - i2
        return ([ic / 1000e-6], {**nodes, "OUT": p, "D": i2 * rs, "C": c},
                {**currents, "C1": ic, "RL": p / 82, "RL2": i2, "S1": i2, "VC": 0.0})
    return equations


@circuit("three-pulse", f"""Plating rail: three half-wave diodes on a star whose neutral is the return
VU U 0 SIN(0 24 50)
VV V 0 SIN(0 24 50 0 0 -120)
VW W 0 SIN(0 24 50 0 0 120)
RU U A 0.4
RV V B 0.4
RW W C 0.4
D1 A OUT DR
D2 B OUT DR
D3 C OUT DR
C1 OUT 0 470u
RL OUT 0 15
{DR_CARD}
.end""", [20.0])
def three_pulse():
    """C v' = i1 + i2 + i3 - v/RL, each diode behind its own phase."""
    d = Diode(**DR)

    def equations(t, x):
        v = x[0]
        e = [24 * sin(W50 * t + q) for q in (0.0, -2 * pi / 3, 2 * pi / 3)]
        (i1, a), (i2, b), (i3, c) = [fed_diode(d, u, 0.4, v) for u in e]
        ic = i1 + i2 + i3 - v / 15
        return ([ic / 470e-6], {"U": e[0], "V": e[1], "W": e[2], "A": a, "B": b, "C": c, "OUT": v},
                {"VU": -i1, "VV": -i2, "VW": -i3, "RU": i1, "RV": i2, "RW": i3, "D1": i1, "D2": i2, "D3": i3,
                 "C1": ic, "RL": v / 15})
    return equations
