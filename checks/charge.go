package checks

import (
	"fmt"
	"math"

	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

var storedCharge = &Check{
	Name: "stored-charge", Title: "stored charge after line off",
	Applies: "capacitors whose voltage exceeds that of the profile, 60 V dc unless stated",
	Stress:  "time from the removal of the line until it has fallen to that voltage",
	Rating:  "the time of the profile: 2 s for accessible terminals unless stated", Worst: "high line, load open, capacitor and bleeder high",
	Formula:      "t = R C ln(V0/60 V)",
	Assumptions:  "regulators are no bleeders; whether the terminals can be touched is not known",
	SeverityRule: "critical where the duty sheet states a profile; minor, as a caution, where it states none",
	Source:       "60 V dc: IEC 62368-1 table 4 (from memory); measured 2 s after disconnection: 5.5.2.2 (second source). The applicable safety standard decides",
	Remedy:       "a bleeder across the capacitor",
	run: func(p *Pass) {
		profile, stated := p.profile()
		p.eachCapacitor(func(id netlist.ElementID, e *netlist.Element, c *netlist.Capacitor) {
			crest := p.largerMagnitude(e.Name, study.MaxVoltage, study.MinVoltage)
			if crest == nil || found(crest) && crest.Value+crest.Error <= concern(profile.Voltage, crest) {
				return
			}
			if _, mains := p.acrossMains(e); mains && c.Farads <= touchCapacitance {
				return
			}
			p.report(id, p.judgeCharge(c, crest, p.get(e.Name, study.DischargeTime), profile, stated))
		})
	},
}

// touchCapacitance is the capacitance up to which a mains capacitor holds no charge of note, F: 0.1 uF as in
// IEC 60950-1 2.1.1.7 (second source).
const touchCapacitance = 0.1e-6

// offLoadRise is the largest off-load rise of a small transformer, relative. Makers' data.
const offLoadRise = 0.8

// concern is the voltage up to which a capacitor is none of the check's: that of the profile, and where the crest is
// not proven so much less that the off-load rise of no transformer makes up for it.
func concern(profile float64, crest *study.Stress) float64 {
	if crest.Unproven != "" {
		return profile / (1 + offLoadRise)
	}
	return profile
}

// profile is the stored-charge profile of the duty sheet, or that of accessible terminals.
func (p *Pass) profile() (profile netlist.Profile, stated bool) {
	if s := p.Supply.Duty.Profile; s != nil {
		return *s, true
	}
	return netlist.StoredChargeProfiles[0], false
}

func (p *Pass) judgeCharge(c *netlist.Capacitor, crest, time *study.Stress, profile netlist.Profile, stated bool) Finding {
	rating := &Rating{Symbol: "t", Value: profile.Within, Unit: quantity.Second, Source: profile.Source, Confidence: "stated",
		Origin: fmt.Sprintf("%g V within %s", profile.Voltage, quantity.Format(profile.Within, quantity.Second, 3))}
	severity := Critical
	if !stated {
		severity = Minor
		rating.Origin += ", assumed profile " + profile.Name
	}
	if !found(crest) {
		return p.unsolvedStress(Finding{Stress: crest, Rating: rating}, "")
	}
	highest := crest.Value + crest.Error
	note := quantity.Format(highest, quantity.Volt, 3) + " at line off; a charged capacitor can kill, and the applicable safety standard decides"
	remedy := ""
	if highest > profile.Voltage {
		remedy = fmt.Sprintf("a bleeder of at most %s across it",
			quantity.Format(Bleeder(c.Farads, highest, profile.Voltage, profile.Within), quantity.Ohm, 2))
	}
	if time == nil {
		f := p.unsolvedStress(Finding{Rating: rating, Note: note}, "how fast it discharges was not solved")
		f.Needs = &Needs{Statement: remedy}
		if remedy == "" {
			f.Needs, f.Reason = missing(crest), crest.Unproven
		}
		return f
	}
	f := p.judgePlain(upper{stress: time, rating: rating, symbol: "t", unit: quantity.Second, note: note, critical: severity, remedy: remedy})
	if math.IsInf(time.Value, 1) && f.Verdict == Violated {
		f.Reason = "nothing discharges it"
	}
	return f
}

// Bleeder is the largest resistance in ohms that takes a capacitance in farads, 20 % above its value and
// charged to v0 volts, down to v volts within t seconds: t/(1.2 C ln(v0/v)), rounded down to two figures.
func Bleeder(farads, v0, v, t float64) float64 {
	return roundDown(t / (1.2 * farads * math.Log(v0/v)))
}
