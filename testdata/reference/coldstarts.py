"""Switch-on from rest: every capacitor and inductor empty, sources as they are at t = 0."""

from math import pi, sin

from circuits import circuit
from filters import choke_cards
from laws import Bridge, Diode, root
from rectifiers import DR, DR_CARD, W50, fed_diode
from variants import BRIDGE_CARDS, bridge_currents, bridge_nodes


def half_wave(peak, w, angle, winding, capacitance, load):
    """C v' = i - v/R."""
    d = Diode(**DR)

    def equations(t, x):
        v, e = x[0], peak * sin(w * t + angle)
        i, a = fed_diode(d, e, winding, v)
        ic = i - v / load
        return [ic / capacitance], {"S": e, "A": a, "OUT": v}, {"V1": -i, "RW": i, "D1": i, "C1": ic, "RL": v / load}
    return equations


@circuit("cold-half-wave", f"""Relay coil feeder switched on at the zero of the line
V1 S 0 SIN(0 24 50)
RW S A 1.5
D1 A OUT DR
C1 OUT 0 1000u
RL OUT 0 220
{DR_CARD}
.end""", [0.0], mode="cold-start", cycles=8)
def cold_half_wave():
    return half_wave(24, W50, 0, 1.5, 1000e-6, 220)


@circuit("cold-half-wave-crest", f"""Relay coil feeder switched on at the crest of the line
V1 S 0 SIN(0 24 50 0 0 90)
RW S A 1.5
D1 A OUT DR
C1 OUT 0 1000u
RL OUT 0 220
{DR_CARD}
.end""", [0.0], mode="cold-start", cycles=8)
def cold_half_wave_crest():
    """The largest current flows at t = 0: (24 - v(D1))/1.5."""
    return half_wave(24, W50, pi / 2, 1.5, 1000e-6, 220)


def bridge(peak, w, angle, winding, capacitance, load):
    """C p' = f + r - p/R."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p, e = x[0], peak * sin(w * t + angle)
        v, f, r = b.fed(e, winding, p)
        ic = f + r - p / load
        return ([ic / capacitance], {**bridge_nodes(e, v, p), "OUT": p},
                {**bridge_currents(f, r), "C1": ic, "RL": p / load})
    return equations


def bridge_cards(title, wave, winding, capacitance, load):
    return f"""{title}
V1 S B {wave}
RW S A {winding}
{BRIDGE_CARDS}
C1 OUT 0 {capacitance}
RL OUT 0 {load}
{DR_CARD}
.end"""


@circuit("cold-bridge", bridge_cards("Panel meter supply switched on at the zero of the line",
                                     "SIN(0 21.2 50)", 0.8, "2200u", 33), [0.0], mode="cold-start", cycles=6)
def cold_bridge():
    return bridge(21.2, W50, 0, 0.8, 2200e-6, 33)


@circuit("cold-bridge-45deg", bridge_cards("Panel meter supply switched on at 45 degrees",
                                           "SIN(0 21.2 50 0 0 45)", 0.8, "10000u", 33), [0.0], mode="cold-start", cycles=10)
def cold_bridge_45():
    return bridge(21.2, W50, pi / 4, 0.8, 10000e-6, 33)


@circuit("cold-bridge-60Hz", bridge_cards("Alarm panel supply, stiff winding and large reservoir, at 60 Hz",
                                          "SIN(0 25.5 60)", 0.15, "22000u", 12), [0.0], mode="cold-start",
         cycles=10, period=1 / 60)
def cold_bridge_60hz():
    return bridge(25.5, 2 * pi * 60, 0, 0.15, 22000e-6, 12)


@circuit("cold-centre-tap", f"""Amplifier heater rail, two half windings, switched on at the zero of the line
V1 S1 0 SIN(0 15 50)
V2 0 S2 SIN(0 15 50)
RW1 S1 A1 0.3
RW2 S2 A2 0.3
D1 A1 OUT DR
D2 A2 OUT DR
C1 OUT 0 4700u
RL OUT 0 18
{DR_CARD}
.end""", [0.0], mode="cold-start", cycles=8)
def cold_centre_tap():
    """C v' = i1 + i2 - v/R."""
    d = Diode(**DR)

    def equations(t, x):
        v, e = x[0], 15 * sin(W50 * t)
        i1, a1 = fed_diode(d, e, 0.3, v)
        i2, a2 = fed_diode(d, -e, 0.3, v)
        ic = i1 + i2 - v / 18
        return ([ic / 4700e-6], {"S1": e, "S2": -e, "A1": a1, "A2": a2, "OUT": v},
                {"V1": -i1, "V2": i2, "RW1": i1, "RW2": i2, "D1": i1, "D2": i2, "C1": ic, "RL": v / 18})
    return equations


@circuit("cold-doubler-full-wave", f"""Bias rail, full-wave doubler switched on
V1 S 0 SIN(0 20 50)
RW S A 1
D1 A POS DR
D2 NEG A DR
C1 POS 0 470u
C2 0 NEG 470u
RL POS NEG 820
{DR_CARD}
.end""", [0.0, 0.0], mode="cold-start", cycles=8)
def cold_doubler():
    """As the steady doubler."""
    d = Diode(**DR)

    def equations(t, x):
        p, n = x
        e = 20 * sin(W50 * t)

        def residual(a):
            up, gu = d(a - p)
            down, gd = d(n - a)
            return a + up - down - e, 1 + gu + gd
        a = root(residual, -25, 25)
        i1, i2 = d(a - p)[0], d(n - a)[0]
        il = (p - n) / 820
        return ([(i1 - il) / 470e-6, (il - i2) / 470e-6], {"S": e, "A": a, "POS": p, "NEG": n},
                {"V1": i2 - i1, "RW": i1 - i2, "D1": i1, "D2": i2, "C1": i1 - il, "C2": i2 - il, "RL": il})
    return equations


@circuit("cold-leakage", f"""Bridge fed through leakage inductance, switched on at the zero of the line
V1 S B SIN(0 30 50)
LW S X 1m
RW X A 0.5
RD A B 1meg
{BRIDGE_CARDS}
C1 OUT 0 2200u
RL OUT 0 20
{DR_CARD}
.end""", [0.0, 0.0], mode="cold-start", cycles=8)
def cold_leakage():
    """LW i' = e - w - RW i with w/RD + f(w, p) - r(w, p) = i."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        i, p = x
        e = 30 * sin(W50 * t)

        def residual(w):
            f, r, gf, gr = b(w, p)
            return w / 1e6 + f - r - i, 1e-6 + (gf + gr) / 2
        w = root(residual, -30, 30)
        f, r, _, _ = b(w, p)
        ic = f + r - p / 20
        return ([(e - w - 0.5 * i) / 1e-3, ic / 2200e-6],
                {**bridge_nodes(e, w, p), "X": (p + w) / 2 + 0.5 * i, "OUT": p},
                {**bridge_currents(f, r), "V1": -i, "LW": i, "RW": i, "RD": w / 1e6, "C1": ic, "RL": p / 20})
    return equations


@circuit("cold-choke-input", choke_cards("Transmitter bench rail switched on: overshoot of a choke-input filter",
                                         48, 50, "300m", 3, "470u", 60).replace("RDC", "RP P 0 1meg\nRDC"),
         [0.0, 0.0], mode="cold-start", cycles=12)
def cold_choke_input():
    """L j' = p - RDC j - v with f(e, p) + r(e, p) = j + p/RP."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        j, v = x
        e = 48 * sin(W50 * t)

        def residual(p):
            f, r, gf, gr = b(e, p)
            return p / 1e6 + j - f - r, 1e-6 + (gf + gr) / 2
        p = root(residual, -5, 60)
        f, r, _, _ = b(e, p)
        ic = j - v / 60
        return ([(p - 3 * j - v) / 0.3, ic / 470e-6],
                {"A": (p + e) / 2, "B": (p - e) / 2, "P": p, "Q": p - 3 * j, "OUT": v},
                {"V1": r - f, "D1": f, "D2": r, "D3": r, "D4": f, "RP": p / 1e6, "RDC": j, "L1": j, "C1": ic, "RL": v / 60})
    return equations


@circuit("cold-c-r-c", f"""Phono preamplifier rail switched on
V1 S B SIN(0 26 50)
RW S A 1.8
{BRIDGE_CARDS}
C1 OUT 0 1000u
R1 OUT OUT2 22
C2 OUT2 0 4700u
RL OUT2 0 270
{DR_CARD}
.end""", [0.0, 0.0], mode="cold-start", cycles=15)
def cold_crc():
    """C1 p' = f + r - (p-q)/R1, C2 q' = (p-q)/R1 - q/RL."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p, q = x
        e = 26 * sin(W50 * t)
        w, f, r = b.fed(e, 1.8, p)
        i1 = (p - q) / 22
        c1, c2 = f + r - i1, i1 - q / 270
        return ([c1 / 1000e-6, c2 / 4700e-6], {**bridge_nodes(e, w, p), "OUT": p, "OUT2": q},
                {**bridge_currents(f, r), "C1": c1, "R1": i1, "C2": c2, "RL": q / 270})
    return equations
