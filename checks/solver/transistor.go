package solver

import "math"

// Bipolar is an Ebers-Moll transistor in transport form; Sign is +1 for NPN and -1 for PNP.
// With Early voltage VAF (0: infinite) the transport current is divided by the base charge 1/(1 - vbc/VAF).
type Bipolar struct {
	Sign               float64
	IS, BF, BR, NF, NR float64
	VAF                float64
	RB, RC, RE         float64 // ohm, stamped in series
	VT                 float64
}

// AddBipolar adds a transistor. Branch 0 is collector-emitter, branch 1 base-emitter; the current of branch 0
// is the collector current, that of branch 1 the base current.
func (n *Network) AddBipolar(collector, base, emitter Node, q Bipolar) Device {
	inner := func(outer Node, ohms float64) Node {
		if ohms <= 0 {
			return outer
		}
		in := n.AddNode()
		n.AddResistor(outer, in, ohms)
		return in
	}
	c, b, e := inner(collector, q.RC), inner(base, q.RB), inner(emitter, q.RE)
	return n.add(device{
		kind: nonlinear, branches: []Branch{{collector, emitter}, {base, emitter}}, law: &bipolar{q},
		ports: []port{{sense: Branch{c, e}, guess: stampGuess}, {sense: Branch{b, e}, guess: stampGuess}},
	})
}

type bipolar struct{ Bipolar }

// exponential is a junction with gmin across it.
func exponential(is, v, scale float64) (current, slope float64) {
	current, slope = shockley(is, v, scale)
	return current + gmin*v, slope + gmin
}

// shockley is IS (exp(v/scale) - 1) and its slope.
func shockley(is, v, scale float64) (current, slope float64) {
	if x := v / scale; x > negligible {
		e := is * math.Exp(x)
		return e - is, e / scale
	}
	return -is, 0
}

func (q *bipolar) Evaluate(v []float64, _ float64, i, g []float64) {
	vce, vbe := q.Sign*v[0], q.Sign*v[1]
	vbc := vbe - vce
	forward, gf := shockley(q.IS, vbe, q.NF*q.VT)
	reverse, gr := shockley(q.IS, vbc, q.NR*q.VT)
	charge, dcharge := 1.0, 0.0 // 1/qb and its derivative by vbc
	if q.VAF > 0 {
		charge, dcharge = 1-vbc/q.VAF, -1/q.VAF
		if charge < 0.1 {
			charge, dcharge = 0.1, 0
		}
	}
	transport := (forward - reverse) * charge
	// gmin lies across the junctions, not from collector to emitter: an open emitter follows the base.
	collector := transport - reverse/q.BR - gmin*vbc
	base := forward/q.BF + reverse/q.BR + gmin*(vbe+vbc)
	// Derivatives by (vbe, vbc).
	cbe := gf * charge
	cbc := -gr*charge + (forward-reverse)*dcharge - gr/q.BR - gmin
	bbe, bbc := gf/q.BF+gmin, gr/q.BR+gmin
	i[0], i[1] = q.Sign*collector, q.Sign*base
	// vbc = vbe - vce.
	g[0], g[1] = -cbc, cbe+cbc
	g[2], g[3] = -bbc, bbe+bbc
}

func (q *bipolar) Limit(v, old []float64) bool {
	vbe, oldbe := q.Sign*v[1], q.Sign*old[1]
	vbc, oldbc := q.Sign*(v[1]-v[0]), q.Sign*(old[1]-old[0])
	be, movedE := limitJunction(vbe, oldbe, q.NF*q.VT, criticalVoltage(q.IS, q.NF*q.VT))
	bc, movedC := limitJunction(vbc, oldbc, q.NR*q.VT, criticalVoltage(q.IS, q.NR*q.VT))
	if !movedE && !movedC {
		return false
	}
	v[1] = q.Sign * be
	v[0] = q.Sign * (be - bc)
	return true
}

// Fet is a level 1 field-effect transistor (Shichman and Hodges, IEEE J. SC-3, 1968); Sign is +1 for n channel.
type Fet struct {
	Sign            float64
	VTO, KP, Lambda float64 // V, A/V^2 (times width over length), 1/V
	Gamma, Phi      float64 // body effect: V^(1/2), V
	RD, RS          float64 // ohm
}

// AddFet adds a transistor. Branch 0 is drain-source, branch 1 gate-source.
func (n *Network) AddFet(drain, gate, source, bulk Node, f Fet) Device {
	d, s := drain, source
	if f.RD > 0 {
		d = n.AddNode()
		n.AddResistor(drain, d, f.RD)
	}
	if f.RS > 0 {
		s = n.AddNode()
		n.AddResistor(source, s, f.RS)
	}
	return n.add(device{
		kind: nonlinear, branches: []Branch{{drain, source}, {gate, source}}, law: &fet{f},
		ports: []port{
			{sense: Branch{d, s}, guess: stampGuess},
			{sense: Branch{gate, s}, output: outNone},
			{sense: Branch{bulk, s}, output: outNone},
		},
	})
}

type fet struct{ Fet }

// channel returns the drain current of a channel with vds >= 0 and its derivatives by vds, vgs and vbs.
func (f *fet) channel(vds, vgs, vbs float64) (i, gds, gm, gmb float64) {
	threshold, dthreshold := f.VTO*f.Sign, 0.0
	if f.Gamma > 0 {
		x, dx := smoothPositive(f.Phi-vbs, 1e-3)
		root := math.Sqrt(x)
		threshold += f.Gamma * (root - math.Sqrt(f.Phi))
		dthreshold = -f.Gamma * dx / (2 * root)
	}
	// A smooth overdrive keeps the derivative continuous at the threshold; 0.1 mV wide.
	vov, dov := smoothPositive(vgs-threshold, 1e-4)
	early := 1 + f.Lambda*vds
	var dvov float64
	if vds < vov {
		core := f.KP * (vov - vds/2) * vds
		i = core * early
		gds = f.KP*(vov-vds)*early + core*f.Lambda
		dvov = f.KP * vds * early
	} else {
		core := f.KP / 2 * vov * vov
		i = core * early
		gds = core * f.Lambda
		dvov = f.KP * vov * early
	}
	return i, gds, dvov * dov, -dvov * dov * dthreshold
}

func (f *fet) Evaluate(v []float64, _ float64, i, g []float64) {
	vds, vgs, vbs := f.Sign*v[0], f.Sign*v[1], f.Sign*v[2]
	for k := range g {
		g[k] = 0
	}
	i[1], i[2] = 0, 0
	if vds >= 0 {
		id, gds, gm, gmb := f.channel(vds, vgs, vbs)
		i[0] = f.Sign*id + gmin*v[0]
		g[0], g[1], g[2] = gds+gmin, gm, gmb
		return
	}
	// Drain and source change roles.
	id, gds, gm, gmb := f.channel(-vds, vgs-vds, vbs-vds)
	i[0] = -f.Sign*id + gmin*v[0]
	g[0], g[1], g[2] = gds+gm+gmb+gmin, -gm, -gmb
}

func (f *fet) Limit(v, old []float64) bool {
	moved := false
	for k := range v {
		if d := v[k] - old[k]; math.Abs(d) > 10 {
			v[k] = old[k] + math.Copysign(10, d)
			moved = k < 2 || moved
		}
	}
	return moved
}
