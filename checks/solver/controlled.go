package solver

import "math"

// AddConstantCurrentLoad adds a load that draws the magnitude of amperes from its supply, of either polarity,
// and fades to a resistance below the voltage knee, so that it never drives its supply the other way.
func (n *Network) AddConstantCurrentLoad(a, b Node, amperes, knee float64) Device {
	return n.add(device{
		kind: nonlinear, branches: []Branch{{a, b}}, law: constantCurrent{math.Abs(amperes), knee},
		ports: []port{{sense: Branch{a, b}, guess: stampGuess}},
	})
}

type constantCurrent struct{ amperes, knee float64 }

func (c constantCurrent) Evaluate(v []float64, _ float64, i, g []float64) {
	// Reaches 0.97 of the current at the knee and 0.9999 at twice the knee.
	x, th := 2*v[0]/c.knee, 1.0
	if x < saturated {
		th = math.Tanh(x)
	}
	i[0] = c.amperes*th + gmin*v[0]
	g[0] = c.amperes*(1-th*th)*2/c.knee + gmin
}

// Region is 1 and 2 where the load draws its full current, and 1 everywhere if that is none.
func (c constantCurrent) Region(v []float64) int {
	switch x := 2 * v[0] / c.knee; {
	case x >= saturated || c.amperes == 0:
		return 1
	case x <= -saturated:
		return 2
	}
	return 0
}

// saturated is where the hyperbolic tangent is 1 to double precision.
const saturated = 20

func (constantCurrent) Limit(v, old []float64) bool { return false }

// Switch is a voltage-controlled resistance: ROn above Threshold + Hysteresis, ROff below
// Threshold - Hysteresis, with the logarithm of the conductance going smoothly between.
type Switch struct{ Threshold, Hysteresis, ROn, ROff float64 }

// AddSwitch adds a switch between a and b. Branch 0 is a-b.
func (n *Network) AddSwitch(a, b Node, control Branch, s Switch) Device {
	return n.add(device{
		kind: nonlinear, branches: []Branch{{a, b}}, law: switchLaw{s},
		ports: []port{
			{sense: Branch{a, b}, guess: stampGuess},
			{sense: control, output: outNone},
		},
	})
}

type switchLaw struct{ Switch }

func (s switchLaw) Evaluate(v []float64, _ float64, i, g []float64) {
	width := math.Max(s.Hysteresis, 1e-3)
	mid := 0.5 * (math.Log(1/s.ROn) + math.Log(1/s.ROff))
	half := 0.5 * (math.Log(1/s.ROn) - math.Log(1/s.ROff))
	y, dy := smoothSign(v[1]-s.Threshold, width)
	conductance := math.Exp(mid + half*y)
	i[0], i[1] = conductance*v[0], 0
	g[0], g[1] = conductance, conductance*half*dy*v[0]
	g[2], g[3] = 0, 0
}

// Region is 1 where the switch is closed, 2 where it is open.
func (s switchLaw) Region(v []float64) int {
	switch y, _ := smoothSign(v[1]-s.Threshold, math.Max(s.Hysteresis, 1e-3)); y {
	case 1:
		return 1
	case -1:
		return 2
	}
	return 0
}

func (s switchLaw) Limit(v, old []float64) bool {
	width := math.Max(s.Hysteresis, 1e-3)
	if d := v[1] - old[1]; math.Abs(d) > width && (v[1]-s.Threshold)*(old[1]-s.Threshold) < 0 {
		v[1] = s.Threshold
		return true
	}
	return false
}

// Function is a source whose value is a function of circuit quantities and time, with its exact partial
// derivatives written into gradient.
type Function func(probes []float64, t float64, gradient []float64) float64

// Probe is a quantity that a Function depends on: a node voltage difference, or the current of branch 0 of a
// device that carries its current as an unknown.
type Probe struct {
	Voltage   Branch
	Current   Device
	IsCurrent bool
}

// AddFunctionSource adds a source between a and b whose voltage (a over b) or current (a to b) is f(probes).
func (n *Network) AddFunctionSource(a, b Node, voltage bool, probes []Probe, f Function) Device {
	out := port{sense: Branch{a, b}, output: outCurrent}
	if voltage {
		out.output = outVoltage
	}
	ports := []port{out}
	for _, p := range probes {
		ports = append(ports, port{sense: p.Voltage, senseOf: p.Current, isCurrent: p.IsCurrent, output: outNone})
	}
	return n.add(device{kind: nonlinear, branches: []Branch{{a, b}}, law: functionLaw{f}, ports: ports})
}

type functionLaw struct{ f Function }

func (l functionLaw) Evaluate(v []float64, t float64, i, g []float64) {
	for k := range g {
		g[k] = 0
	}
	for k := range i {
		i[k] = 0
	}
	i[0] = l.f(v[1:], t, g[1:len(v)])
}

func (functionLaw) Limit(v, old []float64) bool { return false }
