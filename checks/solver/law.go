package solver

import "math"

// Law is the nonlinear characteristic of a device with one or more ports.
// Implementations keep no state: the currents depend on the present port voltages and the time only.
type Law interface {
	// Evaluate writes the port currents i[k] (A, into the first node of the port; or, for a port that
	// puts out a voltage, that voltage) and the partial derivatives g[k*len(v)+j] = di[k]/dv[j].
	Evaluate(v []float64, t float64, i, g []float64)
	// Limit moves the proposed port voltages v towards old where the law is too steep for Newton's
	// step to be trusted, and reports whether it moved any.
	Limit(v, old []float64) bool
}

// Sharer is a law with a narrow range that Newton's steps would leap over and back: Share is the part of the step from
// old to v, of all ports of the network together, that ends inside it; 1 where nothing is leapt over.
type Sharer interface {
	Share(v, old []float64) float64
}

// Piecewise is a law that is exactly linear in ranges of its port voltages. Region numbers the range that holds v: the
// same number stands for the same linear function, 0 for none.
type Piecewise interface {
	Region(v []float64) int
}

// gmin is the conductance across every junction, S (SPICE convention).
const gmin = 1e-12

// stampGuess is the conductance that stands in for a junction in the linear part, S. Its only effect is on
// the conditioning of the reduced equations: it keeps nodes that hang on junctions alone defined.
const stampGuess = 1e-6

// Diode is a junction diode: i = IS (exp(v/(N VT)) - 1) + gmin v, and -IBV exp(-(v+BV)/(NBV VT)) beyond the
// breakdown voltage BV (0: none). The series resistance RS is stamped by AddDiode.
type Diode struct {
	IS, N, RS    float64
	BV, IBV, NBV float64
	VT           float64 // thermal voltage, V
}

// AddDiode adds a diode from anode to cathode.
func (n *Network) AddDiode(anode, cathode Node, d Diode) Device {
	inner := anode
	if d.RS > 0 {
		inner = n.AddNode()
		n.AddResistor(anode, inner, d.RS)
	}
	if d.NBV == 0 {
		d.NBV = 1
	}
	j := &junction{Diode: d}
	j.scale, j.inverse, j.knee = d.N*d.VT, 1/(d.N*d.VT), criticalVoltage(d.IS, d.N*d.VT)
	if d.BV > 0 {
		j.reverseScale, j.reverseKnee = d.NBV*d.VT, criticalVoltage(d.IBV, d.NBV*d.VT)
	}
	return n.add(device{
		kind: nonlinear, branches: []Branch{{anode, cathode}}, law: j,
		ports: []port{{sense: Branch{inner, cathode}, guess: stampGuess}},
	})
}

type junction struct {
	Diode
	scale, inverse, knee      float64 // inverse: one over scale
	reverseScale, reverseKnee float64
}

// criticalVoltage is the junction voltage of greatest curvature (Nagel, UCB/ERL M520, 1975).
func criticalVoltage(is, scale float64) float64 { return scale * math.Log(scale/(math.Sqrt2*is)) }

// negligible is how many thermal voltages below zero an exponential counts as zero beside 1: exp(-25) = 1.4e-11.
const negligible = -25

func (d *junction) Evaluate(v []float64, _ float64, i, g []float64) { i[0], g[0] = d.at(v[0]) }

// at is the current and the slope at a voltage.
func (d *junction) at(v float64) (i, g float64) {
	x := v * d.inverse
	current, slope := -d.IS, 0.0
	if x > negligible {
		e := d.IS * math.Exp(x)
		current, slope = e-d.IS, e*d.inverse
	}
	if d.BV > 0 {
		if y := -(v + d.BV) / d.reverseScale; y > negligible {
			e := d.IBV * math.Exp(y)
			current -= e
			slope += e / d.reverseScale
		}
	}
	return current + gmin*v, slope + gmin
}

// region is 1 where the junction blocks.
func (d *junction) region(v float64) int {
	if v > negligible*d.scale || d.BV > 0 && -(v+d.BV) > negligible*d.reverseScale {
		return 0
	}
	return 1
}

func (d *junction) Limit(v, old []float64) (moved bool) {
	v[0], moved = d.limited(v[0], old[0])
	return moved
}

// limited is the voltage v moved towards old where the junction is too steep.
func (d *junction) limited(v, old float64) (limited float64, moved bool) {
	if v, moved := limitJunction(v, old, d.scale, d.knee); moved {
		return v, true
	}
	if d.BV > 0 {
		if limited, moved := limitJunction(-(v + d.BV), -(old + d.BV), d.reverseScale, d.reverseKnee); moved {
			return -limited - d.BV, true
		}
	}
	return v, false
}

// limitJunction limits a Newton step on an exponential junction by linearising the logarithm of its current
// beyond the knee (the rule of Nagel's thesis).
func limitJunction(v, old, scale, knee float64) (float64, bool) {
	if v <= knee || math.Abs(v-old) <= 2*scale {
		return v, false
	}
	if old < knee-0.1*scale { // a margin, so that rounding cannot keep it at the knee for ever
		return knee, true
	}
	arg := 1 + (v-old)/scale
	if arg <= 0 {
		return knee, true
	}
	return old + scale*math.Log(arg), true
}

// cornerReach is how many corner widths from the corner smoothMin is the exact minimum.
const cornerReach = 8.0 / 3

// smoothMin is a smooth minimum of a and b with corner width w: it lies below both by at most w/2, and is one of them
// from cornerReach widths on. The derivatives by a and b are returned too.
func smoothMin(a, b, w float64) (m, da, db float64) {
	d, reach := a-b, cornerReach*w
	switch {
	case d >= reach:
		return b, 0, 1
	case d <= -reach:
		return a, 1, 0
	}
	// |d| rounded off: equal to it at the reach in value, slope and curvature.
	z := d / reach
	r := reach * (0.375 + z*z*(0.75-0.125*z*z))
	da = 0.5 * (1 - z*(1.5-0.5*z*z))
	return 0.5 * (a + b - r), da, 1 - da
}

// smoothSign is the sign of x, rounded off below the width w, and its derivative.
func smoothSign(x, w float64) (y, dy float64) {
	switch z := x / w; {
	case z >= 1:
		return 1, 0
	case z <= -1:
		return -1, 0
	default:
		return z * (1.5 - 0.5*z*z), 1.5 * (1 - z*z) / w
	}
}

// smoothPositive is a smooth max(x, 0) with corner width w, w ln(1 + exp(x/w)), and its derivative. It dies
// out exponentially below the corner, so that what is off draws nothing.
func smoothPositive(x, w float64) (y, dy float64) {
	z := x / w
	switch {
	case z > 40:
		return x, 1
	case z < -700:
		return 0, 0
	case z < -36:
		e := math.Exp(z)
		return w * e, e
	}
	e := math.Exp(z)
	return w * math.Log1p(e), e / (1 + e)
}
