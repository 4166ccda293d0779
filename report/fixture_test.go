package report

import (
	"math"
	"testing"
	"time"

	"railproof/checks"
	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

// benchSupply is a small supply whose findings are written by hand, so that the tests of the writers do not
// depend on the engine.
const benchSupply = `Bench supply
V1 ac1 ac2 SIN(0 20 50)
D1 ac1 raw DR
D2 ac2 raw DR
D3 0 ac1 DR
D4 0 ac2 DR
C1 raw 0 2200u
R1 raw out 100
DZ1 0 out DZ
RL out 0 1k
.model DR D
.model DZ D(BV=12)
.end
`

func circuitOf(t testing.TB, name, text string) (*netlist.Circuit, *netlist.Duty) {
	t.Helper()
	c, d, faults := netlist.Parse(name, []byte(text), nil, nil)
	if len(faults) > 0 {
		t.Fatal(faults)
	}
	return c, d
}

func steady(element string, q study.Quantity, v float64, u quantity.Unit, phase float64) *study.Stress {
	return &study.Stress{
		Element: element, Quantity: q, Value: v, Unit: u, Error: math.Abs(v) * 1e-6, Phase: phase,
		Condition: study.Condition{Name: "high line, light load", Line: "high", Load: "light", Start: "steady", Also: []string{"C1 at -20 %"}},
	}
}

// benchResult is one finding of every kind: violated of two severities, four alike on a bridge, unproven for
// want of a rating and of a statement, near its limit, proven, and structural.
func benchResult(t testing.TB) *checks.Result {
	t.Helper()
	const file = "bench/supply.cir"
	c, d := circuitOf(t, file, benchSupply)
	r := &checks.Result{
		File: file, Title: c.Title, Circuit: c, Duty: d,
		RailMap:       []string{"V1 20 V peak 50 Hz -> bridge D1..D4 at raw -> C1 2200 uF at raw -> zener shunt R1 DZ1 at out -> RL"},
		Circumstances: checks.Circumstances{Line: "207..253 V 50 Hz", Load: "RL 1 kOhm..open", Ambient: "0..40 degC", Policy: "common"},
		Assumptions: []checks.Assumption{
			{About: "ambient", Value: "0..40 degC", Source: "common practice"},
			{About: "C1 tolerance", Value: "-20 %..+20 %", Source: "common practice"},
		},
		NotRead:      []string{".step is skipped"},
		PartsVersion: "1-0000", PolicyVersion: "common 0000",
	}
	for k, name := range []string{"D1", "D2", "D3", "D4"} {
		r.Findings = append(r.Findings, checks.Finding{
			Check: "diode-reverse-voltage", Headline: true, Element: name, Verdict: checks.Violated, Severity: checks.Major,
			Stress: steady(name, study.PeakReverseVoltage, 41.8+float64(k)*1e-4, quantity.Volt, 0.015),
			Rating: &checks.Rating{Symbol: "VRRM", Value: 50, Unit: quantity.Volt, Origin: "parts table 1N4001", Source: "a data sheet", Confidence: "seen"},
			Limit:  &checks.Limit{Value: 40, Policy: "common", Factor: 0.8, Rule: "rating x 0.8", Source: "common practice"},
			Margin: -0.045, Remedy: "a part with VRRM of 100 V (needs 52.3 V)",
			At: netlist.Position{File: file, Line: 3 + k, Column: 1},
		})
	}
	r.Findings = append(r.Findings,
		checks.Finding{
			Check: "regulator-headroom", Headline: true, Element: "R1", Verdict: checks.Violated, Severity: checks.Critical, Floor: true,
			Stress: steady("R1", study.MinHeadroom, 1.42, quantity.Volt, 0.0081),
			Rating: &checks.Rating{Symbol: "VDO", Value: 2, Unit: quantity.Volt, Origin: "stated"},
			Limit:  &checks.Limit{Value: 2, Policy: "common", Factor: 1, Rule: "0.5 V reserve"},
			Margin: -0.29, At: netlist.Position{File: file, Line: 8, Column: 1}, Remedy: "C1 3300 uF",
		},
		checks.Finding{
			Check: "capacitor-voltage", Headline: true, Element: "C1", Verdict: checks.Unproven, Reason: "no rating UR is known",
			Stress: steady("C1", study.MaxVoltage, 20.31, quantity.Volt, 0.005),
			Needs:  &checks.Needs{Symbol: "UR", Value: 25.387, Unit: quantity.Volt, NextStandard: 35},
			At:     netlist.Position{File: file, Line: 7, Column: 1},
		},
		checks.Finding{
			Check: "winding-current", Element: "V1", Verdict: checks.Unproven, Reason: "the rated current of V1 is unknown",
			Stress: steady("V1", study.RMSCurrent, 0.4, quantity.Ampere, math.NaN()),
			Needs:  &checks.Needs{Statement: "winding V1 ...V ...A regulation=...%"},
			At:     netlist.Position{File: file, Line: 2, Column: 1},
		},
		checks.Finding{
			Check: "zener-power", Element: "DZ1", Verdict: checks.Proven, Note: "near limit",
			Stress: steady("DZ1", study.MeanPower, 0.58, quantity.Watt, math.NaN()),
			Rating: &checks.Rating{Symbol: "PD", Value: 1, Unit: quantity.Watt, Origin: "stated"},
			Limit:  &checks.Limit{Value: 0.6, Policy: "common", Factor: 0.6, Rule: "rating x 0.6"},
			Margin: 0.0333, At: netlist.Position{File: file, Line: 9, Column: 1},
		},
		checks.Finding{
			Check: "zener-resistor-power", Headline: true, Element: "R1", Verdict: checks.Proven,
			Stress: steady("R1", study.MeanPower, 0.7, quantity.Watt, math.NaN()),
			Rating: &checks.Rating{Symbol: "P70", Value: 2, Unit: quantity.Watt, Origin: "stated"},
			Limit:  &checks.Limit{Value: 1.2, Policy: "common", Factor: 0.6, Rule: "rating x 0.6"},
			Margin: 0.4166, At: netlist.Position{File: file, Line: 8, Column: 1},
		},
		checks.Finding{
			Check: "after-end", Verdict: checks.Violated, Severity: checks.Minor, Reason: "an element stands behind .end",
			Remedy: "move the .end to the end", At: netlist.Position{File: file, Line: 13, Column: 1},
		},
	)
	for _, f := range r.Findings {
		if f.Stress != nil {
			r.Stresses = append(r.Stresses, *f.Stress)
		}
	}
	r.Stresses = append(r.Stresses, *steady("RL", study.MeanPower, math.Inf(1), quantity.Watt, math.NaN()))
	return r
}

var day = time.Date(2030, 5, 20, 12, 0, 0, 0, time.UTC)

func gateAt(t testing.TB, text string) Gate {
	t.Helper()
	g, err := ParseGate(text)
	if err != nil {
		t.Fatal(err)
	}
	return g
}

func benchReport(t testing.TB) *Report {
	t.Helper()
	return New([]Input{{File: "bench/supply.cir", Result: benchResult(t)}}, Options{Version: "test", Gate: gateAt(t, "critical"), Now: day})
}
