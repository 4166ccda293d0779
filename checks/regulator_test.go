package checks

import (
	"strings"
	"testing"

	"railproof/checks/study"
)

const (
	fixedDeck      = "V1 in 0 20\nC1 in 0 10u\nX1 in 0 out LM7812\nC2 out 0 1u\nILOAD out 0 0.1"
	adjustableDeck = "V1 in 0 20\nC1 in 0 10u\nX1 in adj out LM317\nR1 out adj 240\nR2 adj 0 2.2k\nC2 out 0 1u\nILOAD out 0 0.1"
	adjustablePins = "part X1 317 pins=in,adj,out\n"
)

func TestInputToOutputDifference(t *testing.T) {
	run := func(stresses ...study.Stress) Finding {
		return only(t, findings(t, "regulator-input-voltage", adjustableDeck, adjustablePins, stresses...), "")
	}
	// 317: VIO 40 V, x 0.85 = 34 V. With the output shorted the whole input stands across it.
	outcome(t, run(of("X1", study.MaxDifferential, 20), of("X1", study.MaxInputVoltage, 33)), "proven", 34)
	outcome(t, run(of("X1", study.MaxDifferential, 36), of("X1", study.MaxInputVoltage, 39)), "violated/major", 34)
	outcome(t, run(of("X1", study.MaxDifferential, 41), of("X1", study.MaxInputVoltage, 45)), "violated/critical", 34)
	f := run(of("X1", study.MaxDifferential, 20), of("X1", study.MaxInputVoltage, 45))
	outcome(t, f, "violated/major", 40)
	if f.Stress.Value != 45 || !strings.Contains(f.Note, "output shorted: 45 V") {
		t.Errorf("%s", show(f))
	}
	// Where the difference was not solved the input bounds it.
	outcome(t, run(of("X1", study.MaxInputVoltage, 30)), "proven", 34)
	outcome(t, run(of("X1", study.MaxInputVoltage, 45)), "unproven", whatever)
}

func TestMinimumLoad(t *testing.T) {
	run := func(deck, duty string, stresses ...study.Stress) []Finding {
		return findings(t, "regulator-minimum-load", deck, duty, stresses...)
	}
	// 317: 10 mA; a divider of 240 ohm takes 1.25/240 = 5.2 mA.
	f := only(t, run(adjustableDeck, adjustablePins, of("X1", study.MinOutputCurrent, 0.0052)), "")
	outcome(t, f, "violated/major", 0.01)
	if !f.Floor {
		t.Error("the limit is a minimum")
	}
	outcome(t, only(t, run(adjustableDeck, adjustablePins, of("X1", study.MinOutputCurrent, 0.0104)), ""), "proven", 0.01)
	outcome(t, only(t, run(adjustableDeck, adjustablePins), ""), "unproven", whatever)
	if list := run(fixedDeck, ""); len(list) != 0 {
		t.Errorf("%d findings on a fixed type that asks for no load", len(list))
	}
}

func TestBackflow(t *testing.T) {
	// The 78xx family bears 7 V of output over input.
	outcome(t, only(t, findings(t, "regulator-backflow", fixedDeck, "", of("X1", study.MaxBackflow, 9)), ""), "violated/major", 7)
	outcome(t, only(t, findings(t, "regulator-backflow", fixedDeck, "", of("X1", study.MaxBackflow, 5)), ""), "proven", 7)
	// Not solved: 12.6 V bound it, which is too much; 5.25 V are not.
	f := only(t, findings(t, "regulator-backflow", fixedDeck, "", of("node:out", study.MaxVoltage, 12.6)), "")
	outcome(t, f, "unproven", 7)
	if f.Needs == nil || f.Needs.Statement != "a diode from output (anode) to input (cathode)" {
		t.Errorf("needs %+v", f.Needs)
	}
	five := strings.ReplaceAll(fixedDeck, "LM7812", "LM7805")
	outcome(t, only(t, findings(t, "regulator-backflow", five, "", of("node:out", study.MaxVoltage, 5.25)), ""), "proven", 7)
	// A diode the right way round and the wrong, and both for a negative regulator.
	outcome(t, only(t, findings(t, "regulator-backflow", fixedDeck+"\nD1 out in 1N4001", "", of("node:out", study.MaxVoltage, 12.6)), ""), "proven", 7)
	outcome(t, only(t, findings(t, "regulator-backflow", fixedDeck+"\nD1 in out 1N4001", "", of("node:out", study.MaxVoltage, 12.6)), ""), "violated/critical", whatever)
	negative := "V1 0 in 20\nX1 in 0 out LM7912\nILOAD 0 out 0.1\n"
	const pins = "part X1 7912 pins=in,gnd,out"
	outcome(t, only(t, findings(t, "regulator-backflow", negative+"D1 in out 1N4001", pins, of("node:out", study.MinVoltage, -12.6)), ""), "proven", 7)
	outcome(t, only(t, findings(t, "regulator-backflow", negative+"D1 out in 1N4001", pins, of("node:out", study.MinVoltage, -12.6)), ""), "violated/critical", whatever)
}

func TestRegulatorCapacitors(t *testing.T) {
	deck := func(out string) string {
		return "V1 in 0 6\nC1 in 0 22u\nX1 in 0 out LM1117-3.3\nILOAD out 0 0.1\n" + out
	}
	run := func(out, duty string, q study.Quantity) Finding {
		return only(t, findings(t, "regulator-capacitors", deck(out), duty), q)
	}
	// 1117: 10 uF and 0.3 to 22 ohm. 22 uF - 20 % = 17.6 uF; 10 uF - 20 % = 8 uF, its nominal value enough; 1 uF too little.
	outcome(t, run("C2 out 0 22u", "", study.OutputCapacitance), "proven", 10e-6)
	outcome(t, run("C2 out 0 10u", "", study.OutputCapacitance), "violated/minor", 10e-6)
	f := run("C2 out 0 1u", "", study.OutputCapacitance)
	outcome(t, f, "violated/major", 10e-6)
	// 10 uF/0.8 = 12.5 uF, next in E6
	if f.Remedy != "a capacitor of 15 uF" {
		t.Errorf("remedy %q", f.Remedy)
	}
	outcome(t, run("R9 out 0 10k", "", study.OutputCapacitance), "violated/major", 10e-6)
	outcome(t, run("C2 out 0 22u", "", study.SeriesResistance), "unproven", whatever)
	outcome(t, run("C2 out 0 22u", "rate C2 ESR=0.5Ohm", study.SeriesResistance), "proven", whatever)
	outcome(t, run("C2 out 0 22u", "rate C2 ESR=0.1Ohm..0.5Ohm", study.SeriesResistance), "violated/major", 0.3)
	outcome(t, run("C2 out 0 22u", "rate C2 ESR=1Ohm..30Ohm", study.SeriesResistance), "violated/major", 22)
	// The 78xx family asks for nominal values: 100 nF are 100 nF.
	outcome(t, only(t, findings(t, "regulator-capacitors", strings.ReplaceAll(fixedDeck, "1u", "100n"), ""), study.OutputCapacitance), "proven", 100e-9)
	// A capacitor from input to output smooths neither.
	across := strings.ReplaceAll(fixedDeck, "C2 out 0 1u", "C2 out in 1u")
	outcome(t, only(t, findings(t, "regulator-capacitors", across, ""), study.OutputCapacitance), "violated/minor", 100e-9)
}

func TestHeadroom(t *testing.T) {
	run := func(volts float64) Finding {
		return only(t, findings(t, "regulator-headroom", fixedDeck, "", of("X1", study.MinHeadroom, volts)), "")
	}
	outcome(t, run(0.6), "proven", 0.5)
	outcome(t, run(0.4), "violated/major", 0.5)
	outcome(t, run(-0.1), "violated/critical", 0.5)
}
