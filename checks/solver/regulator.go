package solver

import "math"

// Regulator is the large-signal law of a series regulator seen from its reference pin (ground or adjust):
//
//	Vout = min(Set, Vin - Dropout) - ROut Io,  0 <= Io <= CurrentLimit,  Iin = Io + Quiescent
//
// with smooth corners. Sign is -1 for a negative regulator, whose voltages and currents are mirrored; Set,
// Dropout, CurrentLimit and Quiescent are magnitudes. An adjustable type regulates out-to-adjust to Set and its
// Quiescent is the adjust-pin current.
type Regulator struct {
	Sign         float64
	Set          float64 // V
	Dropout      float64 // V
	ROut         float64 // ohm; at least minimumOutputResistance is used
	Quiescent    float64 // A
	CurrentLimit float64 // A; 0: none
	Corner       float64 // V, width of the drop-out corner; 0: 1 mV
	// Rejection is the fraction of a change of Vin - Set - Dropout that reaches the output (10^(-PSRR/20)).
	Rejection float64
	// Body is the saturation current of the reverse path from out to in, A; 0: none. VT is its thermal voltage.
	Body, VT float64
	// Sink is the conductance from out to reference of the regulator's own divider, S, which keeps leakage from
	// lifting an output that nothing loads.
	Sink float64
	// Held keeps the output at Set whatever the input, as the load would draw it in regulation, so that
	// the input is loaded with the regulated current and the shortage of headroom can be read off.
	Held bool
}

// minimumOutputResistance, ohm, keeps the law a function of voltage: 0.1 mV/A.
const minimumOutputResistance = 1e-4

// AddRegulator adds a regulator. Branch 0 is in-reference, branch 1 out-reference with the current into the
// out pin (negative when it delivers).
func (n *Network) AddRegulator(in, reference, out Node, r Regulator) Device {
	if r.ROut < minimumOutputResistance {
		r.ROut = minimumOutputResistance
	}
	if r.Corner == 0 {
		r.Corner = 1e-3
	}
	return n.add(device{
		kind: nonlinear, law: &regulator{r},
		branches: []Branch{{in, reference}, {out, reference}},
		ports: []port{
			{sense: Branch{in, reference}, guess: stampGuess},
			{sense: Branch{out, reference}, guess: 1 / r.ROut},
		},
	})
}

type regulator struct{ Regulator }

const (
	outputCorner = 1e-5 // A, where the output begins to deliver: below the current of its own divider
	limitCorner  = 1e-3 // of the current limit
)

// quiescentKnee is the input voltage below which the quiescent current fades, V.
const quiescentKnee = 0.05

func (r *regulator) Evaluate(v []float64, _ float64, i, g []float64) {
	vin, vout := r.Sign*v[0], r.Sign*v[1]

	// Output current as a function of the target voltage.
	target, dtarget := r.target(vin)
	off, slope, _ := smoothMin((vout-target)/r.ROut, 0, outputCorner)
	current := -off
	if r.CurrentLimit > 0 {
		m, dm, _ := smoothMin(current, r.CurrentLimit, r.CurrentLimit*limitCorner)
		current, slope = m, slope*dm
	}
	dvin, dvout := slope*dtarget/r.ROut, -slope/r.ROut

	if r.Body > 0 {
		back, gb := exponential(r.Body, vout-vin, r.VT)
		current -= back
		dvin += gb
		dvout -= gb
	}

	share, dshare := smoothSign(vin, quiescentKnee)
	i[0], i[1] = r.Sign*(current+r.Quiescent*share), -r.Sign*current
	g[0], g[1] = dvin+r.Quiescent*dshare+gmin, dvout
	g[2], g[3] = -dvin, -dvout
	i[0] += gmin * v[0]
	i[1] += r.Sink * v[1]
	g[3] += r.Sink
}

// target is the output voltage without load at an input voltage, and its derivative.
func (r *regulator) target(vin float64) (target, slope float64) {
	if r.Held {
		return r.Set, 0
	}
	set := r.Set + r.Rejection*(vin-r.Set-r.Dropout)
	target, dset, din := smoothMin(set, vin-r.Dropout, r.Corner)
	return target, dset*r.Rejection + din
}

// Region numbers the combinations of regulating or dropped out, on or off, limiting or not, outside their corners.
func (r *regulator) Region(v []float64) int {
	vin, vout := r.Sign*v[0], r.Sign*v[1]
	region := 1
	if math.Abs(vin) < quiescentKnee || r.Body > 0 && vout-vin > negligible*r.VT {
		return 0
	} else if vin < 0 {
		region |= 2
	}
	if !r.Held {
		over := (1 - r.Rejection) * (vin - r.Dropout - r.Set)
		if math.Abs(over) <= cornerReach*r.Corner {
			return 0
		} else if over < 0 {
			region |= 4
		}
	}
	target, _ := r.target(vin)
	current := (target - vout) / r.ROut
	switch reach := cornerReach * outputCorner; {
	case current < -reach:
		return region
	case current <= reach:
		return 0
	}
	if over := current - r.CurrentLimit; r.CurrentLimit > 0 {
		if math.Abs(over) <= cornerReach*limitCorner*r.CurrentLimit {
			return 0
		} else if over > 0 {
			region |= 8
		}
	}
	return region | 16
}

func (r *regulator) Limit(v, old []float64) bool {
	if r.Body == 0 {
		return false
	}
	back, oldBack := r.Sign*(v[1]-v[0]), r.Sign*(old[1]-old[0])
	limited, moved := limitJunction(back, oldBack, r.VT, criticalVoltage(r.Body, r.VT))
	if moved {
		v[1] = v[0] + r.Sign*limited
	}
	return moved
}

// Share lets no step leap over the narrow range in which a current-limited output regulates, between the flat ranges of
// the full and of no current.
func (r *regulator) Share(v, old []float64) float64 {
	if r.CurrentLimit == 0 {
		return 1
	}
	width := r.ROut * r.CurrentLimit
	above := func(v []float64) float64 {
		target, _ := r.target(r.Sign * v[0])
		return r.Sign*v[1] - target + 0.5*width
	}
	before, after := above(old), above(v)
	if before*after >= 0 || math.Abs(before) < width || math.Abs(after) < width {
		return 1
	}
	return before / (before - after)
}

// ShuntReference is an adjustable shunt reference: it draws cathode current as far as its reference input
// exceeds Set, with transconductance Gain, down to a smallest cathode voltage.
type ShuntReference struct {
	Set          float64 // V, reference to anode
	Gain         float64 // S
	Input        float64 // A, reference input current
	Minimum      float64 // V, smallest cathode-anode voltage at which it conducts
	CurrentLimit float64 // A; 0: none
}

// AddShuntReference adds a shunt reference. Branch 0 is cathode-anode, branch 1 reference-anode.
func (n *Network) AddShuntReference(cathode, reference, anode Node, s ShuntReference) Device {
	return n.add(device{
		kind: nonlinear, law: &shuntReference{s},
		branches: []Branch{{cathode, anode}, {reference, anode}},
		ports: []port{
			{sense: Branch{cathode, anode}, guess: stampGuess},
			{sense: Branch{reference, anode}, guess: stampGuess},
		},
	})
}

type shuntReference struct{ ShuntReference }

// cornerCurrent is what a shunt reference of high gain draws within the corner where it begins to conduct, A: little
// beside the currents it works with.
const cornerCurrent = 0.5e-3

func (s *shuntReference) Evaluate(v []float64, _ float64, i, g []float64) {
	over, dover := smoothPositive(v[1]-s.Set, math.Min(1e-4, cornerCurrent/s.Gain))
	current, slope := s.Gain*over, s.Gain*dover
	if s.CurrentLimit > 0 {
		m, dm, _ := smoothMin(current, s.CurrentLimit, s.CurrentLimit*limitCorner)
		current, slope = m, slope*dm
	}
	// Saturates below the smallest cathode voltage.
	span, dspan := smoothPositive(v[0], 0.01)
	width := math.Max(s.Minimum, 0.1)
	share := math.Tanh(span / width)
	dshare := (1 - share*share) / width * dspan
	sign, dsign := smoothSign(v[1], quiescentKnee)
	i[0] = current*share + gmin*v[0]
	i[1] = s.Input*sign + gmin*v[1]
	g[0], g[1] = current*dshare+gmin, slope*share
	g[2], g[3] = 0, s.Input*dsign+gmin
}

func (s *shuntReference) Limit(v, old []float64) bool { return false }
