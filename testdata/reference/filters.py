"""Rectifiers with chokes and filter sections, and with leakage inductance."""

from math import cos, pi, sin

from circuits import circuit
from laws import Bridge, Diode, root, solve2
from rectifiers import DR, DR_CARD, W50
from variants import BRIDGE_CARDS, bridge_currents, bridge_nodes


def choke_input(peak, w, inductance, dcr, capacitance, load):
    """Bridge on a stiff winding, choke with resistance, capacitor and load.

    The choke current j = f + r is a function of w = e(t) and p, so p is taken as the state:
    j' = (p - dcr j - v)/L = (gf-gr)/2 w' - (gf+gr)/2 p'. It holds in both conduction modes.
    """
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p, v = x
        e, de = peak * sin(w * t), peak * w * cos(w * t)
        f, r, gf, gr = b(e, p)
        j = f + r
        dp = ((gf - gr) / 2 * de - (p - dcr * j - v) / inductance) / ((gf + gr) / 2)
        ic = j - v / load
        return ([dp, ic / capacitance], {"A": (p + e) / 2, "B": (p - e) / 2, "P": p, "Q": p - dcr * j, "OUT": v},
                {"V1": r - f, "D1": f, "D2": r, "D3": r, "D4": f, "RDC": j, "L1": j, "C1": ic, "RL": v / load})
    return equations


def choke_cards(title, peak, hertz, inductance, dcr, capacitance, load):
    return f"""{title}
V1 A B SIN(0 {peak} {hertz})
D1 A P DR
D2 B P DR
D3 0 A DR
D4 0 B DR
RDC P Q {dcr}
L1 Q OUT {inductance}
C1 OUT 0 {capacitance}
RL OUT 0 {load}
{DR_CARD}
.end"""


@circuit("choke-input-continuous", choke_cards("Transmitter bench rail, choke input, continuous current",
                                               48, 50, "300m", 3, "470u", 60), [0.0, 25.0])
def choke_input_continuous():
    """Above the critical inductance R/(3w) = 64 mH."""
    return choke_input(48, W50, 0.3, 3, 470e-6, 60)


@circuit("choke-input-discontinuous", choke_cards("Transmitter bench rail on a tiny load, choke below its critical value",
                                                  48, 50, "300m", 3, "470u", 1500), [40.0, 40.0])
def choke_input_discontinuous():
    """Below the critical inductance R/(3w) = 1.6 H."""
    return choke_input(48, W50, 0.3, 3, 470e-6, 1500)


@circuit("choke-input-60Hz", choke_cards("Organ supply, choke input at 60 Hz near its critical value",
                                         70, 60, "150m", 2, "220u", 180), [0.0, 40.0], period=1 / 60)
def choke_input_60hz():
    """Critical inductance R/(3w) = 159 mH: just discontinuous."""
    return choke_input(70, 2 * pi * 60, 0.15, 2, 220e-6, 180)


@circuit("choke-centre-tap", f"""Deflection rail, two half windings into a choke
V1 A1 0 SIN(0 90 50)
V2 0 A2 SIN(0 90 50)
D1 A1 P DR
D2 A2 P DR
L1 P Q 1
RDC Q OUT 25
C1 OUT 0 100u
RL OUT 0 400
{DR_CARD}
.end""", [0.13, 54.0])
def choke_centre_tap():
    """Continuous: the choke current j is a state, f(e-p) + f(-e-p) = j gives p."""
    d = Diode(**DR)

    def equations(t, x):
        j, v = x
        e = 90 * sin(W50 * t)

        def residual(p):
            i1, g1 = d(e - p)
            i2, g2 = d(-e - p)
            return j - i1 - i2, g1 + g2
        p = root(residual, -5, 95)
        i1, i2 = d(e - p)[0], d(-e - p)[0]
        ic = j - v / 400
        return ([(p - 25 * j - v) / 1, ic / 100e-6], {"A1": e, "A2": -e, "P": p, "Q": v + 25 * j, "OUT": v},
                {"V1": -i1, "V2": i2, "D1": i1, "D2": i2, "L1": j, "RDC": j, "C1": ic, "RL": v / 400})
    return equations


@circuit("filter-c-r-c", f"""Phono preamplifier rail, reservoir and one resistive section
V1 S B SIN(0 26 50)
RW S A 1.8
{BRIDGE_CARDS}
C1 OUT 0 1000u
R1 OUT OUT2 22
C2 OUT2 0 1000u
RL OUT2 0 270
{DR_CARD}
.end""", [23.0, 21.0])
def filter_crc():
    """C1 p' = f + r - (p-q)/R1, C2 q' = (p-q)/R1 - q/RL."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p, q = x
        e = 26 * sin(W50 * t)
        w, f, r = b.fed(e, 1.8, p)
        i1 = (p - q) / 22
        c1, c2 = f + r - i1, i1 - q / 270
        return ([c1 / 1000e-6, c2 / 1000e-6], {**bridge_nodes(e, w, p), "OUT": p, "OUT2": q},
                {**bridge_currents(f, r), "C1": c1, "R1": i1, "C2": c2, "RL": q / 270})
    return equations


@circuit("filter-c-l-c", f"""Receiver rail, reservoir and one choke section
V1 S B SIN(0 200 50)
RW S A 60
{BRIDGE_CARDS}
C1 OUT 0 22u
L1 OUT M 5
RDC M OUT2 150
C2 OUT2 0 33u
RL OUT2 0 3.3k
{DR_CARD}
.end""", [180.0, 0.05, 170.0])
def filter_clc():
    """C1 p' = f + r - j, L j' = p - RDC j - q, C2 q' = j - q/RL."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p, j, q = x
        e = 200 * sin(W50 * t)
        w, f, r = b.fed(e, 60, p)
        c1, c2 = f + r - j, j - q / 3300
        return ([c1 / 22e-6, (p - 150 * j - q) / 5, c2 / 33e-6],
                {**bridge_nodes(e, w, p), "OUT": p, "M": p - (p - 150 * j - q), "OUT2": q},
                {**bridge_currents(f, r), "C1": c1, "L1": j, "RDC": j, "C2": c2, "RL": q / 3300})
    return equations


@circuit("leakage-reservoir", f"""Bridge fed through leakage inductance, with reservoir
V1 S B SIN(0 30 50)
LW S X 2m
RW X A 0.5
RD A B 10meg
{BRIDGE_CARDS}
C1 OUT 0 2200u
RL OUT 0 20
{DR_CARD}
.end""", [0.0, 24.0])
def leakage_reservoir():
    """LW i' = e - w - RW i with w/RD + f(w, p) - r(w, p) = i, C p' = f + r - p/R.

    RD carries 3 uA; it gives the equations a time constant of 0.2 ns while the diodes block, not of 4 fs (LW GMIN).
    """
    b = Bridge(Diode(**DR))

    def equations(t, x):
        i, p = x
        e = 30 * sin(W50 * t)

        def residual(w):
            f, r, gf, gr = b(w, p)
            return w / 1e7 + f - r - i, 1e-7 + (gf + gr) / 2
        w = root(residual, -30, 30)
        f, r, _, _ = b(w, p)
        ic = f + r - p / 20
        return ([(e - w - 0.5 * i) / 2e-3, ic / 2200e-6],
                {**bridge_nodes(e, w, p), "X": (p + w) / 2 + 0.5 * i, "OUT": p},
                {**bridge_currents(f, r), "V1": -i, "LW": i, "RW": i, "RD": w / 1e7, "C1": ic, "RL": p / 20})
    return equations


@circuit("leakage-commutation", f"""Bridge fed through leakage inductance into a choke: overlap of the diagonals
V1 S B SIN(0 60 50)
LW S X 3m
RW X A 0.4
RD A B 100k
D1 A P DR
D2 B P DR
D3 0 A DR
D4 0 B DR
RP P 0 1meg
L1 P Q 100m
RDC Q OUT 0.5
C1 OUT 0 1000u
RL OUT 0 8
{DR_CARD}
.end""", [-3.0, 3.6, 30.0])
def leakage_commutation():
    """States: winding current i, choke current j, v. The node equations f - r + w/RD = i and
    f + r = j + p/RP have a symmetric matrix; while both diagonals conduct, i runs from -j to j.
    """
    b = Bridge(Diode(**DR))
    last = [0.0, 30.0]

    def equations(t, x):
        i, j, v = x
        e = 60 * sin(W50 * t)

        def residual(w, p):
            f, r, gf, gr = b(w, p)
            s, m = (gf + gr) / 2, (gf - gr) / 2
            return f - r + w / 1e5 - i, j + p / 1e6 - f - r, (s + 1e-5, -m), (-m, s + 1e-6)
        last[:] = w, p = solve2(residual, *last, limit=2.0)
        f, r, _, _ = b(w, p)
        ic = j - v / 8
        return ([(e - w - 0.4 * i) / 3e-3, (p - 0.5 * j - v) / 0.1, ic / 1000e-6],
                {"S": (p - w) / 2 + e, "X": (p + w) / 2 + 0.4 * i, "A": (p + w) / 2, "B": (p - w) / 2,
                 "P": p, "Q": v + 0.5 * j, "OUT": v},
                {**bridge_currents(f, r), "V1": -i, "LW": i, "RW": i, "RD": w / 1e5, "RP": p / 1e6,
                 "L1": j, "RDC": j, "C1": ic, "RL": v / 8})
    return equations
