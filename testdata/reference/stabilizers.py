"""Low-drop and adjustable regulators, shunt references, and pass elements that run out of headroom."""

from math import sin

from circuits import circuit
from laws import Bridge, Diode, channel, root
from rectifiers import DR, DR_CARD, W50, fed_diode
from regulators import cards
from shunts import DZ12, DZ12_CARD, complementary, complementary_cards, darlington, darlington_cards, front
from variants import BRIDGE_CARDS


@circuit("low-drop-dropping-out", cards("Modem rail: low-drop regulator, out of regulation at every trough", 9.2, 0.4, "470u",
                                        "X1 IN 0 OUT LOWDROP\n*: rate X1 VOUT=5V VDO=0.4V IQ=2mA\nRL OUT 0 10"), [6.0])
def low_drop_dropping_out():
    """C1 p' = f + r - IQ - o/RL, o = min(5, p - 0.4)."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p = x[0]
        nodes, currents, j = front(t, p, 9.2, 0.4, b)
        o = min(5.0, p - 0.4)
        ic = j - 2e-3 - o / 10
        return ([ic / 470e-6], {**nodes, "IN": p, "OUT": o},
                {**currents, "C1": ic, "X1.in": o / 10 + 2e-3, "X1.out": -o / 10, "RL": o / 10})
    return equations


@circuit("low-drop-negative", f"""Negative bias rail: half-wave into a low-drop regulator that drops out
V1 S 0 SIN(0 13 50)
RW S K 1.2
D1 IN K DR
C1 0 IN 220u
X1 IN 0 OUT LOWDROP
*: rate X1 VOUT=-8V VDO=0.4V IQ=1.5mA
RL 0 OUT 120
{DR_CARD}
.end""", [10.0])
def low_drop_negative():
    """p = -IN: C1 p' = i - IQ - o/RL with o = min(8, p - 0.4) = -OUT; the diode conducts from IN to the winding."""
    d = Diode(**DR)

    def equations(t, x):
        p, e = x[0], 13 * sin(W50 * t)
        i, a = fed_diode(d, -e, 1.2, p)  # mirrored: a = -K
        o = min(8.0, p - 0.4)
        ic = i - 1.5e-3 - o / 120
        return ([ic / 220e-6], {"S": e, "K": -a, "IN": -p, "OUT": -o},
                {"V1": i, "RW": -i, "D1": i, "C1": ic, "X1.in": -o / 120 - 1.5e-3, "X1.out": o / 120, "RL": o / 120})
    return equations


@circuit("regulator-output-resistance", cards("Logic rail: regulator with output resistance and an output capacitor, dropping out",
                                              19, 0.8, "1000u", """X1 IN 0 OUT 7812
*: rate X1 VOUT=12V VDO=2V IQ=5mA Rout=0.1Ohm
C2 OUT 0 220u
RL OUT 0 20"""), [15.0, 11.8])
def regulator_output_resistance():
    """Io = (min(12, p-2) - o)/Rout, C1 p' = f + r - IQ - Io, C2 o' = Io - o/RL; Io stays above zero."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p, o = x
        nodes, currents, j = front(t, p, 19, 0.8, b)
        io = max(0.0, (min(12.0, p - 2) - o) / 0.1)
        c1, c2 = j - 5e-3 - io, io - o / 20
        return ([c1 / 1000e-6, c2 / 220e-6], {**nodes, "IN": p, "OUT": o},
                {**currents, "C1": c1, "X1.in": io + 5e-3, "X1.out": -io, "C2": c2, "RL": o / 20})
    return equations


def adjustable_cards(title, peak, capacitance, load):
    return cards(title, peak, 0.6, capacitance, f"""X1 IN ADJ OUT ADJUSTABLE
*: rate X1 VREF=1.25V VDO=2V IADJ=50uA
R1 OUT ADJ 240
R2 ADJ 0 1.8k
RL OUT 0 {load}""")


def adjustable(peak, capacitance, load):
    """Over the adjust pin a: o - a = min(1.25, p - a - 2), so o = min(a + 1.25, p - 2); (o-a)/R1 + IADJ = a/R2.

    Regulating: a = R2 (1.25/R1 + IADJ). In drop-out o = p - 2 and a = (o/R1 + IADJ)/(1/R1 + 1/R2).
    """
    b = Bridge(Diode(**DR))
    r1, r2, adj = 240.0, 1800.0, 50e-6
    fixed = r2 * (1.25 / r1 + adj)

    def equations(t, x):
        p = x[0]
        nodes, currents, j = front(t, p, peak, 0.6, b)
        o, a = fixed + 1.25, fixed
        if p - 2 < o:
            o = p - 2
            a = (o / r1 + adj) / (1 / r1 + 1 / r2)
        io = o / load + (o - a) / r1
        ic = j - io - adj
        return ([ic / capacitance], {**nodes, "IN": p, "ADJ": a, "OUT": o},
                {**currents, "C1": ic, "X1.in": io + adj, "X1.out": -io, "R1": (o - a) / r1, "R2": a / r2, "RL": o / load})
    return equations


@circuit("adjustable-regulating", adjustable_cards("Bench rail: adjustable regulator with its divider", 19, "2200u", 22), [16.0])
def adjustable_regulating():
    return adjustable(19, 2200e-6, 22)


@circuit("adjustable-dropping-out", adjustable_cards("Bench rail: adjustable regulator, reservoir too small", 16, "680u", 22), [13.0])
def adjustable_dropping_out():
    return adjustable(16, 680e-6, 22)


def reference_cards(title, peak, capacitance, load):
    return f"""{title}
V1 S B SIN(0 {peak} 50)
RW S A 1.5
{BRIDGE_CARDS.replace("OUT", "P")}
C1 P 0 {capacitance}
RZ P OUT 180
X1 OUT REF 0 TL431
*: part X1 TL431 pins=k,ref,a
*: rate X1 VREF=2.5V
R1 OUT REF 3.9k
R2 REF 0 1k
RL OUT 0 {load}
{DR_CARD}
.end"""


def reference(peak, capacitance, load):
    """C p' = f + r - (p-o)/RZ. The reference holds o at 2.5 V (R1+R2)/R2 as long as it takes current, else it is open."""
    b = Bridge(Diode(**DR))
    drain = 1 / load + 1 / 4900
    held = 2.5 * 4900 / 1000

    def equations(t, x):
        p = x[0]
        nodes, currents, j = front(t, p, peak, 1.5, b)
        o = min(held, p / 180 / (drain + 1 / 180))
        ir = (p - o) / 180
        ik = max(0.0, ir - o * drain)
        ic, i1 = j - ir, o / 4900
        return ([ic / capacitance], {**nodes, "P": p, "OUT": o, "REF": o * 1000 / 4900},
                {**currents, "C1": ic, "RZ": ir, "X1": ik, "R1": i1, "R2": i1, "RL": o / load})
    return equations


@circuit("shunt-reference-regulating", reference_cards("Converter reference: adjustable shunt always conducting", 24, "470u", 470), [20.0])
def shunt_reference_regulating():
    return reference(24, 470e-6, 470)


@circuit("source-follower-body", f"""Quiet rail: field-effect follower with body effect and channel-length modulation
V1 S B SIN(0 26 50)
RW S A 0.9
{BRIDGE_CARDS.replace("OUT", "P")}
C1 P 0 680u
R1 P G 1k
DZ 0 G DZ12
M1 P G OUT 0 NM W=400u L=20u
C2 OUT 0 22u
RL OUT 0 30
{DR_CARD}
{DZ12_CARD}
.model NM NMOS(VTO=1.8 KP=20m GAMMA=0.8 PHI=0.7 LAMBDA=0.03)
.end""", [22.0, 7.0])
def source_follower_body():
    """C1 p' = f + r - (p-g)/R1 - id, C2 o' = id - o/RL; (p-g)/R1 = -z(-g); the bulk is at ground, vbs = -o."""
    br, z = Bridge(Diode(**DR)), Diode(**DZ12)

    def equations(t, x):
        p, o = x

        def gate(g):
            iz, gz = z(-g)
            return -iz - (p - g) / 1000, gz + 1 / 1000
        g = root(gate, 0, 40)
        i = channel(g - o, p - o, 1.8, 0.4, LAMBDA=0.03, GAMMA=0.8, PHI=0.7, vbs=-o)
        nodes, currents, j = front(t, p, 26, 0.9, br)
        ir = (p - g) / 1000
        c1, c2 = j - ir - i, i - o / 30
        return ([c1 / 680e-6, c2 / 22e-6], {**nodes, "P": p, "G": g, "OUT": o},
                {**currents, "C1": c1, "R1": ir, "DZ": z(-g)[0], "M1": i, "C2": c2, "RL": o / 30})
    return equations


@circuit("darlington-dropping-out", darlington_cards("Solder station rail whose reservoir is too small: two followers in cascade drop out",
                                                     19, 0.4, "1000u", "470", 10), [14.0, 10.3])
def darlington_dropping_out():
    return darlington(19, 0.4, 1000e-6, 470, 10)


@circuit("complementary-dropping-out", complementary_cards("Lamp dimmer rail whose reservoir is too small: the feedback pair saturates",
                                                           18, 0.6, "680u", "470", 18), [14.0, 11.0])
def complementary_dropping_out():
    return complementary(18, 0.6, 680e-6, 470, 18)


@circuit("shunt-reference-dropping-out", reference_cards("Converter reference: adjustable shunt that lets go at the trough",
                                                         22, "150u", 330), [18.0])
def shunt_reference_dropping_out():
    return reference(22, 150e-6, 330)
