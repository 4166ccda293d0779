package checks

import (
	"fmt"
	"math"
	"strings"

	"railproof/checks/parts"
	"railproof/checks/policy"
	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

var diodeReverseVoltage = &Check{
	Name: "diode-reverse-voltage", Title: "peak reverse voltage", Headline: true,
	Applies: "every diode; zeners in their working breakdown aside",
	Stress:  "largest cathode-to-anode voltage over the period, steady state and cold start",
	Rating:  "VRRM", Worst: "high line, light load, winding unloaded",
	Formula:      "with a reservoir: 2 sqrt(2) Vs half-wave and centre-tap (Vs of one half), sqrt(2) Vs bridge, 2 sqrt(2) Vs doubler; the solved waveform decides",
	Assumptions:  "spikes of the mains and of recovery are not modelled",
	SeverityRule: standardSeverity,
	Source:       "peak inverse voltages of rectifier circuits: standard handbook values (from memory), recalculated",
	Remedy:       "the next standard VRRM step", Policy: policy.VRRM,
	run: func(p *Pass) {
		p.eachRectifier(func(id netlist.ElementID, e *netlist.Element) {
			p.report(id, p.judge(upper{
				stress: p.get(e.Name, study.PeakReverseVoltage), rating: p.known(id, "VRRM"), symbol: "VRRM",
				unit: quantity.Volt, key: policy.VRRM, steps: parts.VRRMSteps,
			}))
		})
	},
}

var diodeAverageCurrent = &Check{
	Name: "diode-average-current", Title: "mean forward current",
	Applies: "every diode that is not a zener",
	Stress:  "mean forward current over the period",
	Rating:  "IFAV, less above its temperature TIFAV, and times IFAVcap where pulses charge a capacitor",
	Worst:   "high line, full load", Policy: policy.IFAV,
	Formula:      "Idc in half-wave and in a doubler, Idc/2 in a bridge and a centre-tap",
	Assumptions:  "above TIFAV the rating falls linearly to nothing at Tj (common practice); the load counts as capacitive where the peak exceeds pi times the mean by a tenth (a half sine has pi)",
	SeverityRule: standardSeverity,
	Source:       "mean values of half and full sines: 0.318 and 0.637 of the crest, US Army TC 9-62; 20 % less for a capacitive load: makers' data of the 1N4001 family",
	Remedy:       "the next standard IFAV step",
	run: func(p *Pass) {
		p.eachRectifier(func(id netlist.ElementID, e *netlist.Element) {
			p.report(id, p.judgeAverage(id, p.get(e.Name, study.MeanCurrent), p.get(e.Name, study.PeakCurrent)))
		})
	},
}

var diodeRepetitivePeakCurrent = &Check{
	Name: "diode-repetitive-peak-current", Title: "repetitive peak current",
	Applies: "diodes whose IFRM is known; where makers state none, the mean current for a capacitive load and the junction temperature stand for it",
	Stress:  "largest forward current of each period in the steady state",
	Rating:  "IFRM", Worst: "high line, full load, source resistance low", Policy: policy.IFRM,
	Formula:      "full-wave reservoir: 3.3 to 6.6 times Idc as the source resistance goes from 10 % to 1 % of the load",
	Assumptions:  "none",
	SeverityRule: standardSeverity,
	Source:       "current ratios calculated for a large reservoir from tan(theta) - theta = pi Rs/RL",
	Remedy:       "resistance in series with the winding, or a diode with a higher IFRM",
	run: func(p *Pass) {
		p.eachRectifier(func(id netlist.ElementID, e *netlist.Element) {
			rating := p.known(id, "IFRM")
			if rating == nil {
				return
			}
			p.report(id, p.judge(upper{
				stress: p.get(e.Name, study.PeakCurrent), rating: rating, symbol: "IFRM", unit: quantity.Ampere,
				key: policy.IFRM, remedy: "more resistance in series with the winding, or a diode with a higher IFRM",
			}))
		})
	},
}

var diodeSurgeCurrent = &Check{
	Name: "diode-surge-current", Title: "switch-on surge",
	Applies: "every diode that is not a zener",
	Stress:  "peak, and I2t of the worst conduction pulse, from switch-on at several phases until the currents have settled",
	Rating:  "IFSM, the crest of one half sine, and I2t", Worst: "cold start at high line, reservoir empty", Policy: policy.IFSM,
	Formula:      "peak below crest/Rs; I2t of a half sine of length t is I^2 t/2, 30 A over 8.3 ms: 3.7 A2s",
	Assumptions:  "an IFSM stated without a length or I2t is that of a half sine of 8.3 ms; switch-on at the worst of several phases; the mains itself has no resistance beyond what is drawn",
	SeverityRule: standardSeverity,
	Source:       "IFSM as the crest of one half sine of 8.3 ms: JEDEC, as on makers' data of the 1N4001 family",
	Remedy:       "resistance in series with the winding, an inrush limiter, a smaller reservoir, or a diode with a higher IFSM",
	run: func(p *Pass) {
		p.eachRectifier(func(id netlist.ElementID, e *netlist.Element) {
			peak, integral := p.judgeSurge(id, p.get(e.Name, study.SurgeCurrent), p.get(e.Name, study.SurgeI2t))
			p.report(id, peak)
			p.report(id, integral)
		})
	},
}

var diodeJunctionTemperature = &Check{
	Name: "diode-junction-temperature", Title: "junction temperature",
	Applies: "every diode; zeners have zener-power as well",
	Stress:  "highest ambient + mean power x thermal resistance",
	Rating:  "Tj", Worst: "high line, full load, highest ambient", Policy: policy.DiodeJunctionTemperature,
	Formula:      "Tj = Ta + VF IFAV RthJA",
	Assumptions:  "the mean power decides: the thermal time constant is long against a period; no part heats another",
	SeverityRule: standardSeverity,
	Source:       "thermal resistance as defined in IEC 60747 (from memory); values of the type's row",
	Remedy:       "more copper, a heat sink, or a larger diode",
	run: func(p *Pass) {
		p.each(func(id netlist.ElementID, e *netlist.Element) {
			if _, ok := e.Device.(netlist.Diode); !ok {
				return
			}
			key := policy.DiodeJunctionTemperature
			if p.Supply.IsZener(id) {
				key = policy.ZenerJunctionTemperature
			}
			p.report(id, p.judgeJunction(id, p.get(e.Name, study.MeanPower), key))
		})
	},
}

// eachRectifier calls f for every diode that is not a zener.
func (p *Pass) eachRectifier(f func(id netlist.ElementID, e *netlist.Element)) {
	p.each(func(id netlist.ElementID, e *netlist.Element) {
		if _, ok := e.Device.(netlist.Diode); ok && !p.Supply.IsZener(id) {
			f(id, e)
		}
	})
}

// judgeAverage holds the mean forward current against IFAV as it is left by temperature and pulses.
func (p *Pass) judgeAverage(id netlist.ElementID, mean, peak *study.Stress) Finding {
	rating, factor, note := p.known(id, "IFAV"), 1.0, ""
	if rating != nil {
		factor, note = p.averageFactor(id, found(peak) && found(mean) && capacitive(mean.Value, peak.Value))
		if factor < 1 {
			note = fmt.Sprintf("IFAV %s, %s", quantity.Format(rating.Value, quantity.Ampere, 3), note)
		}
	}
	return p.judgeDerated(upper{
		stress: mean, rating: rating, symbol: "IFAV", unit: quantity.Ampere, key: policy.IFAV, steps: parts.IFAVSteps, note: note,
	}, factor)
}

// capacitive reports whether the current pulses are those of a capacitive load: sharper than a half sine,
// whose crest is pi times its mean, by more than a tenth.
func capacitive(mean, peak float64) bool { return mean > 0 && peak > 1.1*math.Pi*mean }

// averageFactor is what temperature and a capacitive load leave of IFAV, and why.
func (p *Pass) averageFactor(id netlist.ElementID, pulses bool) (factor float64, note string) {
	factor = 1
	if t, ok := p.Supply.Property(id, "TIFAV"); ok {
		ofAir := t.Condition == "" || strings.Contains(strings.ToLower(t.Condition), "ambient")
		switch {
		case !ofAir:
			note = fmt.Sprintf("it holds up to %.3g degC of the %s, which is not known here: see its junction temperature", t.Value(), t.Condition)
		case p.ambient() > t.Value():
			if top := p.known(id, "Tj"); top != nil && top.Value > t.Value() {
				factor = math.Max(0, (top.Value-p.ambient())/(top.Value-t.Value()))
			} else {
				factor = 0
			}
			note = fmt.Sprintf("x %.2g at %.3g degC", factor, p.ambient())
		}
	}
	if pulses {
		if r := p.known(id, "IFAVcap"); r != nil {
			factor *= r.Value
			note = join(note, fmt.Sprintf("x %.2g for a capacitive load", r.Value))
		}
	}
	return factor, note
}

// judgeSurge holds the switch-on surge against IFSM and I2t.
func (p *Pass) judgeSurge(id netlist.ElementID, peak, integral *study.Stress) (crest, square Finding) {
	const absent = "the switch-on was not solved"
	const remedy = "more resistance in series with the winding, an inrush limiter, a smaller reservoir, or a diode with a higher "
	note := ""
	rating := p.known(id, "IFSM")
	if rating != nil {
		if length := p.known(id, "tIFSM"); length != nil {
			note = fmt.Sprintf("IFSM of one half sine of %s", quantity.Format(length.Value, quantity.Second, 2))
		}
	}
	crest, square = Finding{}, Finding{}
	if peak == nil {
		crest = p.unsolvedStress(crest, absent)
	} else {
		crest = p.judge(upper{stress: peak, rating: rating, symbol: "IFSM", unit: quantity.Ampere, key: policy.IFSM, note: note, remedy: remedy + "IFSM"})
	}
	if integral == nil {
		square = p.unsolvedStress(square, absent)
	} else {
		square = p.judge(upper{stress: integral, rating: p.surgeIntegral(id), symbol: "I2t", unit: quantity.AmpereSquaredSecond, key: policy.I2t, remedy: remedy + "I2t"})
	}
	return crest, square
}

// surgeLength is the length of the half sine of IFSM where none is stated, s: half a period of 60 Hz, as JEDEC has it.
const surgeLength = 8.3e-3

// surgeIntegral is the I2t of a diode: stated, of its row, or of the half sine of its IFSM.
func (p *Pass) surgeIntegral(id netlist.ElementID) *Rating {
	if r := p.known(id, "I2t"); r != nil {
		return r
	}
	crest := p.known(id, "IFSM")
	if crest == nil {
		return nil
	}
	length := surgeLength
	if t := p.known(id, "tIFSM"); t != nil {
		length = t.Value
	}
	r := *crest
	r.Symbol, r.Unit, r.Value = "I2t", quantity.AmpereSquaredSecond, crest.Value*crest.Value*length/2
	r.Origin = "IFSM^2 t/2, " + crest.Origin
	return &r
}
