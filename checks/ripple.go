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

var capacitorRippleCurrent = &Check{
	Name: "capacitor-ripple-current", Title: "ripple current of a capacitor",
	Applies: "polarised capacitors, and others whose IR is stated",
	Stress:  "equivalent RMS current at the frequency of the rating: sqrt(sum (In/kn)^2)",
	Rating:  "IR at fIR", Worst: "high line, full load, source resistance low", Policy: policy.RippleCurrent,
	Formula: "triangular ripple: Ipp/(2 sqrt(3)); a full-wave reservoir carries 1.3 to 2.1 times Idc",
	Assumptions: "IR holds at 120 Hz unless fIR is stated; the multipliers are those of electrolytics for the rated voltage; " +
		"what any electrolytic bears, 10 mA, is taken as proven where IR is not known; " +
		"without a weighted spectrum the RMS current divided by the least multiplier from the line frequency up bounds it from above",
	SeverityRule: standardSeverity,
	Source:       "multipliers by rated voltage: makers' data of the 056/057 series, table 4; ratio of 100 Hz to 120 Hz ratings: makers' data",
	Remedy:       "a capacitor with a higher IR, or several in parallel",
	run: func(p *Pass) {
		p.eachCapacitor(func(id netlist.ElementID, e *netlist.Element, _ *netlist.Capacitor) {
			if p.polarised(id) || p.known(id, "IR") != nil {
				p.report(id, p.judgeRipple(id, p.get(e.Name, study.RippleCurrentEquivalent), p.get(e.Name, study.RippleCurrentRMS)))
			}
		})
	},
}

var capacitorEndurance = &Check{
	Name: "capacitor-endurance", Title: "expected life of an electrolytic",
	Applies: "electrolytics, where the duty sheet states a `life`; hotter than the category temperature always",
	Stress:  "endurance x 2^((Tcategory - T)/10 K), T the ambient + 5 K x (I/IR)^2",
	Rating:  "the stated life", Worst: "highest ambient, full load",
	Formula:      "2000 h at 105 degC give 2000 x 2^((105 - 60)/10) = 45 000 h at 60 degC",
	Assumptions:  "5 K of heating at the rated ripple current (common practice); no credit below 40 degC; the endurance test carries no ripple",
	SeverityRule: "minor below the stated life; major below half of it, or hotter than the category temperature",
	Source:       "life doubles for each 10 K: makers' technical notes",
	Remedy:       "a longer endurance, a higher category temperature, less ripple current, or a cooler place",
	run: func(p *Pass) {
		p.eachCapacitor(func(id netlist.ElementID, e *netlist.Element, _ *netlist.Capacitor) {
			if t := p.technology(id); !p.polarised(id) || t == "tantalum" {
				return
			}
			ripple, _ := p.equivalentRipple(id, p.get(e.Name, study.RippleCurrentEquivalent), p.get(e.Name, study.RippleCurrentRMS))
			if f, ok := p.judgeEndurance(id, ripple); ok {
				p.report(id, f)
			}
		})
	},
}

// defaultRippleReference is the frequency at which a ripple current rating holds unless stated, Hz: the
// customary one, and of the two low ones the one that asks for more.
const defaultRippleReference = 120

// rippleCurve is the multiplier curve of a capacitor, referred to the frequency of its rating, and what it leaves
// of a rating at 100 Hz: the published multipliers are 1 there.
func (p *Pass) rippleCurve(id netlist.ElementID) (curve parts.RippleCurve, at100 float64) {
	reference := float64(defaultRippleReference)
	if r := p.known(id, "fIR"); r != nil {
		reference = r.Value
	}
	var published parts.RippleCurve
	if r := p.known(id, "UR"); r != nil {
		published = parts.RippleCurveByVoltage(r.Value)
	} else if c, ok := p.element(id).Device.(netlist.Capacitor); ok {
		published = parts.RippleCurveByCapacitance(c.Farads)
	}
	curve = published.ReferredTo(reference)
	return curve, curve.K(published.Reference)
}

// equivalentRipple is the equivalent ripple current of a capacitor at the frequency of its rating: the weighted
// one, or an upper bound from the unweighted one.
func (p *Pass) equivalentRipple(id netlist.ElementID, weighted, rms *study.Stress) (*study.Stress, string) {
	curve, at100 := p.rippleCurve(id)
	how := fmt.Sprintf("at %g Hz, multipliers for %s", curve.Reference, curve.Class)
	if weighted != nil {
		return derived(weighted, study.RippleCurrentEquivalent, quantity.Ampere, 0, 1/at100), how
	}
	if !found(rms) {
		return rms, ""
	}
	least := math.Inf(1)
	line := p.lineFrequency()
	for _, f := range append([]float64{line}, curve.Hertz...) {
		if f >= line {
			least = math.Min(least, curve.K(f))
		}
	}
	return derived(rms, study.RippleCurrentEquivalent, quantity.Ampere, 0, 1/least),
		fmt.Sprintf("upper bound %s, all of it taken at its least multiplier %.3g", how, least)
}

// lineFrequency is the lowest frequency of a sine in the circuit, Hz; 50 if there is none.
func (p *Pass) lineFrequency() float64 {
	lowest := math.Inf(1)
	p.each(func(_ netlist.ElementID, e *netlist.Element) {
		if w, ok := sineOf(e); ok && w.Frequency > 0 {
			lowest = math.Min(lowest, w.Frequency)
		}
	})
	if math.IsInf(lowest, 1) {
		return 50
	}
	return lowest
}

// sineOf is the sine of an independent source.
func sineOf(e *netlist.Element) (netlist.Sine, bool) {
	var w netlist.Waveform
	switch d := e.Device.(type) {
	case netlist.VoltageSource:
		w = d.Wave
	case netlist.CurrentSource:
		w = d.Wave
	}
	sine, ok := w.(netlist.Sine)
	return sine, ok && sine.Amplitude != 0
}

// leastRipple is the ripple current that any electrolytic of 10 uF and more bears; what stays inside it is proven for a
// capacitor of which nothing is stated.
var leastRipple = &Rating{Symbol: "IR", Value: 0.01, Unit: quantity.Ampere, Origin: "any electrolytic of 10 uF and more, assumed",
	Source: "common practice", Confidence: policy.CommonPractice}

func (p *Pass) judgeRipple(id netlist.ElementID, weighted, rms *study.Stress) Finding {
	s, how := p.equivalentRipple(id, weighted, rms)
	u := upper{
		stress: s, rating: p.known(id, "IR"), symbol: "IR", unit: quantity.Ampere, key: policy.RippleCurrent, note: how,
		remedy: "a capacitor with a higher IR, several in parallel, or more resistance in series with the winding",
	}
	f := p.judge(u)
	if u.rating == nil {
		u.rating = leastRipple
		return assume(f, p.judge(u))
	}
	if weighted != nil || f.Verdict != Violated {
		return f
	}
	// The bound exceeds the limit. What is certain is the RMS current at its greatest multiplier.
	curve, _ := p.rippleCurve(id)
	greatest := 1.0
	for _, k := range curve.Factor {
		greatest = math.Max(greatest, k)
	}
	switch least := (rms.Value - rms.Error) / greatest; {
	case least > f.Rating.Value:
	case least > f.Limit.Value:
		f.Severity = Major
	default:
		f.Verdict, f.Severity, f.Remedy, f.Margin = Unproven, "", "", 0
		f.Reason = "the upper bound of the equivalent current exceeds the limit, and its spectrum was not weighted"
		f.Needs = &Needs{Symbol: "IR", Value: (s.Value + s.Error) / f.Limit.Factor, Unit: quantity.Ampere}
	}
	return f
}

const (
	// rippleRise is the heating of an electrolytic by its rated ripple current, K. Common practice.
	rippleRise = 5.0
	// coolest is the temperature below which no further life is credited, degC. Common practice.
	coolest = 40.0
)

// judgeEndurance holds the expected life against the stated one. ok is false where nothing is asked.
func (p *Pass) judgeEndurance(id netlist.ElementID, ripple *study.Stress) (f Finding, ok bool) {
	e := p.element(id)
	life := p.Supply.Duty.Life
	category, endurance, rated := p.known(id, "category"), p.known(id, "endurance"), p.known(id, "IR")
	core, heat := p.ambient(), 0.0
	if found(ripple) && rated != nil {
		heat = rippleRise * math.Pow((ripple.Value+ripple.Error)/rated.Value, 2)
		core += heat
	}
	note := fmt.Sprintf("%.3g degC: ambient %.3g degC + %.2g K of ripple heating", core, p.ambient(), heat)
	if category != nil && core > category.Value {
		s := p.steadyStress(e.Name, study.CoreTemperature, core, quantity.Celsius)
		return Finding{
			Stress: s, Rating: category, Limit: p.unchanged(category.Value), Margin: (category.Value - core) / category.Value,
			Verdict: Violated, Severity: Major, Note: note, Remedy: "a higher category temperature, less ripple current, or a cooler place",
		}, true
	}
	if life == nil {
		return Finding{}, false
	}
	switch {
	case category == nil || endurance == nil:
		return Finding{Verdict: Unproven, Reason: "its endurance or its category temperature is not known",
			Needs: &Needs{Statement: "rate " + e.Name + " endurance=...h category=...C"}}, true
	case rated == nil:
		return Finding{Verdict: Unproven, Reason: "its heating by ripple is not known without IR",
			Needs: &Needs{Statement: "rate " + e.Name + " IR=...A"}}, true
	case !found(ripple):
		return p.unsolvedStress(Finding{Stress: ripple}, "its ripple current was not solved"), true
	}
	s := p.steadyStress(e.Name, study.ExpectedLife, ExpectedLife(endurance.Value, category.Value, core), quantity.Hour)
	s.Condition, s.Unproven, s.Missing = ripple.Condition, ripple.Unproven, ripple.Missing
	required := &Rating{Symbol: "life", Value: life.Number, Unit: quantity.Hour, Origin: "life in the duty sheet", Confidence: "stated"}
	f = p.judgeMinimum(lower{
		stress: s, rating: required, symbol: "endurance", unit: quantity.Hour, note: note, lost: math.Inf(-1), below: Minor,
		remedy: "a longer endurance, a higher category temperature, less ripple current, or a cooler place",
	})
	if f.Verdict == Violated && s.Value < life.Number/2 {
		f.Severity = Major
	}
	return f, true
}

// ExpectedLife is the life of an electrolytic in hours: its endurance in hours at the category temperature,
// doubled for each 10 K below it. Temperatures in degC; below 40 degC nothing more is credited.
func ExpectedLife(endurance, category, temperature float64) float64 {
	step := 10.0
	if v, ok := parts.Electrolytic(parts.LifeDoublingStep, 0); ok {
		step = v.Number
	}
	return endurance * math.Exp2((category-math.Max(temperature, coolest))/step)
}

// steadyStress is a stress that follows from the circumstances alone.
func (p *Pass) steadyStress(element string, q study.Quantity, value float64, unit quantity.Unit) *study.Stress {
	return &study.Stress{
		Element: element, Quantity: q, Value: value, Unit: unit, Phase: math.NaN(),
		Condition: study.Condition{
			Name: fmt.Sprintf("ambient %.3g degC", p.ambient()), Line: "as-written", Load: "as-written", Start: "steady",
		},
	}
}
