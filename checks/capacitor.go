package checks

import (
	"fmt"
	"math"
	"slices"

	"railproof/checks/parts"
	"railproof/checks/policy"
	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

var capacitorVoltage = &Check{
	Name: "capacitor-voltage", Title: "capacitor voltage", Headline: true,
	Applies: "every capacitor",
	Stress:  "crest of the voltage including ripple",
	Rating:  "UR, the rated voltage (IEC 60384); 1.15 UR to 315 V and 1.10 UR above for a switch-on overshoot alone; across the mains UAC and an X class",
	Worst:   "high line, no load, transformer unloaded",
	Formula: "reservoir of a bridge: sqrt(2) x off-load winding voltage x high line",
	Assumptions: "capacitors of 10 uF and more are taken as electrolytics, smaller ones as film, unless the duty sheet says otherwise; " +
		"an overshoot counts as one when the steady voltage is known apart and lower",
	SeverityRule: standardSeverity,
	Source:       "rated voltage as the continuous limit and surge voltage: IEC 60384-4 (from memory); 1.15 up to 100 V: makers' data",
	Remedy:       "the next standard rated voltage", Policy: policy.ElectrolyticVoltage,
	run: func(p *Pass) {
		p.eachCapacitor(func(id netlist.ElementID, e *netlist.Element, c *netlist.Capacitor) {
			p.report(id, p.judgeCapacitorVoltage(id, e, c))
		})
	},
}

var capacitorReverseVoltage = &Check{
	Name: "capacitor-reverse-voltage", Title: "reverse voltage of a polarised capacitor",
	Applies: "polarised capacitors: electrolytics and tantalums, node 1 plus",
	Stress:  "largest negative voltage, steady and on the way from switch-on",
	Rating:  "1 V for aluminium electrolytics; 2 % of UR for tantalums", Worst: "cold start; the opposite rail of a dual supply comes up first",
	Formula:      "a diode across the output holds it to VF, about 0.7 V",
	Assumptions:  "capacitors of 10 uF and more are polarised unless `polarised=no` or their technology says otherwise",
	SeverityRule: "critical: wrong polarity, or driven by the opposite rail",
	Source:       "1 V: makers' data of aluminium electrolytics; 2 % for tantalum: two-level derating guide, second-hand",
	Remedy:       "turn it round, use a bipolar type, or put a diode across it",
	run: func(p *Pass) {
		p.eachCapacitor(func(id netlist.ElementID, e *netlist.Element, c *netlist.Capacitor) {
			if p.polarised(id) {
				p.report(id, p.judgeReverse(id, p.get(e.Name, study.MinVoltage)))
			}
		})
	},
}

// eachCapacitor calls f for every capacitor of the circuit.
func (p *Pass) eachCapacitor(f func(id netlist.ElementID, e *netlist.Element, c *netlist.Capacitor)) {
	p.each(func(id netlist.ElementID, e *netlist.Element) {
		if c, ok := e.Device.(netlist.Capacitor); ok {
			f(id, e, &c)
		}
	})
}

func (p *Pass) judgeCapacitorVoltage(id netlist.ElementID, e *netlist.Element, c *netlist.Capacitor) Finding {
	if source, ok := p.acrossMains(e); ok {
		return p.judgeMainsCapacitor(id, source)
	}
	s := p.largerMagnitude(e.Name, study.MaxVoltage, study.MinVoltage)
	rating := p.known(id, "UR")
	key, steps := p.dielectric(id, c)
	u := upper{stress: s, rating: rating, symbol: "UR", unit: quantity.Volt, key: key, steps: steps}
	f := p.judge(u)
	if f.Verdict == Violated && rating != nil && key == policy.ElectrolyticVoltage && s.Condition.Start == "cold" {
		if steady := p.get(e.Name, study.SteadyMaxVoltage); found(steady) {
			f = p.judgeOvershoot(id, u, steady)
		}
	}
	if node, ok := p.capacitorsOnly(e); ok && f.Verdict == Proven {
		f.Verdict, f.Margin = Unproven, 0
		f.Reason = "only capacitors meet at node " + node + ": how they share the voltage is decided by their leakage"
		f.Needs = &Needs{Statement: "resistors across the capacitors in series"}
	}
	return f
}

// judgeOvershoot holds the steady voltage against UR and the switch-on overshoot against the surge voltage.
func (p *Pass) judgeOvershoot(id netlist.ElementID, u upper, steady *study.Stress) Finding {
	crest := u.stress
	surge := p.known(id, "US")
	if surge == nil {
		factor, ok := parts.Electrolytic(parts.SurgeFactor, u.rating.Value)
		if !ok {
			return p.judge(u)
		}
		r := *u.rating
		r.Symbol, r.Value = "US", r.Value*factor.Number
		r.Source, r.Confidence = fmt.Sprintf("%.3g x UR: %s", factor.Number, factor.Source), factor.Confidence
		surge = &r
	}
	note := fmt.Sprintf("switch-on overshoot %s, surge voltage %s", quantity.Format(crest.Value, quantity.Volt, 3), quantity.Format(surge.Value, quantity.Volt, 3))
	if crest.Value+crest.Error > surge.Value {
		return p.judge(upper{stress: crest, rating: surge, symbol: "UR", unit: quantity.Volt, note: note, key: u.key, steps: u.steps,
			remedy: "a higher UR, or less overshoot: a bleeder or damping"})
	}
	u.stress, u.note = steady, note
	return p.judge(u)
}

// acrossMains finds the source declared as the line that a capacitor lies directly across, fuses between
// them aside.
func (p *Pass) acrossMains(e *netlist.Element) (netlist.ElementID, bool) {
	var a, b []netlist.NodeID
	for _, l := range p.Supply.Duty.Lines {
		if l.Source < 0 {
			continue
		}
		if a == nil {
			a, b = p.shorted(e.Nodes[0]), p.shorted(e.Nodes[1])
		}
		n := p.element(l.Source).Nodes
		if slices.Contains(a, n[0]) && slices.Contains(b, n[1]) || slices.Contains(a, n[1]) && slices.Contains(b, n[0]) {
			return l.Source, true
		}
	}
	return 0, false
}

// judgeMainsCapacitor asks for the alternating rating and the interference class of a mains capacitor.
func (p *Pass) judgeMainsCapacitor(id, source netlist.ElementID) Finding {
	e := p.element(id)
	rating := p.known(id, "UAC")
	s := p.get(e.Name, study.RMSVoltage)
	if s == nil {
		for _, l := range p.Supply.Duty.Lines {
			if l.Source == source {
				s = &study.Stress{
					Element: e.Name, Quantity: study.RMSVoltage, Unit: quantity.Volt, Value: l.Range.High, Phase: math.NaN(),
					Condition: study.Condition{Name: "high line", Line: "high", Load: "as-written", Start: "steady"},
				}
			}
		}
	}
	f := p.judgePlain(upper{
		stress: s, rating: rating, symbol: "UAC", unit: quantity.Volt, note: "across the line " + p.element(source).Name,
		remedy: "a mains capacitor with a higher UAC",
	})
	class, ok := p.Supply.Property(id, "class")
	if !ok && f.Verdict == Proven {
		f.Verdict, f.Margin = Unproven, 0
		f.Reason = "a capacitor across the mains must be of class X1 or X2 (IEC 60384-14); none is stated"
		f.Needs = &Needs{Statement: "rate " + e.Name + " class=X2"}
	}
	if ok {
		f.Note = join(f.Note, "class "+class.Text)
	}
	return f
}

// judgeReverse holds the most negative voltage of a polarised capacitor against what it bears.
func (p *Pass) judgeReverse(id netlist.ElementID, lowest *study.Stress) Finding {
	if !found(lowest) {
		return p.unsolvedStress(Finding{Stress: lowest}, "")
	}
	s := derived(lowest, study.ReverseVoltage, quantity.Volt, 0, -1)
	s.Value = math.Max(0, s.Value)
	rating := p.reverseRating(id)
	if rating == nil {
		if s.Value+s.Error > 0.5 {
			rating = &Rating{Symbol: reverseVoltage, Unit: quantity.Volt, Value: 0.5, Origin: "half a volt at most for any tantalum", Confidence: parts.Memory, Source: "from memory"}
		} else {
			return Finding{Stress: s, Verdict: Unproven, Reason: "what a tantalum bears in reverse follows from its UR, which is not known",
				Needs: &Needs{Symbol: "UR", Value: s.Value / tantalumReverse, Unit: quantity.Volt}}
		}
	}
	return p.judgePlain(upper{
		stress: s, rating: rating, symbol: "UR", unit: quantity.Volt,
		remedy: "turn it round if it is drawn so; else a bipolar type, or a diode across it that holds the reverse voltage",
	})
}

// reverseVoltage names what a polarised capacitor bears in reverse in a finding; nobody states it in a duty sheet.
const reverseVoltage netlist.Symbol = "Urev"

// tantalumReverse is the part of UR that a tantalum bears in reverse: the two-level derating guide, second-hand.
const tantalumReverse = 0.02

// reverseRating is the reverse voltage that a polarised capacitor bears; nil where it follows from an unknown UR.
func (p *Pass) reverseRating(id netlist.ElementID) *Rating {
	if p.technology(id) == "tantalum" {
		ur := p.known(id, "UR")
		if ur == nil {
			return nil
		}
		return &Rating{Symbol: reverseVoltage, Value: tantalumReverse * ur.Value, Unit: quantity.Volt, Origin: "2 % of UR, " + ur.Origin,
			Source: "two-level derating guide", Confidence: policy.SecondHand}
	}
	v, ok := parts.Electrolytic(parts.ReverseVoltage, 0)
	if !ok {
		return nil
	}
	return &Rating{Symbol: reverseVoltage, Value: v.Number, Unit: quantity.Volt, Origin: "any aluminium electrolytic", Source: v.Source, Confidence: v.Confidence}
}

// largerMagnitude returns the stress of larger magnitude of a largest and a smallest value, as a magnitude.
func (p *Pass) largerMagnitude(element string, largest, smallest study.Quantity) *study.Stress {
	a, b := p.get(element, largest), p.get(element, smallest)
	if a == nil || b == nil || math.IsNaN(a.Value) || !(-b.Value > a.Value) {
		return a
	}
	m := *b
	m.Value = -m.Value
	return &m
}

// electrolyticFrom is the capacitance from which a capacitor is taken as an electrolytic, F.
const electrolyticFrom = 10e-6

// technology is what a capacitor is stated to be made of, empty if nothing is said.
func (p *Pass) technology(id netlist.ElementID) string {
	t, _ := p.Supply.Property(id, "technology")
	return t.Text
}

// polarised reports whether node 1 of a capacitor must stay positive.
func (p *Pass) polarised(id netlist.ElementID) bool {
	return p.Circuit().Polarised(id, p.Supply.Duty)
}

// dielectric chooses the policy row and the standard voltages of a capacitor by its stated technology, or by
// its size.
func (p *Pass) dielectric(id netlist.ElementID, c *netlist.Capacitor) (policy.Key, parts.StepKind) {
	switch p.technology(id) {
	case "film":
		return policy.FilmVoltage, parts.FilmVoltage
	case "ceramic":
		return policy.CeramicVoltage, parts.ElectrolyticVoltage
	case "tantalum":
		return policy.TantalumVoltage, parts.ElectrolyticVoltage
	case "electrolytic":
		return policy.ElectrolyticVoltage, parts.ElectrolyticVoltage
	}
	if p.polarised(id) || c.Farads >= electrolyticFrom {
		return policy.ElectrolyticVoltage, parts.ElectrolyticVoltage
	}
	return policy.FilmVoltage, parts.FilmVoltage
}

// capacitorsOnly finds an end of an element at which nothing but capacitors meet.
func (p *Pass) capacitorsOnly(e *netlist.Element) (node string, ok bool) {
	c := p.Circuit()
	for _, n := range e.Nodes {
		if n == netlist.Ground {
			continue
		}
		others := 0
		for _, id := range c.Touching(n) {
			if _, capacitor := c.Elements[id].Device.(netlist.Capacitor); !capacitor {
				others++
			}
		}
		if others == 0 {
			return c.Nodes[n].Name, true
		}
	}
	return "", false
}

// shorted is the set of nodes that a node is joined to by ammeters, zero resistances and fuses.
func (p *Pass) shorted(n netlist.NodeID) []netlist.NodeID {
	c := p.Circuit()
	return c.Reach([]netlist.NodeID{n}, func(id netlist.ElementID) bool {
		switch d := c.Elements[id].Device.(type) {
		case netlist.Resistor:
			return d.Ohms == 0 || p.isFuse(id)
		case netlist.VoltageSource:
			w, constant := d.Wave.(netlist.Constant)
			return constant && w.Level == 0
		}
		return false
	})
}
