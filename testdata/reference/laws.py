"""Device laws as the netlists state them, and a safe root finder for the small algebraic parts.

Every law returns (current, slope). Voltages in V, currents in A, slopes in S.
"""

from math import exp, log1p, sqrt

BOLTZMANN = 1.380649e-23  # J/K, exact (SI 2019)
CHARGE = 1.602176634e-19  # C, exact (SI 2019)
VT = BOLTZMANN * 300.15 / CHARGE  # thermal voltage at 27 degC
GMIN = 1e-12  # S across every junction


class Diode:
    """i = IS (exp(u/(N VT)) - 1) + GMIN u - IBV exp(-(u+BV)/VT), terminal voltage v = u + RS i."""

    def __init__(self, IS, N=1.0, RS=0.0, BV=0.0, IBV=1e-3):
        self.IS, self.N, self.RS, self.BV, self.IBV = IS, N, RS, BV, IBV
        self.scale = N * VT

    def junction(self, u):
        """Current and slope of the junction alone at junction voltage u."""
        x = u / self.scale
        e = self.IS * exp(x) if x > -60 else 0.0
        i, g = e - self.IS + GMIN * u, e / self.scale + GMIN
        if self.BV:
            y = -(u + self.BV) / VT
            if y > -60:
                e = self.IBV * exp(y)
                i -= e
                g += e / VT
        return i, g

    def __call__(self, v):
        """Current and slope at terminal voltage v.

        With RS the junction voltage solves u + RS i(u) = v. The left side is convex where the forward
        exponential rules and concave in breakdown, so Newton's method from the outer bound is monotone.
        """
        if not self.RS:
            return self.junction(v)
        u = v
        if v > 0:
            u = min(v, self.scale * log1p(v / (self.RS * self.IS)))
        elif self.BV and v < -self.BV:
            u = max(v, -self.BV - VT * log1p((-v - self.BV) / (self.RS * self.IBV)) - 0.5)
        for _ in range(200):
            i, g = self.junction(u)
            step = (u + self.RS * i - v) / (1 + self.RS * g)
            u -= step
            if abs(step) < 1e-13 * (1 + abs(u)):
                break
        i, g = self.junction(u)
        return i, g / (1 + self.RS * g)


class Bridge:
    """Four equal diodes between a floating source and a DC side.

    With f the diode law, w the voltage between the AC nodes and p that of the DC side, the node equations
    f(a-p) - f(-a) = i and f(b-p) - f(-b) = -i (DC minus is zero) are met by a = (p+w)/2, b = (p-w)/2, so that
    each diode of one diagonal stands at (w-p)/2 and of the other at (-w-p)/2. Exact for equal diodes.
    """

    def __init__(self, diode):
        self.diode = diode

    def __call__(self, w, p):
        """Diagonal currents (forward, reverse) and their slopes by their own voltages."""
        f, gf = self.diode((w - p) / 2)
        r, gr = self.diode((-w - p) / 2)
        return f, r, gf, gr

    def fed(self, e, resistance, p):
        """AC voltage w and currents behind a source e with resistance: w + R (f(w) - r(w)) = e."""
        def residual(w):
            f, r, gf, gr = self(w, p)
            return w + resistance * (f - r) - e, 1 + resistance * (gf + gr) / 2
        w = root(residual, -abs(e) - 1, abs(e) + 1)
        f, r, _, _ = self(w, p)
        return w, f, r


def bipolar(vbe, vbc, IS, BF, BR):
    """Ebers-Moll transport form: collector and base current of an NPN.

    GMIN lies across both junctions, inside the law: exp terms and GMIN v are scaled together.
    """
    f = IS * (exp(vbe / VT) - 1 if vbe / VT > -60 else -1.0) + GMIN * vbe
    r = IS * (exp(vbc / VT) - 1 if vbc / VT > -60 else -1.0) + GMIN * vbc
    return f - r - r / BR, f / BF + r / BR


def channel(vgs, vds, VTO, KP, LAMBDA=0.0, GAMMA=0.0, PHI=0.6, vbs=0.0):
    """Drain current of an n-channel MOSFET, level 1 (Shichman and Hodges 1968), for vds >= 0 and vbs <= PHI."""
    over = vgs - VTO - GAMMA * (sqrt(PHI - vbs) - sqrt(PHI))
    if over <= 0:
        return GMIN * vds
    low = min(vds, over)
    return KP * (over - low / 2) * low * (1 + LAMBDA * vds) + GMIN * vds


def root(residual, low, high):
    """Root of a rising function; residual(y) returns (value, slope). Newton's method kept in a bracket."""
    while residual(low)[0] > 0:
        low -= 2 * (high - low)
    while residual(high)[0] < 0:
        high += 2 * (high - low)
    y = 0.5 * (low + high)
    for _ in range(300):
        value, slope = residual(y)
        if value > 0:
            high = y
        else:
            low = y
        step = value / slope
        new = y - step
        if not low < new < high:
            new = 0.5 * (low + high)
        if abs(new - y) < 1e-13 * (1 + abs(y)):
            return new
        y = new
    return y


def solve2(residual, a, b, limit=0.5):
    """Newton's method for two equations; residual(a, b) returns (r1, r2) and the matrix rows. Steps are limited."""
    before = float("inf")
    for _ in range(500):
        r1, r2, (j11, j12), (j21, j22) = residual(a, b)
        det = j11 * j22 - j12 * j21
        da, db = (r1 * j22 - r2 * j12) / det, (j11 * r2 - j21 * r1) / det
        size = max(abs(da), abs(db))
        if size < 1e-13 * (1 + abs(a) + abs(b)) or before <= size < 1e-7:  # settled, or at rounding
            return a - da, b - db
        before = size
        k = min(1.0, limit / size)
        a, b = a - k * da, b - k * db
    raise ArithmeticError("Newton's method did not settle: residuals %g %g at %g %g" % (r1, r2, a, b))
