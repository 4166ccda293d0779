package checks

import (
	"fmt"
	"math"
	"strings"

	"railproof/checks/policy"
	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

var transistorVoltage = &Check{
	Name: "transistor-voltage", Title: "transistor voltage",
	Applies: "bipolar and field-effect transistors",
	Stress:  "largest collector-emitter or drain-source voltage; where rated also reverse emitter-base and gate-source voltage",
	Rating:  "VCEO or VDS; VEBO, VGS", Worst: "high line, light load, output shorted", Policy: policy.TransistorVoltage,
	Formula:      "a pass transistor sees the input less the output; with the output shorted the whole input",
	Assumptions:  "VCEO holds whatever the base resistance",
	SeverityRule: standardSeverity,
	Source:       "letter symbols and their meaning: IEC 60747-7 (from memory)",
	Remedy:       "a type with a higher rating, or a lower input voltage",
	run: func(p *Pass) {
		p.eachTransistor(func(id netlist.ElementID, e *netlist.Element, fet bool) {
			q, symbol, control, second := study.MaxVCE, netlist.Symbol("VCEO"), study.MaxVEB, netlist.Symbol("VEBO")
			if fet {
				q, symbol, control, second = study.MaxVDS, "VDS", study.MaxVGS, "VGS"
			}
			p.report(id, p.judgeTransistorVoltage(p.get(e.Name, q), p.known(id, symbol), symbol))
			if rating := p.known(id, second); rating != nil {
				s := p.get(e.Name, control)
				f := p.unsolvedStress(Finding{Rating: rating}, "the largest "+string(second)+" was not solved")
				if s != nil {
					f = p.judgeTransistorVoltage(s, rating, second)
				}
				p.report(id, f)
			}
		})
	},
}

var transistorCurrent = &Check{
	Name: "transistor-current", Title: "transistor current",
	Applies: "bipolar and field-effect transistors",
	Stress:  "largest collector or drain current in the steady state", Rating: "IC or ID",
	Worst: "full load, low line", Policy: policy.TransistorCurrent,
	Formula:      "of a pass transistor: the load current",
	Assumptions:  "the crest is held against the continuous rating",
	SeverityRule: standardSeverity,
	Source:       "letter symbols and their meaning: IEC 60747-7 (from memory)",
	Remedy:       "a larger type",
	run: func(p *Pass) {
		p.eachTransistor(func(id netlist.ElementID, e *netlist.Element, fet bool) {
			symbol := netlist.Symbol("IC")
			if fet {
				symbol = "ID"
			}
			p.report(id, p.judge(upper{
				stress: p.get(e.Name, study.PeakCurrent), rating: p.known(id, symbol), symbol: symbol, unit: quantity.Ampere,
				key: policy.TransistorCurrent, remedy: "a type with a higher " + string(symbol),
			}))
		})
	},
}

var transistorJunctionTemperature = &Check{
	Name: "transistor-junction-temperature", Title: "transistor junction temperature",
	Applies: "bipolar and field-effect transistors",
	Stress:  "highest ambient + mean power x (RthJA, or RthJC + RthCS + sink where `cooling` is stated)",
	Rating:  "Tj", Worst: "high line, full load", Policy: policy.TransistorJunctionTemp,
	Formula:      "P = (Vin - Vout) IL; shorted: Vin Ilimit",
	Assumptions:  "1 K/W from case to sink where RthCS is not stated (common practice); no part heats another",
	SeverityRule: standardSeverity,
	Source:       "thermal resistance as defined in IEC 60747 (from memory)",
	Remedy:       "a heat sink, a lower input voltage, or a resistor that takes part of the power",
	run: func(p *Pass) {
		p.eachTransistor(func(id netlist.ElementID, e *netlist.Element, _ bool) {
			f := p.judgeJunction(id, p.get(e.Name, study.MeanPower), policy.TransistorJunctionTemp)
			if short := p.get(e.Name, study.ShortPower); found(short) {
				f.Note = join(f.Note, "output shorted: "+quantity.Format(short.Value, quantity.Watt, 3))
			}
			p.report(id, f)
		})
	},
}

var transistorSafeArea = &Check{
	Name: "transistor-safe-area", Title: "safe operating area of a transistor",
	Applies: "bipolar and field-effect transistors that dissipate more than 0.1 W",
	Stress:  "largest instantaneous power, else the mean power",
	Rating:  "PD, less above TPD of the case", Worst: "high line, full load; output shorted", Policy: policy.TransistorPower,
	Formula:      "VCE IC at every instant below the curve of the type",
	Assumptions:  "PD holds at 25 degC of the case unless TPD is stated; second breakdown lies below it at high voltage and is in no table",
	SeverityRule: standardSeverity + "; inside PD it stays unproven, since the curve of the type is not known",
	Source:       "common practice",
	Remedy:       "a larger type, or two in parallel with emitter resistors",
	run: func(p *Pass) {
		p.eachTransistor(func(id netlist.ElementID, e *netlist.Element, fet bool) {
			voltage, symbol := p.get(e.Name, study.MaxVCE), "VCE"
			if fet {
				voltage, symbol = p.get(e.Name, study.MaxVDS), "VDS"
			}
			if f, ok := p.judgeSafeArea(id, voltage, symbol); ok {
				p.report(id, f)
			}
		})
	},
}

// eachTransistor calls f for every bipolar and field-effect transistor.
func (p *Pass) eachTransistor(f func(id netlist.ElementID, e *netlist.Element, fet bool)) {
	p.each(func(id netlist.ElementID, e *netlist.Element) {
		switch e.Device.(type) {
		case netlist.Transistor:
			f(id, e, false)
		case netlist.Fet:
			f(id, e, true)
		}
	})
}

func (p *Pass) judgeTransistorVoltage(s *study.Stress, rating *Rating, symbol netlist.Symbol) Finding {
	return p.judge(upper{
		stress: s, rating: rating, symbol: symbol, unit: quantity.Volt, key: policy.TransistorVoltage,
		remedy: "a type with a higher " + string(symbol) + ", or a lower voltage",
	})
}

// littlePower is the power up to which no safe area is asked for, W. Common practice.
const littlePower = 0.1

// judgeSafeArea refutes a power beyond PD; what lies inside it stays unproven, for the curve of the type is in
// no table. ok is false below the power at which it matters.
func (p *Pass) judgeSafeArea(id netlist.ElementID, voltage *study.Stress, symbol string) (f Finding, ok bool) {
	e := p.element(id)
	s := p.get(e.Name, study.PeakPower)
	if s == nil {
		s = p.get(e.Name, study.MeanPower)
	}
	if found(s) && s.Value+s.Error <= littlePower && s.Unproven == "" {
		return Finding{}, false
	}
	rating, factor := p.known(id, "PD"), 1.0
	note := ""
	if rating != nil {
		factor, note = p.caseFactor(id, rating, s)
	}
	f = p.judgeDerated(upper{
		stress: s, rating: rating, symbol: "PD", unit: quantity.Watt, key: policy.TransistorPower, note: note,
		remedy: "a larger type, a heat sink, or two in parallel with emitter resistors",
	}, factor)
	if f.Verdict == Proven {
		f.Verdict, f.Margin = Unproven, 0
		f.Reason = "inside PD, but the safe operating area of the type is in no table"
		if found(voltage) {
			f.Reason += fmt.Sprintf(": hold %s at up to %s of %s against its curve", quantity.Format(s.Value, quantity.Watt, 3),
				quantity.Format(voltage.Value, quantity.Volt, 3), symbol)
		}
	}
	return f, true
}

// caseFactor is what the temperature of the case, or of the air where there is no sink, leaves of PD.
func (p *Pass) caseFactor(id netlist.ElementID, pd *Rating, s *study.Stress) (float64, string) {
	top := p.known(id, "Tj")
	if top == nil {
		return 1, ""
	}
	from := 25.0
	words := "case"
	if t, ok := p.Supply.Property(id, "TPD"); ok {
		from = t.Value()
		if strings.Contains(strings.ToLower(t.Condition), "ambient") {
			words = "air"
		}
	}
	temperature := p.ambient()
	if words == "case" && found(s) {
		if sink, ok := p.cooling(id); ok {
			cs := caseToSink
			if r := p.known(id, "RthCS"); r != nil {
				cs = r.Value
			}
			temperature += (s.Value + s.Error) * (cs + sink)
		} else if ja, jc := p.known(id, "RthJA"), p.known(id, "RthJC"); ja != nil && jc != nil {
			temperature += (s.Value + s.Error) * math.Max(0, ja.Value-jc.Value)
		}
	}
	if temperature <= from || top.Value <= from {
		return 1, ""
	}
	factor := math.Max(0, (top.Value-temperature)/(top.Value-from))
	return factor, fmt.Sprintf("PD %s, x %.2g at %.3g degC of the %s", quantity.Format(pd.Value, quantity.Watt, 3), factor, temperature, words)
}
