"""Further transients from rest: opposite rails, doublers, chokes, regulators, inrush limiters."""

from math import sin

from circuits import circuit
from coldstarts import bridge, bridge_cards
from filters import choke_cards
from laws import Bridge, Diode, root
from rectifiers import DR, DR_CARD, W50
from regulators import cards
from shunts import front


@circuit("cold-dual-rail", f"""Filter bank supply switched on: unequal reservoirs and a load from rail to rail
V1 S1 0 SIN(0 22 50)
V2 0 S2 SIN(0 22 50)
RW1 S1 A1 0.6
RW2 S2 A2 0.6
D1 A1 POS DR
D2 A2 POS DR
D3 NEG A1 DR
D4 NEG A2 DR
C1 POS 0 4700u
C2 0 NEG 1000u
RL1 POS 0 56
RL2 0 NEG 150
RL3 POS NEG 100
{DR_CARD}
.end""", [0.0, 0.0], mode="cold-start", cycles=10)
def cold_dual_rail():
    """C1 p' = i1 + i2 - p/RL1 - (p-n)/RL3, C2 n' = -(i3 + i4) - n/RL2 + (p-n)/RL3; each winding end feeds both rails."""
    d = Diode(**DR)

    def end(e, p, n):
        def residual(a):
            up, gu = d(a - p)
            down, gd = d(n - a)
            return a + 0.6 * (up - down) - e, 1 + 0.6 * (gu + gd)
        a = root(residual, -abs(e) - 1, abs(e) + 1)
        return a, d(a - p)[0], d(n - a)[0]

    def equations(t, x):
        p, n = x
        e = 22 * sin(W50 * t)
        a1, i1, i3 = end(e, p, n)
        a2, i2, i4 = end(-e, p, n)
        across = (p - n) / 100
        c1, c2 = i1 + i2 - p / 56 - across, i3 + i4 + n / 150 - across
        return ([c1 / 4700e-6, -c2 / 1000e-6], {"S1": e, "S2": -e, "A1": a1, "A2": a2, "POS": p, "NEG": n},
                {"V1": i3 - i1, "V2": i2 - i4, "RW1": i1 - i3, "RW2": i2 - i4, "D1": i1, "D2": i2, "D3": i3, "D4": i4,
                 "C1": c1, "C2": c2, "RL1": p / 56, "RL2": -n / 150, "RL3": across})
    return equations


@circuit("cold-doubler-half-wave", f"""Tuning rail, half-wave doubler switched on at the zero of the line
V1 S 0 SIN(0 14 50)
RW S A 2
C1 A M 470u
D1 0 M DR
D2 M OUT DR
C2 OUT 0 220u
RL OUT 0 2.2k
{DR_CARD}
.end""", [0.0, 0.0], mode="cold-start", cycles=10)
def cold_doubler_half_wave():
    """u = v(A) - v(M) across C1: C1 u' = is, C2 v' = i2 - v/R; m = e - RW is - u with is = i2 - i1."""
    d = Diode(**DR)

    def equations(t, x):
        u, v = x
        e = 14 * sin(W50 * t)

        def residual(m):
            i1, g1 = d(-m)
            i2, g2 = d(m - v)
            return m + u - e + 2 * (i2 - i1), 1 + 2 * (g1 + g2)
        m = root(residual, -30, 60)
        i1, i2 = d(-m)[0], d(m - v)[0]
        s = i2 - i1
        return ([s / 470e-6, (i2 - v / 2200) / 220e-6], {"S": e, "A": m + u, "M": m, "OUT": v},
                {"V1": -s, "RW": s, "C1": s, "D1": i1, "D2": i2, "C2": i2 - v / 2200, "RL": v / 2200})
    return equations


@circuit("cold-regulator", cards("Radio rail switched on: the regulator charges a large output capacitor in drop-out", 22, 0.8, "1000u",
                                 """X1 IN 0 OUT 7812
*: rate X1 VOUT=12V VDO=2V IQ=5mA Rout=0.2Ohm
C2 OUT 0 1000u
RL OUT 0 24"""), [0.0, 0.0], mode="cold-start", cycles=10)
def cold_regulator():
    """Io = (min(12, p-2) - o)/Rout or zero, C1 p' = f + r - IQ - Io, C2 o' = Io - o/RL.

    IQ is drawn from the first instant, by the law; below 50 mV the solver lets it fade.
    """
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p, o = x
        nodes, currents, j = front(t, p, 22, 0.8, b)
        io = max(0.0, (min(12.0, p - 2) - o) / 0.2)
        c1, c2 = j - 5e-3 - io, io - o / 24
        return ([c1 / 1000e-6, c2 / 1000e-6], {**nodes, "IN": p, "OUT": o},
                {**currents, "C1": c1, "X1.in": io + 5e-3, "X1.out": -io, "C2": c2, "RL": o / 24})
    return equations


@circuit("cold-limiter", bridge_cards("Welder control supply: cold inrush limiter and fuse ahead of a large reservoir",
                                      "SIN(0 34 50)", 5.25, "10000u", 40)
         .replace("RW S A 5.25", "RN S F 5\nRF F A 0.25\n*: rate RN Rcold=5Ohm Rhot=0.2Ohm Imax=3A\n*: rate RF IN=2A"),
         [0.0], mode="cold-start", cycles=12)
def cold_limiter():
    """The bridge behind RN + RF, RN as drawn: cold."""
    plain = bridge(34, W50, 0, 5.25, 10000e-6, 40)

    def equations(t, x):
        slopes, nodes, currents = plain(t, x)
        i = currents.pop("RW")
        return slopes, {**nodes, "F": nodes["A"] + 0.25 * i}, {**currents, "RN": i, "RF": i}
    return equations


@circuit("cold-choke-light-load", choke_cards("Transmitter bench rail switched on with a light load: the choke current stops "
                                              "after the overshoot", 48, 50, "150m", 2, "220u", "2.2k").replace("RDC", "RP P 0 1meg\nRDC"),
         [0.0, 0.0], mode="cold-start", cycles=12)
def cold_choke_light_load():
    """L j' = p - RDC j - v with f(e, p) + r(e, p) = j + p/RP."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        j, v = x
        e = 48 * sin(W50 * t)

        def residual(p):
            f, r, gf, gr = b(e, p)
            return p / 1e6 + j - f - r, 1e-6 + (gf + gr) / 2
        p = root(residual, -5, 120)
        f, r, _, _ = b(e, p)
        ic = j - v / 2200
        return ([(p - 2 * j - v) / 0.15, ic / 220e-6],
                {"A": (p + e) / 2, "B": (p - e) / 2, "P": p, "Q": p - 2 * j, "OUT": v},
                {"V1": r - f, "D1": f, "D2": r, "D3": r, "D4": f, "RP": p / 1e6, "RDC": j, "L1": j, "C1": ic, "RL": v / 2200})
    return equations
