package checks

import (
	"fmt"
	"math"

	"railproof/checks/parts"
	"railproof/checks/policy"
	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

var fuseCurrent = &Check{
	Name: "fuse-current", Title: "fuse current",
	Applies: "resistors that stand for a fuse (IN or family stated)",
	Stress:  "RMS current", Rating: "IN", Worst: "full load, high line", Policy: policy.FuseCurrent,
	Formula: "bridge with reservoir: 1.6 to 2.3 times Idc in the winding; in the primary that times the turns ratio",
	Assumptions: "the policy factor keeps a fuse from ageing at 25 degC; with an output shorted it must carry at least 2.1 IN, " +
		"the multiple by which its family has opened within minutes",
	SeverityRule: standardSeverity + " (nuisance blowing); major where a shorted output cannot blow it, or where it cannot break the current",
	Source:       "gates of IEC 60127-2 by family: makers' data",
	Remedy:       "the next standard fuse current",
	run: func(p *Pass) {
		p.eachFuse(func(id netlist.ElementID, e *netlist.Element) {
			p.report(id, p.judge(upper{
				stress: p.get(e.Name, study.RMSCurrent), rating: p.known(id, "IN"), symbol: "IN", unit: quantity.Ampere, key: policy.FuseCurrent, steps: parts.FuseCurrent,
			}))
			if f, ok := p.judgeClearing(id, p.get(e.Name, study.ShortCurrent)); ok {
				p.report(id, f)
			}
		})
	},
}

var fuseSurge = &Check{
	Name: "fuse-surge", Title: "fuse at switch-on",
	Applies: "resistors that stand for a fuse (IN or family stated)",
	Stress:  "I2t of the switch-on, cold and after a dip; of a primary fuse with the magnetising inrush of the transformer",
	Rating:  "the melting I2t", Worst: "cold start at high line, reservoir empty", Policy: policy.I2t,
	Formula:      "half sine of crest I and length t: I^2 t/2",
	Assumptions:  "the magnetising inrush is one half sine of half a period; published melting integrals are typical values",
	SeverityRule: standardSeverity,
	Source:       "melting integrals by family and rating: makers' data",
	Remedy:       "a time-lag fuse, the next fuse current, or an inrush limiter",
	run: func(p *Pass) {
		p.eachFuse(func(id netlist.ElementID, e *netlist.Element) {
			p.report(id, p.judgeFuseSurge(id, p.get(e.Name, study.SurgeI2t)))
		})
	},
}

var limiterCurrent = &Check{
	Name: "limiter-current", Title: "current of an inrush limiter",
	Applies: "resistors that stand for an inrush limiter (Rcold stated)",
	Stress:  "RMS current in the steady state", Rating: "Imax", Worst: "full load, high line",
	Formula:      "bridge with reservoir: 1.6 to 2.3 times Idc in the winding",
	Assumptions:  "the ambient does not lower Imax",
	SeverityRule: "critical beyond the rating",
	Source:       "highest steady current: makers' data of the type",
	Remedy:       "a limiter with a higher Imax, or a relay that bridges it",
	run: func(p *Pass) {
		p.each(func(id netlist.ElementID, e *netlist.Element) {
			if p.isLimiter(id) {
				p.report(id, p.judgePlain(upper{
					stress: p.get(e.Name, study.RMSCurrent), rating: p.known(id, "Imax"), symbol: "Imax", unit: quantity.Ampere,
					remedy: "a limiter with a higher Imax, or a relay that bridges it",
				}))
			}
		})
	},
}

// eachFuse calls f for every resistor that stands for a fuse.
func (p *Pass) eachFuse(f func(id netlist.ElementID, e *netlist.Element)) {
	p.each(func(id netlist.ElementID, e *netlist.Element) {
		if p.isFuse(id) {
			f(id, e)
		}
	})
}

// fuseFamily is the standard sheet of a fuse, where its marking names one.
func (p *Pass) fuseFamily(id netlist.ElementID) (parts.FuseFamily, bool) {
	marking, ok := p.Supply.Property(id, "family")
	if !ok {
		return "", false
	}
	return parts.FuseFamilyOf(marking.Text)
}

// meltingRating is the melting integral of a fuse: stated, or of its family and rated current.
func (p *Pass) meltingRating(id netlist.ElementID) *Rating {
	if r := p.known(id, "I2t"); r != nil {
		return r
	}
	family, ok := p.fuseFamily(id)
	in := p.known(id, "IN")
	if !ok || in == nil {
		return nil
	}
	v, _, ok := parts.FuseMelting(family, in.Value)
	if !ok {
		return nil
	}
	return &Rating{Symbol: "I2t", Value: v.Number, Unit: v.Unit, Origin: fmt.Sprintf("fuse family %s, %s", family, quantity.Format(in.Value, quantity.Ampere, 3)),
		Source: v.Source, Confidence: v.Confidence}
}

func (p *Pass) judgeFuseSurge(id netlist.ElementID, s *study.Stress) Finding {
	rating := p.meltingRating(id)
	if s == nil {
		f := p.unsolvedStress(Finding{Rating: rating}, "its current at switch-on was not solved")
		return f
	}
	note := ""
	if winding, primary := p.primaryBehind(id); primary {
		inrush := p.known(winding, "Iinrush")
		name := p.element(winding).Name
		if inrush == nil {
			f := p.judge(upper{stress: s, rating: rating, symbol: "I2t", unit: quantity.AmpereSquaredSecond, key: policy.I2t})
			if f.Verdict == Violated {
				return f
			}
			f.Verdict, f.Margin = Unproven, 0
			f.Reason = "the magnetising inrush of " + name + ", which no netlist shows, goes through it"
			f.Needs = &Needs{Statement: "rate " + name + " Iinrush=...A"}
			return f
		}
		extra := inrushIntegral(inrush.Value, p.lineFrequency())
		sum := *s
		sum.Value += extra
		s = &sum
		note = fmt.Sprintf("with %s of magnetising inrush", quantity.Format(extra, quantity.AmpereSquaredSecond, 3))
	}
	return p.judge(upper{
		stress: s, rating: rating, symbol: "I2t", unit: quantity.AmpereSquaredSecond, key: policy.I2t, note: note,
		remedy: "a time-lag fuse, the next fuse current, or an inrush limiter",
	})
}

// inrushIntegral is the I2t in A^2 s of one half sine of a crest in amperes and half a period of a frequency in Hz.
func inrushIntegral(crest, hertz float64) float64 { return crest * crest / (2 * hertz) / 2 }

// primaryBehind finds the coupled inductor, or the source that stands for the line, that a fuse is in series with.
func (p *Pass) primaryBehind(id netlist.ElementID) (winding netlist.ElementID, ok bool) {
	c, coupled := p.Circuit(), p.coupled()
	line := map[netlist.ElementID]bool{}
	p.each(func(k netlist.ElementID, e *netlist.Element) {
		if _, sine := sineOf(e); sine && p.declaredWinding(k) == nil {
			line[k] = true
		}
	})
	// The primary is what is reached from the fuse without passing the winding; it is one only where the
	// line is reached as well.
	reach := c.Reach(p.element(id).Nodes, func(k netlist.ElementID) bool {
		_, resistor := c.Elements[k].Device.(netlist.Resistor)
		return resistor
	})
	winding, fed := -1, false
	for _, n := range reach {
		for _, k := range c.Touching(n) {
			if coupled[k] && winding < 0 {
				winding = k
			}
			fed = fed || line[k]
		}
	}
	return winding, winding >= 0 && fed
}

// certainMultiple is the multiple of IN by which every family of IEC 60127-2 has opened, within 30 minutes at most.
const certainMultiple = 2.1

// judgeClearing holds the current through a fuse with an output shorted against what blows it, and against what
// it can break. ok is false where the short was not solved.
func (p *Pass) judgeClearing(id netlist.ElementID, short *study.Stress) (f Finding, ok bool) {
	in := p.known(id, "IN")
	if !found(short) || in == nil {
		return Finding{}, false
	}
	if breaking := p.known(id, "IBC"); breaking != nil && short.Value+short.Error > breaking.Value {
		return p.judgePlain(upper{stress: short, rating: breaking, symbol: "IBC", unit: quantity.Ampere, critical: Major,
			remedy: "a fuse of high breaking capacity"}), true
	}
	blows := *in
	blows.Value *= certainMultiple
	note := ""
	if family, known := p.fuseFamily(id); known {
		for _, g := range parts.FuseGates(family, in.Value) {
			if !math.IsInf(g.AtMost, 1) && short.Value >= g.Multiple*in.Value {
				note = fmt.Sprintf("opens within %s", quantity.Format(g.AtMost, quantity.Second, 3))
			}
		}
	}
	return p.judgeMinimum(lower{
		stress: short, rating: &blows, symbol: "IN", unit: quantity.Ampere, lost: math.Inf(-1), below: Major, note: note,
		remedy: "a smaller fuse, or one nearer to the output: a shorted output does not blow it",
	}), true
}
