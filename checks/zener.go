package checks

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"railproof/checks/parts"
	"railproof/checks/policy"
	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

var zenerResistorPower = &Check{
	Name: "zener-resistor-power", Title: "power in the zener's series resistor", Headline: true,
	Applies: "every resistor that feeds a shunt zener",
	Stress:  "mean power over the period; with the output shorted as well",
	Rating:  "P70, derated linearly from 70 degC to nothing at the highest film temperature (IEC 60115)",
	Worst:   "high line, load open, resistor and zener voltage low", Policy: policy.ResistorPower,
	Formula:      "P = (Vin - VZ)^2 / R, with Vin the mean square input; Vin^2 / R with the output shorted",
	Assumptions:  "film resistor: full power to 70 degC, zero at 155 degC, unless the duty sheet says otherwise",
	SeverityRule: standardSeverity + "; major where the output shorted exceeds the rating (fire)",
	Source:       "derating line of metal film resistors: makers' data after IEC 60115",
	Remedy:       "the next standard power rating",
	run: func(p *Pass) {
		for _, id := range p.zenerResistors() {
			e := p.element(id)
			f := p.judgeResistor(id, p.get(e.Name, study.MeanPower), p.known(id, "P70"))
			p.report(id, p.withShort(id, f))
		}
	},
}

var zenerPower = &Check{
	Name: "zener-power", Title: "zener power and current",
	Applies: "every zener",
	Stress:  "mean power; mean working current where IZM is known",
	Rating:  "the lower of PD, derated where it holds up to a temperature of the air, and the free-air power (Tj - Ta)/RthJA; IZM",
	Worst:   "high line, load open, resistor low, zener voltage at its worse end", Policy: policy.ZenerPower,
	Formula:      "P = VZ ((Vin - VZ)/R - IL); free air: (200 - 45)/170 = 0.91 W for a part sold as 1 W",
	Assumptions:  "a PD stated without a temperature holds at 25 degC and falls linearly to nothing at Tj, 150 degC unless stated",
	SeverityRule: standardSeverity,
	Source:       "power and thermal resistance of the type's row; the falling line as on makers' data",
	Remedy:       "the next standard power, a higher resistor value, or a series transistor",
	run: func(p *Pass) {
		p.eachZener(func(id netlist.ElementID, e *netlist.Element) {
			p.report(id, p.judgeZenerPower(id, p.get(e.Name, study.MeanPower)))
			if izm := p.known(id, "IZM"); izm != nil {
				p.report(id, p.judgeZenerCurrent(izm, p.get(e.Name, study.MeanReverseCurrent), p.get(e.Name, study.PeakCurrent)))
			}
		})
	},
}

var zenerRegulation = &Check{
	Name: "zener-regulation", Title: "zener current at the trough",
	Applies: "zeners that conduct in some condition",
	Stress:  "smallest working current over the period",
	Rating:  "IZK, the knee current", Worst: "low line, full load, resistor high, reservoir low, zener voltage high",
	Formula:      "IZ = (Vtrough - VZ)/R - IL",
	Assumptions:  "below a hundredth of IZK (without IZK: 1 uA) regulation counts as lost",
	SeverityRule: "critical where the current is gone: regulation lost; major below IZK",
	Source:       "knee current as the lower end of the working range: makers' data of the type",
	Remedy:       "a lower series resistor, a larger reservoir, or more input voltage",
	run: func(p *Pass) {
		p.eachZener(func(id netlist.ElementID, e *netlist.Element) {
			p.report(id, p.judgeZenerTrough(id, p.get(e.Name, study.MinCurrent), p.get(e.Name, study.PeakCurrent)))
		})
	},
}

// zenerResistors lists the resistors that feed a shunt zener or shunt reference, in netlist order, each once.
func (p *Pass) zenerResistors() []netlist.ElementID {
	var list []netlist.ElementID
	for _, f := range p.Circuit().ZenerFeeds() {
		list = append(list, f.Resistor)
	}
	slices.Sort(list)
	return slices.Compact(list)
}

// eachZener calls f for every zener.
func (p *Pass) eachZener(f func(id netlist.ElementID, e *netlist.Element)) {
	p.each(func(id netlist.ElementID, e *netlist.Element) {
		if _, ok := e.Device.(netlist.Diode); ok && p.Supply.IsZener(id) {
			f(id, e)
		}
	})
}

const (
	defaultZenerJunction = 150.0 // degC, where Tj is not stated; from memory
	defaultPowerAir      = 25.0  // degC of the air to which a bare PD is referred; common practice
)

// zenerRating is the power that a zener may take at the highest ambient: nil where PD is unknown, with the
// symbol that is missing where it cannot be brought to this ambient.
func (p *Pass) zenerRating(id netlist.ElementID) (pd *Rating, factor float64, note, missing string) {
	pd = p.known(id, "PD")
	if pd == nil {
		return nil, 1, "", ""
	}
	air, left := p.ambient(), math.Inf(1)
	tj, rth := p.known(id, "Tj"), p.known(id, "RthJA")
	if tj != nil && rth != nil {
		left = math.Max(0, tj.Value-air) / rth.Value
		note = fmt.Sprintf("free air: (%.3g - %.3g)/%.3g K/W = %s", tj.Value, air, rth.Value, quantity.Format(left, quantity.Watt, 3))
	}
	limit, upto, atAir := p.powerAtAir(id, pd.Value, tj)
	switch {
	case atAir && limit < left:
		left = limit
		note = fmt.Sprintf("PD %s up to %.3g degC, %s left at %.3g degC", quantity.Format(pd.Value, quantity.Watt, 3), upto, quantity.Format(limit, quantity.Watt, 3), air)
	case !atAir && math.IsInf(left, 1):
		missing = "RthJA"
		if tj == nil {
			missing += " Tj"
		}
		return pd, 1, "", missing
	}
	return pd, math.Min(1, left/pd.Value), note, ""
}

// powerAtAir brings PD to the highest ambient where it is stated for a temperature of the air. ok is false
// where it holds at a lead or case whose temperature is not known.
func (p *Pass) powerAtAir(id netlist.ElementID, pd float64, tj *Rating) (limit, upto float64, ok bool) {
	upto = defaultPowerAir
	if t, stated := p.Supply.Property(id, "TPD"); stated {
		words := strings.ToLower(t.Condition)
		if words != "" && !strings.Contains(words, "ambient") {
			return pd, t.Value(), false
		}
		upto = t.Value()
	} else if p.Supply.Row(id) != nil && p.known(id, "PD").Confidence != "stated" {
		return pd, upto, false
	}
	top := defaultZenerJunction
	if tj != nil {
		top = tj.Value
	}
	slope := pd / math.Max(1, top-upto)
	if k := p.known(id, "kPD"); k != nil {
		slope = k.Value
	}
	return math.Min(pd, math.Max(0, pd-slope*(p.ambient()-upto))), upto, true
}

func (p *Pass) judgeZenerPower(id netlist.ElementID, s *study.Stress) Finding {
	rating, factor, note, missing := p.zenerRating(id)
	if missing != "" {
		e := p.element(id)
		f := p.judge(upper{stress: s, rating: rating, symbol: "PD", unit: quantity.Watt, key: policy.ZenerPower, steps: parts.ZenerPower})
		if f.Verdict != Proven {
			return f
		}
		f.Verdict, f.Margin = Unproven, 0
		f.Reason = "PD holds at a lead or case temperature, and what is left in free air follows from " + missing
		f.Needs = &Needs{Statement: "rate " + e.Name + " " + strings.ReplaceAll(missing, " Tj", "=...K/W Tj=...C")}
		if missing == "RthJA" {
			f.Needs.Statement += "=...K/W"
		}
		return f
	}
	return p.judgeDerated(upper{
		stress: s, rating: rating, symbol: "PD", unit: quantity.Watt, key: policy.ZenerPower, steps: parts.ZenerPower, note: note,
	}, factor)
}

// judgeZenerCurrent holds the mean working current against IZM; where only the peak is known it bounds it.
func (p *Pass) judgeZenerCurrent(izm *Rating, mean, peak *study.Stress) Finding {
	u := upper{stress: mean, rating: izm, symbol: "IZM", unit: quantity.Ampere, key: policy.ZenerCurrent, remedy: "a higher series resistor value or a zener of more power"}
	if mean == nil {
		u.stress, u.note = peak, "the peak, which bounds the mean from above"
	}
	f := p.judge(u)
	if mean == nil && f.Verdict == Violated {
		f.Verdict, f.Severity, f.Margin, f.Remedy = Unproven, "", 0, ""
		f.Reason = "its peak exceeds IZM, and its mean working current was not solved"
	}
	return f
}

const (
	lostPart    = 0.01 // of IZK: below it regulation is lost
	lostCurrent = 1e-6 // A: the same where IZK is unknown
)

// judgeZenerTrough holds the smallest working current against the knee.
func (p *Pass) judgeZenerTrough(id netlist.ElementID, least, peak *study.Stress) Finding {
	knee := p.known(id, "IZK")
	lost := lostCurrent
	if knee != nil {
		lost = lostPart * knee.Value
	}
	if found(peak) && found(least) && peak.Value <= lost {
		return Finding{Stress: least, Rating: knee, Floor: true, Verdict: Unproven,
			Reason: "it conducts in no condition: it clamps only, or too little voltage reaches it"}
	}
	return p.judgeMinimum(lower{
		stress: least, rating: knee, symbol: "IZK", unit: quantity.Ampere, lost: lost, below: Major,
		remedy: "a lower series resistor, a larger reservoir, or more input voltage",
	})
}
