package checks

import (
	"fmt"
	"math"
	"strings"

	"railproof/netlist/quantity"
)

var sourceUnknown = &Check{
	Name: "source-unknown", Title: "what a source stands for",
	Applies: "sinusoidal sources that are neither `line` nor `winding` and drive no modelled transformer",
	Stress:  "none", Rating: "a statement in the duty sheet", Worst: "none",
	Formula:      "off-load voltage = rated voltage x (1 + regulation); source resistance = regulation x voltage / current",
	Assumptions:  "none: nothing is proven that depends on the off-load crest or on the source resistance",
	SeverityRule: "unproven",
	Source:       "off-load rise of small transformers, 5 to 80 %: makers' data",
	Remedy:       "`line V1 ...`, `winding V1 ...`, or `winding V1 as-drawn`",
	run: func(p *Pass) {
		for _, id := range p.Table.Plan.Undeclared {
			e := p.element(id)
			p.report(id, Finding{
				Verdict: Unproven,
				Reason: "it is neither line nor winding: its off-load rise (5 to 80 % on small transformers) and its resistance are unknown; " +
					"reverse voltages, capacitor and input voltages, surge and ripple currents wait for it",
				Needs: &Needs{Statement: "winding " + e.Name + " ...V ...A regulation=...%, or winding " + e.Name + " as-drawn, or line " + e.Name + " ..."},
			})
		}
	},
}

var peakOrRMS = &Check{
	Name: "peak-or-rms", Title: "amplitude that looks like an RMS value",
	Applies: "sinusoidal voltage sources with an amplitude of 100..127, 208 or 220..240 V that no statement settles",
	Stress:  "none", Rating: "none", Worst: "none",
	Formula:      "crest = sqrt(2) x RMS: 230 V rms are 325 V",
	Assumptions:  "none: proof on its island waits for the statement",
	SeverityRule: "unproven: every voltage would be short by a factor of 1.41",
	Source:       "the amplitude of SIN is a peak (Berkeley SPICE); usual line voltages: IEC 60038 and ANSI C84.1 (from memory)",
	Remedy:       "`line V1 230V ...` with an amplitude of 325 V, or `winding V1 as-drawn` if the peak is meant",
	run: func(p *Pass) {
		for _, source := range p.Circuit().SineSources(p.Supply.Duty) {
			if source.LooksRMS {
				p.report(source.Element, doubtfulAmplitude(p.element(source.Element).Name, source.Wave.Amplitude))
			}
		}
	},
}

// doubtfulAmplitude states both readings of an amplitude in volts that looks like an RMS value.
func doubtfulAmplitude(name string, amplitude float64) Finding {
	volts := func(v float64) string { return quantity.Format(v, quantity.Volt, 3) }
	a := math.Abs(amplitude)
	return Finding{
		Verdict: Unproven,
		Reason: fmt.Sprintf("an amplitude of %s is a peak, that is %s rms; if %s rms are meant, the amplitude is %s",
			volts(a), volts(a/math.Sqrt2), volts(a), volts(a*math.Sqrt2)),
		Needs: &Needs{Statement: fmt.Sprintf("line %s %.4gV ..., with the amplitude %.4g; or winding %s as-drawn", name, a, a*math.Sqrt2, name)},
	}
}

var unsolved = &Check{
	Name: "unsolved", Title: "part of the circuit without a solution",
	Applies: "every independent part of the circuit",
	Stress:  "none", Rating: "none", Worst: "the first condition that failed",
	Formula:      "none",
	Assumptions:  "none",
	SeverityRule: "unproven: nothing is known of its stresses",
	Source:       "an unsolved condition proves nothing",
	Remedy:       "what the reason names: a model, a ground, a source that repeats",
	run: func(p *Pass) {
		for _, u := range p.Table.Unsolved {
			f := Finding{Verdict: Unproven, Reason: u.Why + " (" + u.When + ")"}
			if n := len(u.Elements); n > 0 {
				f.Element = u.Elements[0]
				if id, ok := p.Circuit().Find(f.Element); ok {
					f.At = p.element(id).At
				}
				f.Note = "the part of the circuit with " + strings.Join(u.Elements[:min(n, 8)], ", ")
				if n > 8 {
					f.Note += fmt.Sprintf(" and %d more", n-8)
				}
			} else {
				f.At.File = p.Circuit().File
			}
			p.add(f)
		}
	},
}
