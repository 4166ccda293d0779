"""Rectifiers with what real netlists add: ammeters, other frequencies, series resistance, ladders, no load."""

from math import cos, pi, sin

from circuits import circuit
from laws import Bridge, Diode, root, solve2
from rectifiers import DR, DR_CARD, W50, fed_diode

BRIDGE_CARDS = """D1 A OUT DR
D2 B OUT DR
D3 0 A DR
D4 0 B DR"""


def bridge_nodes(e, w, p):
    """Nodes of a bridge behind a winding resistance, DC minus at ground."""
    return {"S": (p - w) / 2 + e, "A": (p + w) / 2, "B": (p - w) / 2}


def bridge_currents(f, r):
    return {"V1": r - f, "RW": f - r, "D1": f, "D2": r, "D3": r, "D4": f}


@circuit("ammeters", f"""Half-wave feeder with current probes in every branch
V1 S 0 SIN(0 24 50)
VA1 S S1 0
RW S1 A 1.5
VA2 A A1 0
D1 A1 K DR
VA3 K OUT 0
C1 OUT C 1000u
VA4 C 0 0
RL OUT L 220
VA5 L 0 0
{DR_CARD}
.end""", [20.0])
def ammeters():
    """The half-wave rectifier with winding resistance; each 0 V source carries the current of its branch."""
    d = Diode(**DR)

    def equations(t, x):
        v, e = x[0], 24 * sin(W50 * t)
        i, a = fed_diode(d, e, 1.5, v)
        il = v / 220
        ic = i - il
        return ([ic / 1000e-6], {"S": e, "S1": e, "A": a, "A1": a, "K": v, "OUT": v, "C": 0.0, "L": 0.0},
                {"V1": -i, "VA1": i, "RW": i, "VA2": i, "D1": i, "VA3": i, "C1": ic, "VA4": ic, "RL": il, "VA5": il})
    return equations


@circuit("capacitor-across-source", f"""Half-wave feeder with a suppression capacitor across the winding
V1 IN 0 SIN(0 32 50)
CX IN 0 220n
D1 IN OUT DR
C1 OUT 0 330u
RL OUT 0 680
{DR_CARD}
.end""", [30.0], closed_form={("CX", "ripple-current-rms"): 32 / 2 ** 0.5 * W50 * 220e-9})
def capacitor_across_source():
    """i(CX) = C de/dt = w C V cos(w t)."""
    d = Diode(**DR)

    def equations(t, x):
        v, e = x[0], 32 * sin(W50 * t)
        ix = 220e-9 * 32 * W50 * cos(W50 * t)
        i, _ = d(e - v)
        ic = i - v / 680
        return [ic / 330e-6], {"IN": e, "OUT": v}, {"V1": -i - ix, "CX": ix, "D1": i, "C1": ic, "RL": v / 680}
    return equations


@circuit("bridge-60Hz", f"""Alarm panel supply at 60 Hz
V1 S B SIN(0 25.5 60)
RW S A 1.1
{BRIDGE_CARDS}
C1 OUT 0 1500u
RL OUT 0 75
{DR_CARD}
.end""", [23.0], period=1 / 60)
def bridge_60hz():
    """Bridge with winding resistance at 60 Hz."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p, e = x[0], 25.5 * sin(2 * pi * 60 * t)
        w, f, r = b.fed(e, 1.1, p)
        ic = f + r - p / 75
        return ([ic / 1500e-6], {**bridge_nodes(e, w, p), "OUT": p}, {**bridge_currents(f, r), "C1": ic, "RL": p / 75})
    return equations


@circuit("bridge-400Hz", f"""Cabin intercom supply at 400 Hz
V1 S B SIN(0 40 400)
RW S A 0.45
{BRIDGE_CARDS}
C1 OUT 0 150u
RL OUT 0 90
{DR_CARD}
.end""", [37.0], period=1 / 400)
def bridge_400hz():
    """Bridge with winding resistance at 400 Hz."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p, e = x[0], 40 * sin(2 * pi * 400 * t)
        w, f, r = b.fed(e, 0.45, p)
        ic = f + r - p / 90
        return ([ic / 150e-6], {**bridge_nodes(e, w, p), "OUT": p}, {**bridge_currents(f, r), "C1": ic, "RL": p / 90})
    return equations


@circuit("bridge-esr", f"""Bridge with the series resistance of its reservoir drawn
V1 S B SIN(0 19 50)
RW S A 0.6
{BRIDGE_CARDS}
RESR OUT C 0.12
C1 C 0 2200u
RL OUT 0 27
{DR_CARD}
.end""", [15.0])
def bridge_esr():
    """u across C1: C u' = (p - u)/ESR with f + r = p/R + (p - u)/ESR and w + RW (f - r) = e."""
    b = Bridge(Diode(**DR))
    last = [0.0, 15.0]

    def equations(t, x):
        u, e = x[0], 19 * sin(W50 * t)

        def residual(w, p):
            f, r, gf, gr = b(w, p)
            s, m = (gf + gr) / 2, (gf - gr) / 2
            return (w - e) / 0.6 + f - r, p / 27 + (p - u) / 0.12 - f - r, (1 / 0.6 + s, -m), (-m, 1 / 27 + 1 / 0.12 + s)
        last[:] = w, p = solve2(residual, *last, limit=2.0)
        f, r, _, _ = b(w, p)
        ic = (p - u) / 0.12
        return ([ic / 2200e-6], {**bridge_nodes(e, w, p), "OUT": p, "C": u},
                {**bridge_currents(f, r), "RESR": ic, "C1": ic, "RL": p / 27})
    return equations


@circuit("unloaded", f"""Standby rail that nothing loads but a bleeder, time constant 220 s
V1 S B SIN(0 28 50)
RW S A 2
{BRIDGE_CARDS}
C1 OUT 0 2200u
RBLEED OUT 0 100k
{DR_CARD}
.end""", [27.3], rtol=1e-12, second=("LSODA", 1e-11))
def unloaded():
    """Bridge with a very light load: multiplier of the period map exp(-T/RC) or closer to 1."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p, e = x[0], 28 * sin(W50 * t)
        w, f, r = b.fed(e, 2, p)
        ic = f + r - p / 100e3
        return ([ic / 2200e-6], {**bridge_nodes(e, w, p), "OUT": p},
                {**bridge_currents(f, r), "C1": ic, "RBLEED": p / 100e3})
    return equations


@circuit("half-wave-negative", f"""Grid bias rail, negative half-wave with a phase-shifted source
V1 S 0 SIN(0 46 60 0 0 35)
RW S K 12
D1 OUT K DR
C1 0 OUT 47u
RL OUT 0 5.6k
{DR_CARD}
.end""", [-43.0], period=1 / 60)
def half_wave_negative():
    """n < 0: C n' = -(i + n/R), i = f(n - k), k = e + RW i."""
    d = Diode(**DR)

    def equations(t, x):
        n, e = x[0], 46 * sin(2 * pi * 60 * t + 35 * pi / 180)
        i, a = fed_diode(d, -e, 12, -n)  # mirrored: a = -k
        ic = i + n / 5600  # into C1 from ground to OUT
        return [-ic / 47e-6], {"S": e, "K": -a, "OUT": n}, {"V1": i, "RW": -i, "D1": i, "C1": ic, "RL": n / 5600}
    return equations


def ladder_cards(title, value, load):
    return "\n".join(
        [title, "V1 S 0 SIN(0 60 50)", "RW S N0 100"]
        + ["C%d %s N%d %s" % (k, "N%d" % (k - 2) if k > 2 else ("N0" if k == 1 else "0"), k, value) for k in range(1, 13)]
        + ["D%d %s N%d DR" % (k, "N%d" % (k - 1) if k > 1 else "0", k) for k in range(1, 13)]
        + ["RL N12 0 " + load, DR_CARD, ".end"])


def ladder(capacitance, load):
    """Push column C1 C3 .. C11 from N0, smoothing column C2 C4 .. C12 from ground, diodes D1 0-N1, D2 N1-N2, ..

    u[k] is the voltage of C(k+1), lower node less upper node. All push nodes move with N0 = e - RW is, where
    is = sum over odd k of (i(k+1) - i(k)): one unknown. Each capacitor carries what its upper nodes give away.
    """
    d = Diode(**DR)

    def nodes(a, u):
        n = [a]
        for k in range(1, 13):
            below = n[k - 2] if k > 2 else (a if k == 1 else 0.0)
            n.append(below - u[k - 1])
        return n

    def equations(t, u):
        e = 60 * sin(W50 * t)

        def residual(a):
            n = nodes(a, u)
            value, slope = (a - e) / 100, 1 / 100
            for k in range(1, 13):
                i, g = d((n[k - 1] if k > 1 else 0.0) - n[k])
                value += i if k % 2 == 0 else -i
                slope += g
            return value, slope
        a = root(residual, -70, 70)
        n = nodes(a, u)
        i = [0.0] + [d((n[k - 1] if k > 1 else 0.0) - n[k])[0] for k in range(1, 13)] + [n[12] / load]
        c = [0.0] * 15
        for k in range(12, 0, -1):
            c[k] = c[k + 2] + i[k + 1] - i[k]
        named = {"V1": -c[1], "RW": c[1], "RL": n[12] / load}
        named.update({"C%d" % k: c[k] for k in range(1, 13)})
        named.update({"D%d" % k: i[k] for k in range(1, 13)})
        return [c[k] / capacitance for k in range(1, 13)], {"S": e, **{"N%d" % k: n[k] for k in range(13)}}, named
    return equations


@circuit("ladder-6", ladder_cards("Ioniser bias, ladder of six doubling stages", "1u", "10meg"), [-58.0] + [-115.0] * 11,
         second=("LSODA", 1e-9), plain=60)
def ladder_6():
    return ladder(1e-6, 10e6)


@circuit("ladder-6-loaded", ladder_cards("Ioniser bias, ladder of six doubling stages loaded to half its voltage", "4.7u", "470k"),
         [-55.0] + [-75.0] * 11, second=("LSODA", 1e-9), plain=60)
def ladder_6_loaded():
    return ladder(4.7e-6, 470e3)


@circuit("schottky-24V", """Lamp driver, bridge of low-drop diodes at 8 A surge
V1 S B SIN(0 27 50)
RW S A 0.22
D1 A OUT DS
D2 B OUT DS
D3 0 A DS
D4 0 B DS
C1 OUT 0 10000u
RL OUT 0 9
.model DS D(IS=2u N=1.05 RS=0.012)
.end""", [24.0])
def schottky():
    """Bridge with winding resistance, other diodes and a heavy load."""
    b = Bridge(Diode(IS=2e-6, N=1.05, RS=0.012))

    def equations(t, x):
        p, e = x[0], 27 * sin(W50 * t)
        w, f, r = b.fed(e, 0.22, p)
        ic = f + r - p / 9
        return ([ic / 10000e-6], {**bridge_nodes(e, w, p), "OUT": p}, {**bridge_currents(f, r), "C1": ic, "RL": p / 9})
    return equations


@circuit("bridge-timing", f"""Bridge and reservoir on which the integrators of SciPy are timed
V1 S B SIN(0 21.2 50)
RW S A 0.8
{BRIDGE_CARDS.replace("DR", "DT")}
C1 OUT 0 2200u
RL OUT 0 33
.model DT D(IS=5n N=1.8 RS=0)
.end""", [17.0])
def bridge_timing():
    """Bridge with winding resistance, diodes without series resistance."""
    b = Bridge(Diode(IS=5e-9, N=1.8))

    def equations(t, x):
        p, e = x[0], 21.2 * sin(W50 * t)
        w, f, r = b.fed(e, 0.8, p)
        ic = f + r - p / 33
        return ([ic / 2200e-6], {**bridge_nodes(e, w, p), "OUT": p}, {**bridge_currents(f, r), "C1": ic, "RL": p / 33})
    return equations


@circuit("six-pulse", f"""Workshop bus, three-phase bridge on a floating star
VU U N SIN(0 34 50)
VV V N SIN(0 34 50 0 0 -120)
VW W N SIN(0 34 50 0 0 120)
RU U A 0.3
RV V B 0.3
RW W C 0.3
D1 A OUT DR
D3 B OUT DR
D5 C OUT DR
D4 0 A DR
D6 0 B DR
D2 0 C DR
C1 OUT 0 1000u
RL OUT 0 22
{DR_CARD}
.end""", [54.0], second=("LSODA", 1e-9))
def six_pulse():
    """Star voltage n: phase k gives i_k = (n + e_k - a_k)/R = f(a_k - p) - f(-a_k); the three sum to zero."""
    d = Diode(**DR)
    phases = (0.0, -2 * pi / 3, 2 * pi / 3)

    def leg(e, p):
        def residual(a):
            up, gu = d(a - p)
            down, gd = d(-a)
            return a + 0.3 * (up - down) - e, 1 + 0.3 * (gu + gd)
        a = root(residual, -80, 80)
        up, gu = d(a - p)
        down, gd = d(-a)
        return a, up, down, (gu + gd) / (1 + 0.3 * (gu + gd))

    def equations(t, x):
        p = x[0]
        e = [34 * sin(W50 * t + q) for q in phases]

        def residual(n):
            legs = [leg(n + v, p) for v in e]
            return sum(up - down for _, up, down, _ in legs), sum(g for _, _, _, g in legs)
        n = root(residual, -40, 80)
        (a, u1, l1, _), (b, u2, l2, _), (c, u3, l3, _) = [leg(n + v, p) for v in e]
        ic = u1 + u2 + u3 - p / 22
        return ([ic / 1000e-6],
                {"N": n, "U": n + e[0], "V": n + e[1], "W": n + e[2], "A": a, "B": b, "C": c, "OUT": p},
                {"VU": l1 - u1, "VV": l2 - u2, "VW": l3 - u3, "RU": u1 - l1, "RV": u2 - l2, "RW": u3 - l3,
                 "D1": u1, "D3": u2, "D5": u3, "D4": l1, "D6": l2, "D2": l3, "C1": ic, "RL": p / 22})
    return equations
