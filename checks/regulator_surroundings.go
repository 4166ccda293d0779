package checks

import (
	"fmt"
	"math"
	"slices"

	"railproof/checks/parts"
	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

var regulatorCapacitors = &Check{
	Name: "regulator-capacitors", Title: "capacitors a regulator asks for",
	Applies: "series regulators whose row or rating asks for an input or output capacitance",
	Stress:  "capacitance at its input and output at the low end of its tolerance; series resistance of the largest output capacitor",
	Rating:  "CIN, COUT, ESRmin and ESRmax", Worst: "capacitors at their low tolerance, series resistance at the end that counts",
	Formula: "sum of C (1 + lower tolerance)",
	Assumptions: "how near they stand cannot be read from a netlist: the input capacitor must be within some centimetres; " +
		"a series resistance that is not stated is known as an upper end only, tan delta/(2 pi f C) at 120 Hz of a general-purpose electrolytic",
	SeverityRule: "major where the type is unstable without it (its row has a window of ESR), minor if only the tolerance takes it below; minor otherwise, nominal values counted",
	Source:       "makers' data of the type",
	Remedy:       "the next preferred capacitance, with a series resistance inside the window",
	run: func(p *Pass) {
		p.eachRegulator(func(id netlist.ElementID, e *netlist.Element, d *netlist.Regulator) {
			if !d.Shunt {
				p.regulatorCapacitors(id, e)
			}
		})
	},
}

var regulatorBackflow = &Check{
	Name: "regulator-backflow", Title: "output above the input after line off",
	Applies: "series regulators",
	Stress:  "largest output-over-input voltage while the input collapses",
	Rating:  "VOI, commonly 7 V", Worst: "light load, large output capacitor",
	Formula:      "at most the output voltage, where the input collapses at once; about VF with a protection diode",
	Assumptions:  "without a solved collapse the output voltage bounds it from above",
	SeverityRule: "major: the protection diode is missing; critical: it is drawn the wrong way round",
	Source:       "7 V: commonly quoted for the 78xx family (from memory)",
	Remedy:       "a diode from output (anode) to input (cathode)",
	run: func(p *Pass) {
		p.eachRegulator(func(id netlist.ElementID, e *netlist.Element, d *netlist.Regulator) {
			if !d.Shunt {
				p.report(id, p.judgeBackflow(id, e, d))
			}
		})
	},
}

func (p *Pass) regulatorCapacitors(id netlist.ElementID, e *netlist.Element) {
	low, high := p.known(id, "ESRmin"), p.known(id, "ESRmax")
	severity := Minor
	if low != nil || high != nil {
		severity = Major
	}
	if r := p.known(id, "CIN"); r != nil && r.Value > 0 {
		p.report(id, p.judgeCapacitance(e, study.InputCapacitance, p.capacitorsAt(e, 0), r, Minor))
	}
	out := p.capacitorsAt(e, 2)
	if r := p.known(id, "COUT"); r != nil && r.Value > 0 {
		p.report(id, p.judgeCapacitance(e, study.OutputCapacitance, out, r, severity))
	}
	if severity == Major && len(out) > 0 {
		p.report(id, p.judgeWindow(e, out, low, high))
	}
}

// capacitorsAt lists the capacitors from one pin of a regulator to anything but its two other pins.
func (p *Pass) capacitorsAt(e *netlist.Element, pin int) []netlist.ElementID {
	c := p.Circuit()
	other := e.Nodes[2-pin]
	var list []netlist.ElementID
	for _, n := range p.shorted(e.Nodes[pin]) {
		for _, id := range c.Touching(n) {
			x := &c.Elements[id]
			if _, ok := x.Device.(netlist.Capacitor); !ok || slices.Contains(x.Nodes, other) {
				continue
			}
			if e.Nodes[1] != netlist.Ground && slices.Contains(x.Nodes, e.Nodes[1]) && p.adjusts(e) {
				continue
			}
			if len(list) == 0 || list[len(list)-1] != id {
				list = append(list, id)
			}
		}
	}
	return list
}

// adjusts reports whether the reference pin of a regulator is an adjust pin.
func (p *Pass) adjusts(e *netlist.Element) bool {
	d, ok := e.Device.(netlist.Regulator)
	return ok && d.Adjustable
}

// lowCapacitance is the capacitance of a capacitor at the low end of its tolerance, F.
func (p *Pass) lowCapacitance(id netlist.ElementID) float64 {
	c, ok := p.element(id).Device.(netlist.Capacitor)
	if !ok {
		return 0
	}
	low := -0.1 // common practice for film and ceramic
	if c.Farads >= electrolyticFrom {
		low = -0.2 // common practice for electrolytics
	}
	if t, stated := p.Supply.Property(id, "tolerance"); stated {
		low = t.Low
	}
	return c.Farads * (1 + low)
}

// judgeCapacitance holds the capacitance at one pin, at its low tolerance, against what is asked for. Makers
// mostly mean nominal values: where only the tolerance takes it below, the finding is minor if the type could
// oscillate, and none otherwise.
func (p *Pass) judgeCapacitance(e *netlist.Element, q study.Quantity, list []netlist.ElementID, asked *Rating, below Severity) Finding {
	sum, nominal, names := 0.0, 0.0, "none there"
	for k, id := range list {
		x := p.element(id)
		if c, ok := x.Device.(netlist.Capacitor); ok {
			nominal += c.Farads
		}
		sum += p.lowCapacitance(id)
		if k == 0 {
			names = x.Name
		} else {
			names += ", " + x.Name
		}
	}
	s := p.steadyStress(e.Name, q, sum, quantity.Farad)
	s.Condition.Name = "capacitors at their low tolerance"
	if nominal >= asked.Value*(1-1e-9) && sum < asked.Value {
		if below == Major {
			below = Minor
			names += "; the nominal value is enough"
		} else {
			s.Value, s.Condition.Name = math.Max(nominal, asked.Value), "capacitors at their nominal value"
		}
	}
	remedy := "a capacitor of " + quantity.Format(nextStandard(parts.E6, asked.Value/0.8), quantity.Farad, 3)
	return p.judgeMinimum(lower{
		stress: s, rating: asked, symbol: asked.Symbol, unit: quantity.Farad, note: names, lost: math.Inf(-1), below: below, remedy: remedy,
	})
}

// judgeWindow holds the series resistance of the largest output capacitor against the window of the type.
func (p *Pass) judgeWindow(e *netlist.Element, list []netlist.ElementID, low, high *Rating) Finding {
	largest := list[0]
	for _, id := range list {
		if p.lowCapacitance(id) > p.lowCapacitance(largest) {
			largest = id
		}
	}
	name := p.element(largest).Name
	esr, stated := p.Supply.Property(largest, "ESR")
	if !stated {
		f := Finding{Verdict: Unproven, Reason: "it is stable only with a series resistance of the output capacitor " + window(low, high) + ", and that of " + name + " is not known",
			Needs: &Needs{Statement: "rate " + name + " ESR=...Ohm"}}
		f.Stress = p.steadyStress(e.Name, study.SeriesResistance, math.NaN(), quantity.Ohm)
		f.Stress.Unproven = f.Reason
		return f
	}
	note := "series resistance of " + name + ", window " + window(low, high)
	remedy := "an output capacitor with a series resistance " + window(low, high)
	s := p.steadyStress(e.Name, study.SeriesResistance, esr.High, quantity.Ohm)
	if low != nil && esr.Low < low.Value {
		s.Value = esr.Low
		return p.judgeMinimum(lower{stress: s, rating: low, symbol: "ESRmin", unit: quantity.Ohm, note: note, remedy: remedy, lost: math.Inf(-1), below: Major})
	}
	if high == nil {
		s.Value = esr.Low
		return p.judgeMinimum(lower{stress: s, rating: low, symbol: "ESRmin", unit: quantity.Ohm, note: note, lost: math.Inf(-1), below: Major})
	}
	return p.judgePlain(upper{stress: s, rating: high, symbol: "ESRmax", unit: quantity.Ohm, note: note, remedy: remedy, critical: Major})
}

func window(low, high *Rating) string {
	switch {
	case low == nil:
		return "of at most " + quantity.Format(high.Value, quantity.Ohm, 3)
	case high == nil:
		return "of at least " + quantity.Format(low.Value, quantity.Ohm, 3)
	}
	return fmt.Sprintf("of %s to %s", quantity.Format(low.Value, quantity.Ohm, 3), quantity.Format(high.Value, quantity.Ohm, 3))
}

// guard is how a diode lies between output and input of a regulator.
type guard uint8

const (
	noGuard guard = iota
	guarded       // anode where the output lies above the input
	reversed
)

// guardOf looks for a protection diode between output and input.
func (p *Pass) guardOf(e *netlist.Element, d *netlist.Regulator) (guard, string) {
	c := p.Circuit()
	for _, id := range c.Between(e.Nodes[2], e.Nodes[0]) {
		x := &c.Elements[id]
		if _, ok := x.Device.(netlist.Diode); !ok || p.Supply.IsZener(id) {
			continue
		}
		if (x.Nodes[0] == e.Nodes[2]) == (d.Polarity >= 0) {
			return guarded, x.Name
		}
		return reversed, x.Name
	}
	return noGuard, ""
}

func (p *Pass) judgeBackflow(id netlist.ElementID, e *netlist.Element, d *netlist.Regulator) Finding {
	remedy := "a diode from output (anode) to input (cathode)"
	if d.Polarity < 0 {
		remedy = "a diode from input (anode) to output (cathode)"
	}
	kind, name := p.guardOf(e, d)
	if kind == reversed {
		return Finding{Verdict: Violated, Severity: Critical, Remedy: remedy,
			Reason: "its protection diode " + name + " is drawn the wrong way round: it feeds the unregulated input into the output"}
	}
	note := "no protection diode"
	if kind == guarded {
		note = "protection diode " + name
	}
	s, bound := p.get(e.Name, study.MaxBackflow), false
	if s == nil {
		s, bound = p.outputCrest(e, d), true
		if kind == guarded && s != nil {
			capped := *s
			capped.Value = math.Min(s.Value, guardDrop)
			s = &capped
			note += fmt.Sprintf(", its drop taken as %.2g V", guardDrop)
		} else {
			note += ", the output voltage bounds it from above"
		}
	}
	f := p.judgePlain(upper{
		stress: s, rating: p.known(id, "VOI"), symbol: "VOI", unit: quantity.Volt, note: note, remedy: remedy, critical: Major,
	})
	if bound && f.Verdict == Violated {
		f.Verdict, f.Severity, f.Remedy, f.Margin = Unproven, "", "", 0
		f.Reason = "the collapse of the input after line off was not solved, and there is no protection diode"
		f.Needs = &Needs{Statement: remedy}
	}
	return f
}

// guardDrop is the forward drop of a protection diode at a high discharge current, V: twice what the 1N4001
// family drops at 1 A, 1.1 V. Common practice.
const guardDrop = 2.2

// outputCrest is the highest output voltage of a regulator above its return: the bound of what flows back.
func (p *Pass) outputCrest(e *netlist.Element, d *netlist.Regulator) *study.Stress {
	node := "node:" + p.Circuit().Nodes[e.Nodes[2]].Name
	q := study.MaxVoltage
	if d.Polarity < 0 {
		q = study.MinVoltage
	}
	s := p.get(node, q)
	if !found(s) || e.Nodes[1] != netlist.Ground && !d.Adjustable {
		return nil
	}
	sign := 1.0
	if d.Polarity < 0 {
		sign = -1
	}
	m := derived(s, study.MaxBackflow, quantity.Volt, 0, sign)
	m.Element = e.Name
	m.Value = math.Max(0, m.Value)
	return m
}
