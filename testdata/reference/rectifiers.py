"""Rectifiers with a reservoir: half-wave, bridge, centre-tap, dual rail, doublers."""

from math import pi, sin

from circuits import circuit
from laws import Bridge, Diode, root

W50 = 2 * pi * 50
DR = dict(IS=5e-9, N=1.8, RS=0.04)
DR_CARD = ".model DR D(IS=5n N=1.8 RS=0.04)"


def fed_diode(d, e, resistance, v):
    """Current of a diode behind a source e with resistance into voltage v, and the voltage at its anode."""
    a = root(lambda a: (lambda i, g: (a + resistance * i - e, 1 + resistance * g))(*d(a - v)), -abs(e) - 1, abs(e) + 1)
    return d(a - v)[0], a


@circuit("half-wave-stiff", f"""Signal lamp feeder, half-wave on a stiff winding
V1 IN 0 SIN(0 17 50)
D1 IN OUT DR
C1 OUT 0 470u
RL OUT 0 150
{DR_CARD}
.end""", [15.0])
def half_wave_stiff():
    """C v' = f(e - v) - v/R."""
    d = Diode(**DR)

    def equations(t, x):
        v, e = x[0], 17 * sin(W50 * t)
        i, _ = d(e - v)
        ic = i - v / 150
        return [ic / 470e-6], {"IN": e, "OUT": v}, {"V1": -i, "D1": i, "C1": ic, "RL": v / 150}
    return equations


@circuit("half-wave-winding", f"""Relay coil feeder, half-wave with winding resistance
V1 S 0 SIN(0 24 50)
RW S A 1.5
D1 A OUT DR
C1 OUT 0 1000u
RL OUT 0 220
{DR_CARD}
.end""", [20.0])
def half_wave_winding():
    """C v' = i - v/R with a + RW i = e and i = f(a - v)."""
    d = Diode(**DR)

    def equations(t, x):
        v, e = x[0], 24 * sin(W50 * t)
        i, a = fed_diode(d, e, 1.5, v)
        ic = i - v / 220
        return [ic / 1000e-6], {"S": e, "A": a, "OUT": v}, {"V1": -i, "RW": i, "D1": i, "C1": ic, "RL": v / 220}
    return equations


@circuit("half-wave-resistive", f"""Heater on one half-wave, no reservoir
V1 IN 0 SIN(0 30 50)
D1 IN OUT DR
RL OUT 0 12
{DR_CARD}
.end""", [])
def half_wave_resistive():
    """f(e - v) = v/R."""
    d = Diode(**DR)

    def equations(t, x):
        e = 30 * sin(W50 * t)
        v = root(lambda v: (lambda i, g: (v / 12 - i, 1 / 12 + g))(*d(e - v)), -40, 40)
        i = v / 12
        return [], {"IN": e, "OUT": v}, {"V1": -i, "D1": i, "RL": i}
    return equations


@circuit("bridge-stiff", f"""Gauge supply, bridge on a stiff winding
V1 A B SIN(0 18 50)
D1 A OUT DR
D2 B OUT DR
D3 0 A DR
D4 0 B DR
C1 OUT 0 1000u
RL OUT 0 60
{DR_CARD}
.end""", [15.0])
def bridge_stiff():
    """C p' = f + r - p/R with the diagonal currents at w = e."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p, e = x[0], 18 * sin(W50 * t)
        f, r, _, _ = b(e, p)
        ic = f + r - p / 60
        return ([ic / 1000e-6], {"A": (p + e) / 2, "B": (p - e) / 2, "OUT": p},
                {"V1": r - f, "D1": f, "D2": r, "D3": r, "D4": f, "C1": ic, "RL": p / 60})
    return equations


@circuit("bridge-winding", f"""Panel meter supply, bridge with winding resistance
V1 S B SIN(0 21.2 50)
RW S A 0.8
D1 A OUT DR
D2 B OUT DR
D3 0 A DR
D4 0 B DR
C1 OUT 0 2200u
RL OUT 0 33
{DR_CARD}
.end""", [17.0])
def bridge_winding():
    """As the stiff bridge, with w + RW (f - r) = e."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p, e = x[0], 21.2 * sin(W50 * t)
        w, f, r = b.fed(e, 0.8, p)
        ic = f + r - p / 33
        return ([ic / 2200e-6], {"S": (p - w) / 2 + e, "A": (p + w) / 2, "B": (p - w) / 2, "OUT": p},
                {"V1": r - f, "RW": f - r, "D1": f, "D2": r, "D3": r, "D4": f, "C1": ic, "RL": p / 33})
    return equations


@circuit("bridge-resistive", f"""Plating cell dummy, bridge without reservoir
V1 A B SIN(0 12 50)
D1 A OUT DR
D2 B OUT DR
D3 0 A DR
D4 0 B DR
RL OUT 0 8
{DR_CARD}
.end""", [])
def bridge_resistive():
    """f + r = p/R at w = e."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        e = 12 * sin(W50 * t)

        def residual(p):
            f, r, gf, gr = b(e, p)
            return p / 8 - f - r, 1 / 8 + (gf + gr) / 2
        p = root(residual, -15, 15)
        f, r, _, _ = b(e, p)
        return ([], {"A": (p + e) / 2, "B": (p - e) / 2, "OUT": p},
                {"V1": r - f, "D1": f, "D2": r, "D3": r, "D4": f, "RL": p / 8})
    return equations


@circuit("bridge-constant-current", f"""Motor drive logic rail, constant-current load behind a bridge
V1 S B SIN(0 16 50)
RW S A 0.35
D1 A OUT DR
D2 B OUT DR
D3 0 A DR
D4 0 B DR
C1 OUT 0 4700u
ILOAD OUT 0 0.9
{DR_CARD}
.end""", [12.0])
def bridge_constant_current():
    """C p' = f + r - I."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p, e = x[0], 16 * sin(W50 * t)
        w, f, r = b.fed(e, 0.35, p)
        ic = f + r - 0.9
        return ([ic / 4700e-6], {"S": (p - w) / 2 + e, "A": (p + w) / 2, "B": (p - w) / 2, "OUT": p},
                {"V1": r - f, "RW": f - r, "D1": f, "D2": r, "D3": r, "D4": f, "C1": ic, "ILOAD": 0.9})
    return equations


@circuit("centre-tap", f"""Amplifier heater rail, two half windings
V1 S1 0 SIN(0 15 50)
V2 0 S2 SIN(0 15 50)
RW1 S1 A1 0.5
RW2 S2 A2 0.5
D1 A1 OUT DR
D2 A2 OUT DR
C1 OUT 0 3300u
RL OUT 0 18
{DR_CARD}
.end""", [12.0])
def centre_tap():
    """C v' = i1 + i2 - v/R; each diode behind its half winding, +e and -e."""
    d = Diode(**DR)

    def equations(t, x):
        v, e = x[0], 15 * sin(W50 * t)
        i1, a1 = fed_diode(d, e, 0.5, v)
        i2, a2 = fed_diode(d, -e, 0.5, v)
        ic = i1 + i2 - v / 18
        return ([ic / 3300e-6], {"S1": e, "S2": -e, "A1": a1, "A2": a2, "OUT": v},
                {"V1": -i1, "V2": i2, "RW1": i1, "RW2": i2, "D1": i1, "D2": i2, "C1": ic, "RL": v / 18})
    return equations


@circuit("dual-rail", f"""Filter bank supply, two rails from one bridge with unequal loads
V1 S1 0 SIN(0 22 50)
V2 0 S2 SIN(0 22 50)
RW1 S1 A1 0.6
RW2 S2 A2 0.6
D1 A1 POS DR
D2 A2 POS DR
D3 NEG A1 DR
D4 NEG A2 DR
C1 POS 0 2200u
C2 0 NEG 2200u
RL1 POS 0 56
RL2 0 NEG 150
{DR_CARD}
.end""", [20.0, -20.0])
def dual_rail():
    """C p' = i1 + i2 - p/R1, C n' = i3 + i4 - n/R2 (n < 0); each winding end feeds one diode up and one down."""
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
        c1, c2 = i1 + i2 - p / 56, i3 + i4 + n / 150
        return ([c1 / 2200e-6, -c2 / 2200e-6], {"S1": e, "S2": -e, "A1": a1, "A2": a2, "POS": p, "NEG": n},
                {"V1": i3 - i1, "V2": i2 - i4, "RW1": i1 - i3, "RW2": i2 - i4, "D1": i1, "D2": i2, "D3": i3, "D4": i4,
                 "C1": c1, "C2": c2, "RL1": p / 56, "RL2": -n / 150})
    return equations


@circuit("doubler-full-wave", f"""Bias rail, full-wave doubler
V1 S 0 SIN(0 20 50)
RW S A 1
D1 A POS DR
D2 NEG A DR
C1 POS 0 470u
C2 0 NEG 470u
RL POS NEG 820
{DR_CARD}
.end""", [18.0, -18.0])
def doubler_full_wave():
    """C p' = i1 - (p-n)/R, C n' = (p-n)/R - i2."""
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


@circuit("doubler-half-wave", f"""Tuning rail, half-wave doubler
V1 S 0 SIN(0 14 50)
RW S A 2
C1 A M 220u
D1 0 M DR
D2 M OUT DR
C2 OUT 0 220u
RL OUT 0 2.2k
{DR_CARD}
.end""", [-12.0, 24.0])
def doubler_half_wave():
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
        return ([s / 220e-6, (i2 - v / 2200) / 220e-6], {"S": e, "A": m + u, "M": m, "OUT": v},
                {"V1": -s, "RW": s, "C1": s, "D1": i1, "D2": i2, "C2": i2 - v / 2200, "RL": v / 2200})
    return equations
