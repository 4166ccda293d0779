package checks

import (
	"testing"

	"railproof/checks/study"
)

const diodeDeck = "V1 ac 0 SIN(0 20 50)\nD1 ac out 1N4001\nC1 out 0 470u\nRL out 0 1k"

// 1N4001: IFAV 1 A up to 75 degC of the air, Tj 150 degC, 0.8 for a capacitive load.
func TestAverageCurrentInTheHeat(t *testing.T) {
	const hot = "winding V1 as-drawn\nambient 0C..100C"
	// (150 - 100)/(150 - 75) = 0.667; pulses with a crest of 3 A on a mean of 0.45 A: x 0.8; policy x 0.8: 0.427 A.
	f := only(t, findings(t, "diode-average-current", diodeDeck, hot, of("D1", study.MeanCurrent, 0.45), of("D1", study.PeakCurrent, 3)), "")
	outcome(t, f, "violated/major", 0.4267)
	// A half sine with a crest of 1.41 A has a mean of 0.45 A: no factor for capacitive load, limit 0.533 A.
	f = only(t, findings(t, "diode-average-current", diodeDeck, hot, of("D1", study.MeanCurrent, 0.45), of("D1", study.PeakCurrent, 1.41)), "")
	outcome(t, f, "proven", 0.5333)
	// The remedy is a nominal rating: 0.65 A/(0.8 x 0.667) = 1.219 A, next step 1.5 A.
	f = only(t, findings(t, "diode-average-current", diodeDeck, hot, of("D1", study.MeanCurrent, 0.65), of("D1", study.PeakCurrent, 2)), "")
	outcome(t, f, "violated/major", 0.5333)
	if want := "a part with IFAV of 1.5 A (needs 1.22 A)"; f.Remedy != want {
		t.Errorf("remedy %q, want %q", f.Remedy, want)
	}
}

func TestCapacitive(t *testing.T) {
	// The crest of a half sine is pi times its mean; that of a full-wave reservoir at Rs/RL = 10 % per diode 2 x 3.3.
	for _, c := range []struct {
		mean, peak float64
		want       bool
	}{{1, 3.1416, false}, {1, 6.6, true}, {0, 1, false}} {
		if got := capacitive(c.mean, c.peak); got != c.want {
			t.Errorf("capacitive(%g, %g) = %v", c.mean, c.peak, got)
		}
	}
}

func TestSurge(t *testing.T) {
	const duty = "winding V1 as-drawn"
	// 1N4001: 30 A of 8.3 ms, so 0.8 x 30 A = 24 A; 3.7 A2s as published.
	list := findings(t, "diode-surge-current", diodeDeck, duty, cold("D1", study.SurgeCurrent, 26), cold("D1", study.SurgeI2t, 4))
	outcome(t, only(t, list, study.SurgeCurrent), "violated/major", 24)
	outcome(t, only(t, list, study.SurgeI2t), "violated/critical", 3.7)

	// A bare IFSM of 30 A stands for 30^2 x 8.3 ms/2 = 3.735 A2s.
	bare := "V1 ac 0 SIN(0 20 50)\nD1 ac out DX\nC1 out 0 470u\n.model DX D(IS=1n)"
	list = findings(t, "diode-surge-current", bare, duty+"\nrate D1 IFSM=30A", cold("D1", study.SurgeCurrent, 10), cold("D1", study.SurgeI2t, 1))
	outcome(t, only(t, list, study.SurgeI2t), "proven", 3.735)

	// Without a rating it says what is needed: 10 A/0.8 = 12.5 A.
	f := only(t, findings(t, "diode-surge-current", bare, duty, cold("D1", study.SurgeCurrent, 10), cold("D1", study.SurgeI2t, 1)), study.SurgeCurrent)
	outcome(t, f, "unproven", whatever)
	if f.Needs == nil || f.Needs.Symbol != "IFSM" || !near(f.Needs.Value, 12.5, 1e-9) {
		t.Errorf("needs %+v", f.Needs)
	}

	// Without a solved switch-on nothing is proven; with an unknown source nothing is either, but what is violated stays so.
	for _, f := range findings(t, "diode-surge-current", diodeDeck, duty) {
		outcome(t, f, "unproven", whatever)
	}
	list = findings(t, "diode-surge-current", diodeDeck, duty,
		doubtful(cold("D1", study.SurgeCurrent, 10), "no source resistance"), doubtful(cold("D1", study.SurgeI2t, 40), "no source resistance"))
	outcome(t, only(t, list, study.SurgeCurrent), "unproven", 24)
	outcome(t, only(t, list, study.SurgeI2t), "violated/critical", 3.7)
}

func TestRepetitivePeakOnlyWhereRated(t *testing.T) {
	const duty = "winding V1 as-drawn"
	if list := findings(t, "diode-repetitive-peak-current", diodeDeck, duty, of("D1", study.PeakCurrent, 6)); len(list) != 0 {
		t.Errorf("found %d", len(list))
	}
	f := only(t, findings(t, "diode-repetitive-peak-current", diodeDeck, duty+"\nrate D1 IFRM=5A", of("D1", study.PeakCurrent, 6)), "")
	outcome(t, f, "violated/critical", 5)
}

func TestJunctionTemperature(t *testing.T) {
	const duty = "winding V1 as-drawn\nambient 0C..45C"
	bare := "V1 ac 0 SIN(0 20 50)\nD1 ac out DX\nC1 out 0 470u\n.model DX D(IS=1n)"
	// 1N4001: RthJA 50 K/W, Tj 150 degC: 45 + 1.5 W x 50 = 120 below 125; 45 + 1.8 x 50 = 135 above.
	outcome(t, only(t, findings(t, "diode-junction-temperature", diodeDeck, duty, of("D1", study.MeanPower, 1.5)), ""), "proven", 125)
	f := only(t, findings(t, "diode-junction-temperature", diodeDeck, duty, of("D1", study.MeanPower, 1.8)), "")
	outcome(t, f, "violated/major", 125)
	if f.Stress.Value != 135 {
		t.Errorf("%g degC, want 135", f.Stress.Value)
	}
	// (125 - 45)/1.8 = 44.4 K/W
	if want := "at most 44.4 K/W from junction to ambient: a heat sink, more copper, or a part of another case"; f.Remedy != want {
		t.Errorf("remedy %q", f.Remedy)
	}
	// With a sink: 45 + 5 x (3 + 1 + 10) = 115; the sink may have (125 - 45)/8 - 4 = 6 K/W at 8 W.
	const cooled = duty + "\nrate D1 Tj=150C RthJC=3K/W\ncooling D1 10K/W"
	outcome(t, only(t, findings(t, "diode-junction-temperature", bare, cooled, of("D1", study.MeanPower, 5)), ""), "proven", 125)
	f = only(t, findings(t, "diode-junction-temperature", bare, cooled, of("D1", study.MeanPower, 8)), "")
	outcome(t, f, "violated/critical", 125)
	if f.Remedy != "a heat sink of at most 6 K/W" {
		t.Errorf("remedy %q", f.Remedy)
	}
	f = only(t, findings(t, "diode-junction-temperature", bare, cooled, of("D1", study.MeanPower, 30)), "")
	if want := "no heat sink is enough (4 K/W up to the sink, 2.67 K/W allowed): lower the power or share it"; f.Remedy != want {
		t.Errorf("remedy %q", f.Remedy)
	}
	// Nothing known: 50 mW x 600 K/W + 45 = 75 degC suits the poorest part; 100 mW gives 105 degC, beyond 125 - 25.
	outcome(t, only(t, findings(t, "diode-junction-temperature", bare, duty, of("D1", study.MeanPower, 0.05)), ""), "proven", 100)
	f = only(t, findings(t, "diode-junction-temperature", bare, duty, of("D1", study.MeanPower, 0.1)), "")
	outcome(t, f, "unproven", whatever)
	if f.Needs == nil || f.Needs.Statement != "rate D1 RthJA=...K/W Tj=...C" {
		t.Errorf("needs %+v", f.Needs)
	}
	// Tj known: at most (125 - 45)/1 = 80 K/W.
	f = only(t, findings(t, "diode-junction-temperature", bare, duty+"\nrate D1 Tj=150C", of("D1", study.MeanPower, 1)), "")
	if f.Needs == nil || f.Needs.Statement != "rate D1 RthJA=...K/W (at most 80 K/W), or cooling D1 ...K/W" {
		t.Errorf("needs %+v", f.Needs)
	}
	// Tj unknown: 45 + 1 x 50 = 95, so Tj of 120 with 25 K in hand.
	f = only(t, findings(t, "diode-junction-temperature", bare, duty+"\nrate D1 RthJA=50K/W", of("D1", study.MeanPower, 1)), "")
	if f.Needs == nil || f.Needs.Symbol != "Tj" || !near(f.Needs.Value, 120, 1e-9) {
		t.Errorf("needs %+v", f.Needs)
	}
}
