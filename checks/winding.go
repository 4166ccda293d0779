package checks

import (
	"fmt"

	"railproof/checks/policy"
	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

var windingCurrent = &Check{
	Name: "winding-current", Title: "winding current",
	Applies: "sources declared as `winding`, coupled inductors, and chokes whose Irms or Isat is stated",
	Stress:  "RMS current; its DC component where it feeds a half-wave rectifier; where Isat is stated the peak",
	Rating:  "the rated current of the winding, Irms; Isat", Worst: "full load, high line, source resistance low", Policy: policy.WindingCurrent,
	Formula: "bridge with reservoir: 1.6 to 2.3 times Idc as the source resistance goes from 10 % to 1 % of the load; centre-tap half: that / sqrt(2)",
	Assumptions: "core saturation is not modelled; a DC component above a twentieth of the rated current counts, " +
		"since it saturates small cores (common practice); in a centre-tap the halves cancel",
	SeverityRule: standardSeverity + "; minor for the DC component of half-wave rectification",
	Source:       "current ratios: rectifier guide of a transformer maker (1.61 and 1.8 quoted for a bridge), recalculated",
	Remedy:       "a transformer of more VA; full-wave rectification against the DC component",
	run: func(p *Pass) {
		coupled, oneWay := p.coupled(), p.oneWayWindings()
		p.each(func(id netlist.ElementID, e *netlist.Element) {
			rating, is := p.windingRating(id, coupled[id])
			if !is {
				return
			}
			p.report(id, p.judge(upper{
				stress: p.get(e.Name, study.RMSCurrent), rating: rating, symbol: "Irms", unit: quantity.Ampere, key: policy.WindingCurrent,
				remedy: "a transformer or choke of a higher rated current",
			}))
			if dc := p.get(e.Name, study.DCCurrent); found(dc) && rating != nil && oneWay[id] {
				p.report(id, p.judgeDC(dc, rating))
			}
			if isat := p.known(id, "Isat"); isat != nil {
				p.report(id, p.judgePlain(upper{
					stress: p.get(e.Name, study.PeakCurrent), rating: isat, symbol: "Isat", unit: quantity.Ampere, remedy: "a choke with a higher Isat",
				}))
			}
		})
	},
}

var chokeInductance = &Check{
	Name: "choke-inductance", Title: "critical inductance of an input choke",
	Applies: "chokes between a rectifier and the first capacitor",
	Stress:  "smallest current over the period", Rating: "above zero at light load", Worst: "light load, low inductance, high line",
	Formula:      "full-wave: L > R/(3 w), R the largest load resistance: R/942 H at 50 Hz, R/1131 H at 60 Hz",
	Assumptions:  "the inductance is constant",
	SeverityRule: "major: below the critical inductance the output climbs towards the crest",
	Source:       "critical inductance from the second harmonic of a full wave, 4/(3 pi) against the mean 2/pi",
	Remedy:       "a larger inductance, or a bleeder that keeps the current flowing",
	run: func(p *Pass) {
		coupled := p.coupled()
		p.each(func(id netlist.ElementID, e *netlist.Element) {
			if _, ok := e.Device.(netlist.Inductor); !ok || coupled[id] {
				return
			}
			if forward, ok := p.inputChoke(e); ok {
				p.report(id, p.judgeChoke(p.leastCurrent(e.Name, forward), p.get(e.Name, study.PeakCurrent)))
			}
		})
	},
}

// coupled is the set of inductors that belong to a transformer.
func (p *Pass) coupled() map[netlist.ElementID]bool {
	set := map[netlist.ElementID]bool{}
	p.each(func(_ netlist.ElementID, e *netlist.Element) {
		if k, ok := e.Device.(netlist.Coupling); ok {
			for _, l := range k.Inductors {
				set[l] = true
			}
		}
	})
	return set
}

// oneWayWindings is the set of windings that feed a half-wave rectifier: nothing cancels their direct current.
func (p *Pass) oneWayWindings() map[netlist.ElementID]bool {
	set := map[netlist.ElementID]bool{}
	for _, rail := range p.Circuit().RailMap(p.Supply.Duty) {
		if rail.Rectifier() != netlist.HalfWave {
			continue
		}
		for _, s := range rail.Stages {
			if s.Role == netlist.StageSource || s.Role == netlist.StageTransformer {
				for _, id := range s.Elements {
					set[id] = true
				}
			}
		}
	}
	return set
}

// declaredWinding is the winding that a source stands for, nil if it is none.
func (p *Pass) declaredWinding(id netlist.ElementID) *netlist.Winding {
	for k := range p.Supply.Duty.Windings {
		if w := &p.Supply.Duty.Windings[k]; w.Source == id {
			return w
		}
	}
	return nil
}

// windingRating is the rated current of a winding or choke, nil if unknown; is tells whether it is one that
// the check applies to.
func (p *Pass) windingRating(id netlist.ElementID, coupled bool) (rating *Rating, is bool) {
	rating = p.known(id, "Irms")
	if w := p.declaredWinding(id); w != nil {
		if rating == nil && w.Current > 0 {
			rating = &Rating{Symbol: "Irms", Value: w.Current, Unit: quantity.Ampere, Confidence: "stated",
				Origin: fmt.Sprintf("winding %s %s", p.element(id).Name, quantity.Format(w.Current, quantity.Ampere, 3))}
		}
		return rating, true
	}
	if _, inductor := p.element(id).Device.(netlist.Inductor); !inductor {
		return nil, false
	}
	return rating, coupled || rating != nil || p.known(id, "Isat") != nil
}

// dcPart is the part of the rated current above which a DC component of a winding counts. Common practice.
const dcPart = 0.05

func (p *Pass) judgeDC(dc *study.Stress, rated *Rating) Finding {
	part := *rated
	part.Value *= dcPart
	f := p.judgePlain(upper{
		stress: dc, rating: &part, symbol: "Irms", unit: quantity.Ampere, critical: Minor,
		note: "the DC component moves the core towards saturation, which is not modelled", remedy: "full-wave rectification, or a transformer meant for it",
	})
	return f
}

// inputChoke reports whether an inductor lies directly behind a rectifier, with no capacitor of size before it,
// and whether its current flows from its first node to its second.
func (p *Pass) inputChoke(e *netlist.Element) (forward, ok bool) {
	c := p.Circuit()
	for pin, n := range e.Nodes[:2] {
		if n == netlist.Ground {
			continue
		}
		cathodes, anodes, smoothed := 0, 0, false
		for _, t := range c.Nodes[n].Terminals {
			x := &c.Elements[t.Element]
			switch d := x.Device.(type) {
			case netlist.Diode:
				if p.Supply.IsZener(t.Element) {
					continue
				}
				if t.Pin == 1 {
					cathodes++
				} else {
					anodes++
				}
			case netlist.Capacitor:
				smoothed = smoothed || d.Farads >= smoothing
			}
		}
		// A rectifier delivers at its common cathodes, or draws at its common anodes.
		if smoothed || cathodes+anodes == 0 || cathodes > 0 && anodes > 0 && cathodes == anodes && cathodes+anodes == 2 {
			continue
		}
		return (cathodes > anodes) == (pin == 0), true
	}
	return false, false
}

// smoothing is the capacitance from which a capacitor at a rectifier makes it capacitor-input, F.
const smoothing = 1e-6

// leastCurrent is the smallest current of a choke in the direction in which it works.
func (p *Pass) leastCurrent(name string, forward bool) *study.Stress {
	if s := p.get(name, study.LeastCurrent); s != nil || !forward {
		return s
	}
	return p.get(name, study.MinCurrent)
}

// stopped is the part of its peak current below which a choke counts as without current: leakage and the
// error of the solution lie below it.
const stopped = 1e-3

func (p *Pass) judgeChoke(least, peak *study.Stress) Finding {
	f := Finding{Stress: least, Floor: true, Limit: p.unchanged(0)}
	if !found(least) {
		return p.unsolvedStress(f, "its smallest current was not solved")
	}
	floor := 0.0
	if found(peak) {
		floor = stopped * peak.Value
	}
	switch {
	case least.Value-least.Error <= floor:
		f.Verdict, f.Severity = Violated, Major
		f.Reason = "the current stops within the period: the output climbs towards the crest"
		f.Remedy = "a larger inductance, or a bleeder that keeps the current flowing"
	case least.Unproven != "":
		f.Verdict, f.Reason, f.Needs = Unproven, least.Unproven, missing(least)
	default:
		f.Verdict = Proven
	}
	return f
}
