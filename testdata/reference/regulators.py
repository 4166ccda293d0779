"""Ideal three-terminal regulators: Vout = min(VOUT, Vin - VDO), input current = output current + IQ."""

from math import sin

from circuits import circuit
from laws import Bridge, Diode
from rectifiers import DR, DR_CARD, W50
from shunts import front
from variants import BRIDGE_CARDS

FRONT = BRIDGE_CARDS.replace("OUT", "IN")


def cards(title, peak, winding, capacitance, rest):
    return f"""{title}
V1 S B SIN(0 {peak} 50)
RW S A {winding}
{FRONT}
C1 IN 0 {capacitance}
{rest}
{DR_CARD}
.end"""


X12 = "X1 IN 0 OUT 7812\n*: rate X1 VOUT=12V VDO=2V IQ=5mA"


def single(peak, winding, capacitance, load=None, current=0.0):
    """C1 p' = f + r - IQ - io, o = min(12, p - 2), io = o/RL or a constant current."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p = x[0]
        nodes, currents, j = front(t, p, peak, winding, b)
        o = min(12.0, p - 2)
        io = o / load if load else current
        ic = j - 5e-3 - io
        return ([ic / capacitance], {**nodes, "IN": p, "OUT": o},
                {**currents, "C1": ic, "X1.in": io + 5e-3, "X1.out": -io, "RL" if load else "ILOAD": io})
    return equations


@circuit("regulator-regulating", cards("Radio rail, regulator always in regulation", 22, 0.8, "2200u",
                                       X12 + "\nRL OUT 0 24"), [19.0])
def regulator_regulating():
    return single(22, 0.8, 2200e-6, load=24)


@circuit("regulator-dropping-out", cards("Radio rail, reservoir too small: drop-out at the trough", 19, 0.8, "1000u",
                                         X12 + "\nRL OUT 0 20"), [15.0])
def regulator_dropping_out():
    return single(19, 0.8, 1000e-6, load=20)


@circuit("regulator-constant-current", cards("Radio rail, constant-current load, never in regulation", 15.2, 0.5, "3300u",
                                             X12 + "\nILOAD OUT 0 0.7"), [12.0])
def regulator_constant_current():
    return single(15.2, 0.5, 3300e-6, current=0.7)


@circuit("regulator-output-capacitor", cards("Radio rail in and out of drop-out with a capacitor at the output",
                                             19, 0.8, "1000u", X12 + "\nC2 OUT 0 220u\nRL OUT 0 20"), [15.0],
         second=("LSODA", 1e-9))
def regulator_output_capacitor():
    """In drop-out the output follows the input and C2 is charged with it: (C1 + C2) p' = f + r - IQ - o/RL.

    C2 discharges through RL alone only if p fell faster than that, which io > 0 shows never to happen here.
    """
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p = x[0]
        nodes, currents, j = front(t, p, 19, 0.8, b)
        o = min(12.0, p - 2)
        free = p - 2 < 12.0
        slope = (j - 5e-3 - o / 20) / (1000e-6 + (220e-6 if free else 0.0))
        c2 = 220e-6 * slope if free else 0.0
        io = o / 20 + c2
        if io < 0:
            raise ArithmeticError("the output capacitor would feed back")
        return ([slope], {**nodes, "IN": p, "OUT": o},
                {**currents, "C1": j - 5e-3 - io, "X1.in": io + 5e-3, "X1.out": -io, "C2": c2, "RL": o / 20})
    return equations


@circuit("regulator-cascade", cards("Counter supply, 12 V and from it 5 V", 22, 0.6, "3300u", X12 + """
RL1 OUT 0 60
X2 OUT 0 OUT5 7805
*: rate X2 VOUT=5V VDO=2V IQ=4mA
RL2 OUT5 0 15"""), [18.0])
def regulator_cascade():
    """Both algebraic: o = min(12, p-2), q = min(5, o-2)."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p = x[0]
        nodes, currents, j = front(t, p, 22, 0.6, b)
        o = min(12.0, p - 2)
        q = min(5.0, o - 2)
        i2 = q / 15
        i1 = o / 60 + i2 + 4e-3
        ic = j - i1 - 5e-3
        return ([ic / 3300e-6], {**nodes, "IN": p, "OUT": o, "OUT5": q},
                {**currents, "C1": ic, "X1.in": i1 + 5e-3, "X1.out": -i1, "RL1": o / 60,
                 "X2.in": i2 + 4e-3, "X2.out": -i2, "RL2": i2})
    return equations


@circuit("regulator-negative", f"""Radio rail mirrored: negative regulator in and out of drop-out
V1 S B SIN(0 19 50)
RW S A 0.8
D1 A 0 DR
D2 B 0 DR
D3 IN A DR
D4 IN B DR
C1 0 IN 1000u
X1 IN 0 OUT 7912
*: rate X1 VOUT=12V VDO=2V IQ=5mA
RL 0 OUT 20
{DR_CARD}
.end""", [15.0])
def regulator_negative():
    """regulator-dropping-out with every DC voltage negated. p = -IN: D1 and D4 stand at (w-p)/2, D2 and D3 at (-w-p)/2."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p, e = x[0], 19 * sin(W50 * t)
        w, f, r = b.fed(e, 0.8, p)
        o = min(12.0, p - 2)
        io = o / 20
        ic = f + r - 5e-3 - io
        nb = (-p - w) / 2
        return ([ic / 1000e-6], {"S": nb + e, "A": nb + w, "B": nb, "IN": -p, "OUT": -o},
                {"V1": r - f, "RW": f - r, "D1": f, "D2": r, "D3": r, "D4": f, "C1": ic,
                 "X1.in": -(io + 5e-3), "X1.out": io, "RL": io})
    return equations


@circuit("regulator-preregulated", cards("Sensor rail, resistor ahead of the regulator takes part of the heat",
                                         27, 1.5, "1000u", """R1 IN P 22
C2 P 0 100u
X1 P 0 OUT 7812
*: rate X1 VOUT=12V VDO=2V IQ=5mA
RL OUT 0 48"""), [24.0, 18.0])
def regulator_preregulated():
    """C1 p' = f + r - (p-q)/R1, C2 q' = (p-q)/R1 - IQ - o/RL."""
    b = Bridge(Diode(**DR))

    def equations(t, x):
        p, q = x
        nodes, currents, j = front(t, p, 27, 1.5, b)
        o = min(12.0, q - 2)
        io, ir = o / 48, (p - q) / 22
        c1, c2 = j - ir, ir - io - 5e-3
        return ([c1 / 1000e-6, c2 / 100e-6], {**nodes, "IN": p, "P": q, "OUT": o},
                {**currents, "C1": c1, "R1": ir, "C2": c2, "X1.in": io + 5e-3, "X1.out": -io, "RL": io})
    return equations
