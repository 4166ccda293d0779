package checks

import (
	"fmt"
	"math"

	"railproof/checks/policy"
	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

var regulatorHeadroom = &Check{
	Name: "regulator-headroom", Title: "regulator headroom at the trough", Headline: true,
	Applies: "three-terminal, low-drop and adjustable series regulators",
	Stress:  "smallest input voltage over the period less the highest output voltage and the drop-out voltage, the load current held at its regulated value",
	Rating:  "VDO, the drop-out voltage at its worst", Worst: "low line, full load, reservoir at its low tolerance",
	Formula:      "crest - diode drops - ripple - VOUT - VDO, with ripple about I/(f C) at the ripple frequency f",
	Assumptions:  "the drop-out voltage is the row's highest value where one is known; a series-pass transistor behind a zener loses regulation with the zener: see zener-regulation",
	SeverityRule: "critical below zero: out of regulation at the trough; major below the reserve of the policy",
	Source:       "drop-out voltage: makers' data of the type; the reserve is common practice",
	Remedy:       "a larger reservoir or a higher winding voltage", Policy: policy.HeadroomReserve,
	run: func(p *Pass) {
		p.eachRegulator(func(id netlist.ElementID, e *netlist.Element, d *netlist.Regulator) {
			if !d.Shunt {
				p.report(id, p.judgeHeadroom(e, p.get(e.Name, study.MinHeadroom), p.known(id, "VDO")))
			}
		})
	},
}

var regulatorInputVoltage = &Check{
	Name: "regulator-input-voltage", Title: "regulator input voltage",
	Applies: "regulators; the cathode voltage of shunt references",
	Stress:  "largest input voltage, steady and from switch-on; where VIO is rated also the largest input-to-output difference",
	Rating:  "VI, VIO or VKA", Worst: "high line, light load, winding unloaded", Policy: policy.RegulatorInputVoltage,
	Formula:      "sqrt(2) x off-load winding voltage x high line - diode drops",
	Assumptions:  "with the output shorted, and at switch-on, the whole input stands between input and output",
	SeverityRule: standardSeverity + "; VIO exceeded only with the output shorted is major",
	Source:       "absolute maximum input voltages: makers' data of the type",
	Remedy:       "a lower winding voltage, a pre-regulator, or a type with a higher rating",
	run: func(p *Pass) {
		p.eachRegulator(func(id netlist.ElementID, e *netlist.Element, d *netlist.Regulator) {
			input := p.get(e.Name, study.MaxInputVoltage)
			vi, vio := p.known(id, "VI"), p.known(id, "VIO")
			switch {
			case d.Shunt:
				p.report(id, p.judgeInput(input, p.known(id, "VKA"), "VKA"))
			case vi != nil || vio == nil:
				p.report(id, p.judgeInput(input, vi, "VI"))
			}
			if vio != nil && !d.Shunt {
				p.report(id, p.judgeDifference(p.get(e.Name, study.MaxDifferential), input, vio))
			}
		})
	},
}

var regulatorCurrent = &Check{
	Name: "regulator-current", Title: "regulator output current",
	Applies: "regulators; the cathode current of shunt references",
	Stress:  "largest output current in the steady state", Rating: "IO or IKA",
	Worst: "full load", Policy: policy.RegulatorOutputCurrent,
	Formula:      "load + divider current",
	Assumptions:  "the charging of output capacitors at switch-on is left to the current limit",
	SeverityRule: standardSeverity,
	Source:       "makers' data of the type",
	Remedy:       "a type of the next current, or a pass transistor beside it",
	run: func(p *Pass) {
		p.eachRegulator(func(id netlist.ElementID, e *netlist.Element, d *netlist.Regulator) {
			u := upper{stress: p.get(e.Name, study.MaxOutputCurrent), unit: quantity.Ampere, symbol: "IO", key: policy.RegulatorOutputCurrent, steps: "IO"}
			if d.Shunt {
				u.symbol, u.steps, u.remedy = "IKA", "", "a higher series resistor, or a transistor that takes the current"
			}
			u.rating = p.known(id, u.symbol)
			p.report(id, p.judge(u))
		})
	},
}

var regulatorMinimumLoad = &Check{
	Name: "regulator-minimum-load", Title: "least load of a regulator",
	Applies: "regulators that ask for a least load: those with IOmin, and every adjustable and shunt type",
	Stress:  "smallest output current over the period; of a shunt reference its smallest cathode current",
	Rating:  "IOmin or IKAmin", Worst: "light load; of a shunt reference low line, full load",
	Formula:      "the divider alone: VREF/R1, 1.25/240 = 5.2 mA",
	Assumptions:  "none",
	SeverityRule: "major below the rating: the output can leave its tolerance; critical where a shunt reference has no current left",
	Source:       "makers' data of the type",
	Remedy:       "a smaller divider, or a bleeder at the output",
	run: func(p *Pass) {
		p.eachRegulator(func(id netlist.ElementID, e *netlist.Element, d *netlist.Regulator) {
			least := p.known(id, "IOmin")
			switch {
			case d.Shunt:
				p.report(id, p.judgeMinimum(lower{
					stress: p.get(e.Name, study.MinCurrent), rating: p.known(id, "IKAmin"), symbol: "IKAmin", unit: quantity.Ampere, lost: lostCurrent,
					below: Major, remedy: "a lower series resistor, a larger reservoir, or more input voltage",
				}))
			case least != nil || d.Adjustable:
				p.report(id, p.judgeMinimum(lower{
					stress: p.get(e.Name, study.MinOutputCurrent), rating: least, symbol: "IOmin", unit: quantity.Ampere, lost: math.Inf(-1), below: Major,
					absent: "its smallest output current was not solved", remedy: "a smaller divider resistor, or a bleeder at the output",
				}))
			}
		})
	},
}

var regulatorJunctionTemperature = &Check{
	Name: "regulator-junction-temperature", Title: "regulator junction temperature",
	Applies: "regulators and shunt references",
	Stress:  "highest ambient + mean power x (RthJA, or RthJC + RthCS + sink where `cooling` is stated)",
	Rating:  "Tj", Worst: "high line, load scanned: the peak may lie inside the range", Policy: policy.RegulatorJunctionTemperature,
	Formula: "P = (Vin - Vout) IO + Vin IQ; with a source of V0 behind R it peaks at IO = (V0 - Vout)/(2 R)",
	Assumptions: "1 K/W from case to sink where RthCS is not stated (common practice); the customary case of the type; " +
		"no part heats another",
	SeverityRule: standardSeverity,
	Source:       "thermal resistances: makers' data of the type",
	Remedy:       "a heat sink, a lower input voltage, or a resistor that takes part of the power",
	run: func(p *Pass) {
		p.eachRegulator(func(id netlist.ElementID, e *netlist.Element, _ *netlist.Regulator) {
			f := p.judgeJunction(id, p.get(e.Name, study.MeanPower), policy.RegulatorJunctionTemperature)
			if short := p.get(e.Name, study.ShortPower); found(short) {
				f.Note = join(f.Note, "output shorted: "+quantity.Format(short.Value, quantity.Watt, 3)+" until it limits itself")
			}
			p.report(id, f)
		})
	},
}

// eachRegulator calls f for every regulator and shunt reference.
func (p *Pass) eachRegulator(f func(id netlist.ElementID, e *netlist.Element, d *netlist.Regulator)) {
	p.each(func(id netlist.ElementID, e *netlist.Element) {
		if d, ok := e.Device.(netlist.Regulator); ok {
			f(id, e, &d)
		}
	})
}

func (p *Pass) judgeInput(s *study.Stress, rating *Rating, symbol netlist.Symbol) Finding {
	return p.judge(upper{
		stress: s, rating: rating, symbol: symbol, unit: quantity.Volt, key: policy.RegulatorInputVoltage,
		remedy: "a lower winding voltage, a pre-regulator, or a type with a higher " + string(symbol),
	})
}

// judgeDifference holds the input-to-output difference against VIO. With the output shorted, and at the very
// moment of switch-on, the difference is the whole input.
func (p *Pass) judgeDifference(difference, input *study.Stress, vio *Rating) Finding {
	u := upper{
		stress: difference, rating: vio, symbol: "VIO", unit: quantity.Volt, key: policy.RegulatorInputVoltage,
		remedy: "a lower winding voltage, a pre-regulator, or a type with a higher VIO",
	}
	whole := input // with the output shorted
	if input != nil {
		whole = derived(input, study.MaxDifferential, quantity.Volt, 0, 1)
	}
	if difference == nil {
		u.stress, u.note = whole, "the whole input, which bounds the difference from above"
		f := p.judge(u)
		if f.Verdict == Violated {
			f.Verdict, f.Severity, f.Remedy, f.Margin = Unproven, "", "", 0
			f.Reason = "the input exceeds what VIO allows, and the difference to the output was not solved"
		}
		return f
	}
	f := p.judge(u)
	if !found(whole) {
		return f
	}
	f.Note = join(f.Note, "output shorted: "+quantity.Format(whole.Value, quantity.Volt, 3))
	if f.Verdict == Proven && whole.Value+whole.Error > vio.Value {
		f.Verdict, f.Severity, f.Stress, f.Limit = Violated, Major, whole, p.unchanged(vio.Value)
		f.Margin = (vio.Value - whole.Value - whole.Error) / vio.Value
		f.Remedy = "a lower winding voltage, a pre-regulator, or a type that bears the whole input with its output shorted"
	}
	return f
}

// judgeHeadroom holds the headroom above drop-out against the reserve of the policy.
func (p *Pass) judgeHeadroom(e *netlist.Element, s *study.Stress, dropout *Rating) Finding {
	f := Finding{Stress: s, Rating: dropout, Floor: true}
	if dropout == nil {
		f.Verdict, f.Reason = Unproven, "its drop-out voltage is unknown"
		f.Needs = &Needs{Statement: "rate " + e.Name + " VDO=...V or part " + e.Name + " TYPE"}
		return f
	}
	if !found(s) {
		return p.unsolvedStress(f, "")
	}
	limit, _ := p.derate(0, policy.HeadroomReserve)
	f.Limit = limit
	least := s.Value - s.Error
	f.Margin = (least - limit.Value) / math.Max(math.Abs(limit.Value), math.Abs(dropout.Value))
	f.Note = fmt.Sprintf("%s above VOUT at the trough, drop-out voltage %s",
		quantity.Format(s.Value+dropout.Value, quantity.Volt, 3), quantity.Format(dropout.Value, quantity.Volt, 3))
	switch {
	case least < 0:
		f.Verdict, f.Severity = Violated, Critical
	case least < limit.Value:
		f.Verdict, f.Severity = Violated, Major
	case s.Unproven != "":
		f.Verdict, f.Reason, f.Needs = Unproven, s.Unproven, missing(s)
	default:
		f.Verdict = Proven
		if f.Margin < nearLimit {
			f.Note = join(f.Note, "near limit")
		}
	}
	if f.Verdict == Violated {
		f.Remedy = quantity.Format(limit.Value-least, quantity.Volt, 3) + " more at the trough: a larger reservoir, or a higher winding voltage"
	}
	return f
}
