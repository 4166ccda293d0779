"""Zener shunts, series pass transistors, and behavioural sources."""

from math import sin

from circuits import circuit
from laws import Bridge, Diode, bipolar, channel, root, solve2
from rectifiers import DR, DR_CARD, W50, fed_diode
from variants import BRIDGE_CARDS, bridge_currents, bridge_nodes

DZ12 = dict(IS=1e-14, N=1, RS=4, BV=12, IBV=5e-3)
DZ12_CARD = ".model DZ12 D(IS=10f N=1 RS=4 BV=12 IBV=5m)"


def front(t, p, peak, winding, b):
    """Bridge front end: voltages of its nodes, its currents, and the current f + r into the DC side."""
    e = peak * sin(W50 * t)
    w, f, r = b.fed(e, winding, p)
    return bridge_nodes(e, w, p), bridge_currents(f, r), f + r


def shunt_cards(title, peak, capacitance, feed, load):
    return f"""{title}
V1 S B SIN(0 {peak} 50)
RW S A 2
{BRIDGE_CARDS.replace("OUT", "P")}
C1 P 0 {capacitance}
RZ P OUT {feed}
DZ 0 OUT DZ12
RL OUT 0 {load}
{DR_CARD}
{DZ12_CARD}
.end"""


def shunt(peak, capacitance, feed, load):
    """C p' = f + r - (p-o)/RZ with (p-o)/RZ = o/RL - z(-o), z the zener from anode (ground) to cathode."""
    b, z = Bridge(Diode(**DR)), Diode(**DZ12)

    def equations(t, x):
        p = x[0]

        def residual(o):
            i, g = z(-o)
            return o / load - i - (p - o) / feed, 1 / load + g + 1 / feed
        o = root(residual, 0, 20)
        nodes, currents, j = front(t, p, peak, 2, b)
        iz, ir = z(-o)[0], (p - o) / feed
        ic = j - ir
        return ([ic / capacitance], {**nodes, "P": p, "OUT": o},
                {**currents, "C1": ic, "RZ": ir, "DZ": iz, "RL": o / load})
    return equations


@circuit("zener-shunt-regulating", shunt_cards("Reference rail, zener always conducting", 24, "470u", 150, 330), [20.0])
def zener_shunt_regulating():
    return shunt(24, 470e-6, 150, 330)


@circuit("zener-shunt-dropping-out", shunt_cards("Reference rail too heavily loaded: zener off at the trough",
                                                 20, "220u", 100, 220), [17.0])
def zener_shunt_dropping_out():
    return shunt(20, 220e-6, 100, 220)


@circuit("zener-shunt-off", shunt_cards("Reference rail far too heavily loaded: zener never conducts",
                                        18, "470u", 150, 150), [15.0])
def zener_shunt_off():
    return shunt(18, 470e-6, 150, 150)


@circuit("zener-half-wave", f"""Relay sensing rail, half-wave with a zener and a second capacitor
V1 S 0 SIN(0 30 50)
RW S A 5
D1 A P DR
C1 P 0 220u
RZ P OUT 680
DZ 0 OUT DZ12
C2 OUT 0 47u
RL OUT 0 1.8k
{DR_CARD}
{DZ12_CARD}
.end""", [26.0, 12.0])
def zener_half_wave():
    """C1 p' = i - (p-o)/RZ, C2 o' = (p-o)/RZ - o/RL + z(-o)."""
    d, z = Diode(**DR), Diode(**DZ12)

    def equations(t, x):
        p, o = x
        e = 30 * sin(W50 * t)
        i, a = fed_diode(d, e, 5, p)
        iz, ir = z(-o)[0], (p - o) / 680
        c1, c2 = i - ir, ir - o / 1800 + iz
        return ([c1 / 220e-6, c2 / 47e-6], {"S": e, "A": a, "P": p, "OUT": o},
                {"V1": -i, "RW": i, "D1": i, "C1": c1, "RZ": ir, "DZ": iz, "C2": c2, "RL": o / 1800})
    return equations


@circuit("zener-clipper", f"""Sine clipped by two zeners back to back, no reservoir
V1 IN 0 SIN(0 40 50)
R1 IN OUT 470
DZ1 OUT M DZ12
DZ2 0 M DZ12
{DZ12_CARD}
.end""", [])
def zener_clipper():
    """Anodes out: through the pair flows i = z(o - m) = -z(-m); i(o) rises, and (e-o)/R = i."""
    z = Diode(**DZ12)

    def pair(o):
        def residual(m):
            i1, g1 = z(o - m)
            i2, g2 = z(-m)
            return -i1 - i2, g1 + g2
        m = root(residual, -50, 50)
        (i, g1), (_, g2) = z(o - m), z(-m)
        return m, i, g1 * g2 / (g1 + g2)

    def equations(t, x):
        e = 40 * sin(W50 * t)

        def residual(o):
            _, i, g = pair(o)
            return i - (e - o) / 470, g + 1 / 470
        o = root(residual, -50, 50)
        m, i, _ = pair(o)
        ir = (e - o) / 470
        return [], {"IN": e, "OUT": o, "M": m}, {"V1": -ir, "R1": ir, "DZ1": i, "DZ2": z(-m)[0]}
    return equations


QN = dict(IS=1e-14, BF=60, BR=2)
QN_CARD = ".model QN NPN(IS=10f BF=60 BR=2)"


@circuit("series-pass", f"""Tape deck rail, zener and emitter follower
V1 S B SIN(0 24 50)
RW S A 1
{BRIDGE_CARDS.replace("OUT", "P")}
C1 P 0 2200u
RB P Z 560
DZ 0 Z DZ12
Q1 P Z OUT QN
C2 OUT 0 10u
RL OUT 0 33
{DR_CARD}
{DZ12_CARD}
{QN_CARD}
.end""", [20.0, 11.4])
def series_pass():
    """C1 p' = f + r - (p-b)/RB - ic, C2 o' = ic + ib - o/RL; (p-b)/RB + z(-b) = ib(b-o, b-p) gives b."""
    br, z = Bridge(Diode(**DR)), Diode(**DZ12)

    def equations(t, x):
        p, o = x

        def base(b):
            iz, gz = z(-b)
            _, ib = bipolar(b - o, b - p, **QN)
            _, ib2 = bipolar(b - o + 1e-7, b - p + 1e-7, **QN)
            return ib - iz - (p - b) / 560, (ib2 - ib) / 1e-7 + gz + 1 / 560
        b = root(base, o - 1, min(o + 1, p + 1))
        ic, ib = bipolar(b - o, b - p, **QN)
        nodes, currents, j = front(t, p, 24, 1, br)
        ir = (p - b) / 560
        c1, c2 = j - ir - ic, ic + ib - o / 33
        return ([c1 / 2200e-6, c2 / 10e-6], {**nodes, "P": p, "Z": b, "OUT": o},
                {**currents, "C1": c1, "RB": ir, "DZ": z(-b)[0], "Q1.c": ic, "Q1.b": ib, "C2": c2, "RL": o / 33})
    return equations


def slopes(away):
    """Two residuals of two voltages, with their matrix by differences."""
    def residual(a, b):
        r, ra, rb = away(a, b), away(a + 1e-7, b), away(a, b + 1e-7)
        return *r, ((ra[0] - r[0]) / 1e-7, (rb[0] - r[0]) / 1e-7), ((ra[1] - r[1]) / 1e-7, (rb[1] - r[1]) / 1e-7)
    return residual


def darlington_cards(title, peak, winding, capacitance, feed, load):
    return f"""{title}
V1 S B SIN(0 {peak} 50)
RW S A {winding}
{BRIDGE_CARDS.replace("OUT", "P")}
C1 P 0 {capacitance}
RB P Z {feed}
DZ 0 Z DZ12
Q1 P Z M QN
Q2 P M OUT QN
RM M OUT 220
C2 OUT 0 22u
RL OUT 0 {load}
{DR_CARD}
{DZ12_CARD}
{QN_CARD}
.end"""


def darlington(peak, winding, capacitance, feed, load):
    """Inner node m: ie1(b-m) = ib2(m-o) + (m-o)/RM; base b as before."""
    br, z = Bridge(Diode(**DR)), Diode(**DZ12)

    last = [12.0, 11.3]

    def equations(t, x):
        p, o = x

        def away(b, m):
            (c1, b1), (c2, b2) = bipolar(b - m, b - p, **QN), bipolar(m - o, m - p, **QN)
            return b1 - z(-b)[0] - (p - b) / feed, b2 + (m - o) / 220 - c1 - b1
        last[:] = b, m = solve2(slopes(away), *last, limit=0.05)
        (c1, b1), (c2, b2) = bipolar(b - m, b - p, **QN), bipolar(m - o, m - p, **QN)
        nodes, currents, j = front(t, p, peak, winding, br)
        ir, im = (p - b) / feed, (m - o) / 220
        i1, i2 = j - ir - c1 - c2, c2 + b2 + im - o / load
        return ([i1 / capacitance, i2 / 22e-6], {**nodes, "P": p, "Z": b, "M": m, "OUT": o},
                {**currents, "C1": i1, "RB": ir, "DZ": z(-b)[0], "Q1.c": c1, "Q1.b": b1, "Q2.c": c2, "Q2.b": b2,
                 "RM": im, "C2": i2, "RL": o / load})
    return equations


@circuit("series-pass-darlington", darlington_cards("Solder station rail, zener and two followers in cascade",
                                                    26, 0.4, "4700u", "1.5k", 10), [22.0, 10.7])
def series_pass_darlington():
    return darlington(26, 0.4, 4700e-6, 1500, 10)


@circuit("series-pass-dropping-out", f"""Tape deck rail on a weak winding: the follower saturates at the trough
V1 S B SIN(0 17 50)
RW S A 1
{BRIDGE_CARDS.replace("OUT", "P")}
C1 P 0 1000u
RB P Z 330
DZ 0 Z DZ12
Q1 P Z OUT QN
C2 OUT 0 10u
RL OUT 0 39
{DR_CARD}
{DZ12_CARD}
{QN_CARD}
.end""", [13.0, 11.0])
def series_pass_dropping_out():
    """As the series pass, other values."""
    br, z = Bridge(Diode(**DR)), Diode(**DZ12)

    def equations(t, x):
        p, o = x

        def base(b):
            iz, gz = z(-b)
            _, ib = bipolar(b - o, b - p, **QN)
            _, ib2 = bipolar(b - o + 1e-7, b - p + 1e-7, **QN)
            return ib - iz - (p - b) / 330, (ib2 - ib) / 1e-7 + gz + 1 / 330
        b = root(base, o - 1, min(o + 1, p + 1))
        ic, ib = bipolar(b - o, b - p, **QN)
        nodes, currents, j = front(t, p, 17, 1, br)
        ir = (p - b) / 330
        c1, c2 = j - ir - ic, ic + ib - o / 39
        return ([c1 / 1000e-6, c2 / 10e-6], {**nodes, "P": p, "Z": b, "OUT": o},
                {**currents, "C1": c1, "RB": ir, "DZ": z(-b)[0], "Q1.c": ic, "Q1.b": ib, "C2": c2, "RL": o / 39})
    return equations


def complementary_cards(title, peak, winding, capacitance, feed, load):
    return f"""{title}
V1 S B SIN(0 {peak} 50)
RW S A {winding}
{BRIDGE_CARDS.replace("OUT", "P")}
C1 P 0 {capacitance}
RB P Z {feed}
DZ 0 Z DZ12
Q1 K Z OUT QN
RK P K 470
Q2 OUT K P QP
C2 OUT 0 22u
RL OUT 0 {load}
{DR_CARD}
{DZ12_CARD}
{QN_CARD}
.model QP PNP(IS=20f BF=45 BR=2)
.end"""


def complementary(peak, winding, capacitance, feed, load):
    """Base b of the driver meets (p-b)/RB + z(-b) = ib1; its collector k meets ic1 = (p-k)/RK + ib2(p-k)."""
    br, z = Bridge(Diode(**DR)), Diode(**DZ12)
    qp = dict(IS=20e-15, BF=45, BR=2)

    last = [12.0, 20.0]

    def equations(t, x):
        p, o = x

        def away(b, k):
            (c1, b1), (c2, b2) = bipolar(b - o, b - k, **QN), bipolar(p - k, o - k, **qp)
            return b1 - z(-b)[0] - (p - b) / feed, c1 - (p - k) / 470 - b2
        last[:] = b, k = solve2(slopes(away), *last, limit=0.05)
        (c1, b1), (c2, b2) = bipolar(b - o, b - k, **QN), bipolar(p - k, o - k, **qp)
        nodes, currents, j = front(t, p, peak, winding, br)
        ir, ik = (p - b) / feed, (p - k) / 470
        i1 = j - ir - ik - c2 - b2
        i2 = c1 + b1 + c2 - o / load
        return ([i1 / capacitance, i2 / 22e-6], {**nodes, "P": p, "Z": b, "K": k, "OUT": o},
                {**currents, "C1": i1, "RB": ir, "DZ": z(-b)[0], "Q1.c": c1, "Q1.b": b1, "Q2.c": -c2, "Q2.b": -b2,
                 "RK": ik, "C2": i2, "RL": o / load})
    return equations


@circuit("series-pass-complementary", complementary_cards("Lamp dimmer rail, feedback pair of an NPN driver and a PNP pass transistor",
                                                          25, 0.6, "3300u", "1k", 18), [21.0, 11.4])
def series_pass_complementary():
    return complementary(25, 0.6, 3300e-6, 1000, 18)


@circuit("source-follower", f"""Quiet rail: field-effect follower on a filtered zener
V1 S B SIN(0 26 50)
RW S A 0.9
{BRIDGE_CARDS.replace("OUT", "P")}
C1 P 0 1000u
R1 P G 1k
DZ 0 G DZ12
M1 P G OUT OUT NM W=100u L=100u
C2 OUT 0 22u
RL OUT 0 40
{DR_CARD}
{DZ12_CARD}
.model NM NMOS(VTO=2.5 KP=0.4)
.end""", [22.0, 8.0])
def source_follower():
    """C1 p' = f + r - (p-g)/R1 - id, C2 o' = id - o/RL; (p-g)/R1 = -z(-g)."""
    br, z = Bridge(Diode(**DR)), Diode(**DZ12)

    def equations(t, x):
        p, o = x

        def gate(g):
            iz, gz = z(-g)
            return -iz - (p - g) / 1000, gz + 1 / 1000
        g = root(gate, 0, 40)
        i = channel(g - o, p - o, 2.5, 0.4)
        nodes, currents, j = front(t, p, 26, 0.9, br)
        ir = (p - g) / 1000
        c1, c2 = j - ir - i, i - o / 40
        return ([c1 / 1000e-6, c2 / 22e-6], {**nodes, "P": p, "G": g, "OUT": o},
                {**currents, "C1": c1, "R1": ir, "DZ": z(-g)[0], "M1": i, "C2": c2, "RL": o / 40})
    return equations


@circuit("behavioural-rectifier", f"""Ideal full-wave rectifier as a behavioural source ahead of a reservoir
V1 S 0 SIN(0 20 50)
R1 S 0 1k
B1 X 0 V=abs(V(S))
RW X A 0.5
D1 A OUT DR
C1 OUT 0 1000u
RL OUT 0 47
{DR_CARD}
.end""", [17.0])
def behavioural_rectifier():
    """Half-wave rectifier fed with |e|."""
    d = Diode(**DR)

    def equations(t, x):
        v, e = x[0], 20 * sin(W50 * t)
        i, a = fed_diode(d, abs(e), 0.5, v)
        ic = i - v / 47
        return ([ic / 1000e-6], {"S": e, "X": abs(e), "A": a, "OUT": v},
                {"V1": -e / 1000, "R1": e / 1000, "B1": -i, "RW": i, "D1": i, "C1": ic, "RL": v / 47})
    return equations
