package checks

import (
	"strings"
	"testing"

	"railproof/checks/study"
)

const capacitorDeck = "V1 in 0 24\nR1 in out 100\nC1 out 0 470u"

func TestOvershoot(t *testing.T) {
	run := func(duty string, steady, start float64) Finding {
		return only(t, findings(t, "capacitor-voltage", capacitorDeck, duty,
			cold("C1", study.MaxVoltage, start), of("C1", study.SteadyMaxVoltage, steady)), "")
	}
	// UR 50 V: continuous limit 0.8 x 50 = 40 V, surge voltage 1.15 x 50 = 57.5 V.
	outcome(t, run("rate C1 UR=50V", 38, 55), "proven", 40)
	outcome(t, run("rate C1 UR=50V", 45, 55), "violated/major", 40)
	outcome(t, run("rate C1 UR=50V", 38, 60), "violated/critical", whatever)
	// UR 400 V: 1.10 x 400 = 440 V.
	outcome(t, run("rate C1 UR=400V", 300, 430), "proven", 320)
	outcome(t, run("rate C1 UR=400V", 300, 450), "violated/critical", whatever)
	// A stated surge voltage wins.
	outcome(t, run("rate C1 UR=50V US=65V", 38, 60), "proven", 40)
	// A steady voltage gets no such credit.
	f := only(t, findings(t, "capacitor-voltage", capacitorDeck, "rate C1 UR=50V", of("C1", study.MaxVoltage, 55), of("C1", study.SteadyMaxVoltage, 55)), "")
	outcome(t, f, "violated/critical", 40)
}

// A capacitor drawn with its plus at the lower end: the magnitude counts. By technology: common policy.
func TestCapacitorVoltageByTechnology(t *testing.T) {
	for _, c := range []struct {
		duty  string
		limit float64
	}{
		{"rate C1 UR=50V", 40}, {"rate C1 UR=50V technology=film", 35}, {"rate C1 UR=50V technology=ceramic", 35},
		{"rate C1 UR=50V technology=tantalum", 25}, {"rate C1 UR=50V technology=electrolytic", 40},
	} {
		f := only(t, findings(t, "capacitor-voltage", capacitorDeck, c.duty, of("C1", study.MaxVoltage, 0), of("C1", study.MinVoltage, -20)), "")
		outcome(t, f, "proven", c.limit)
		if f.Stress.Value != 20 {
			t.Errorf("stress %g, want 20", f.Stress.Value)
		}
	}
}

func TestCapacitorsInSeriesShareNothing(t *testing.T) {
	deck := "V1 in 0 24\nR1 in out 100\nC1 out mid 470u\nC2 mid 0 470u"
	for _, f := range findings(t, "capacitor-voltage", deck, "rate C1,C2 UR=50V", of("C1", study.MaxVoltage, 12), of("C2", study.MaxVoltage, 12)) {
		outcome(t, f, "unproven", 40)
		if !strings.Contains(f.Reason, "mid") {
			t.Errorf("reason %q", f.Reason)
		}
	}
	for _, f := range findings(t, "capacitor-voltage", deck+"\nR2 mid 0 10k\nR3 out mid 10k", "rate C1,C2 UR=50V", of("C1", study.MaxVoltage, 12), of("C2", study.MaxVoltage, 12)) {
		outcome(t, f, "proven", 40)
	}
}

func TestMainsCapacitor(t *testing.T) {
	deck := "V1 l n SIN(0 325.27 50)\nRF l a 0.1\nCX a n 100n\nR1 a b 10\nD1 b out 1N4007\nC1 out n 10u\nR2 n 0 1"
	const duty = "line V1 230V -10%..+10% 50Hz\nrate RF IN=1A\n"
	name := func(list []Finding) Finding {
		for _, f := range list {
			if f.Element == "CX" {
				return f
			}
		}
		t.Fatal("no finding on CX")
		return Finding{}
	}
	// 1.1 x 230 V = 253 V rms.
	f := name(findings(t, "capacitor-voltage", deck, duty))
	outcome(t, f, "unproven", whatever)
	if f.Needs == nil || f.Needs.Symbol != "UAC" || !near(f.Needs.Value, 253, 1e-6) {
		t.Errorf("needs %+v", f.Needs)
	}
	f = name(findings(t, "capacitor-voltage", deck, duty+"rate CX UAC=275V"))
	outcome(t, f, "unproven", 275)
	if f.Needs == nil || f.Needs.Statement != "rate CX class=X2" {
		t.Errorf("needs %+v", f.Needs)
	}
	outcome(t, name(findings(t, "capacitor-voltage", deck, duty+"rate CX UAC=275V class=X2")), "proven", 275)
	outcome(t, name(findings(t, "capacitor-voltage", deck, duty+"rate CX UAC=250V class=X2")), "violated/critical", 250)
}

func TestReverseVoltage(t *testing.T) {
	run := func(duty string, lowest float64) []Finding {
		return findings(t, "capacitor-reverse-voltage", capacitorDeck, duty, of("C1", study.MinVoltage, lowest))
	}
	// An aluminium electrolytic bears 1 V; a diode across it leaves 0.7 V.
	outcome(t, only(t, run("", -0.7), ""), "proven", 1)
	outcome(t, only(t, run("", -1.2), ""), "violated/critical", 1)
	// A tantalum of 35 V bears 2 %, 0.7 V; without UR half a volt is too much for any (25 V).
	outcome(t, only(t, run("rate C1 technology=tantalum UR=35V", -0.6), ""), "proven", 0.7)
	outcome(t, only(t, run("rate C1 technology=tantalum UR=35V", -0.8), ""), "violated/critical", 0.7)
	outcome(t, only(t, run("rate C1 technology=tantalum", -0.3), ""), "unproven", whatever)
	if list := run("rate C1 polarised=no", -20); len(list) != 0 {
		t.Errorf("%d findings on a bipolar capacitor", len(list))
	}
}

// Multipliers of a 35 V electrolytic: 1 at 100 Hz, 1.18 the greatest up to 10 kHz is 1.22; a 120 Hz rating leaves 0.92 at 100 Hz.
func TestRippleCurrent(t *testing.T) {
	run := func(duty string, stresses ...study.Stress) Finding {
		return only(t, findings(t, "capacitor-ripple-current", "V1 ac 0 SIN(0 20 50)\nD1 ac out 1N4001\nC1 out 0 470u", "winding V1 as-drawn\nrate C1 UR=35V "+duty, stresses...), "")
	}
	// Weighted 1 A at 100 Hz is 1/0.92 = 1.087 A at 120 Hz: inside 0.9 x 1.3 = 1.17 A, beyond 0.9 x 1.2 = 1.08 A.
	f := run("IR=1.3A", of("C1", study.RippleCurrentEquivalent, 1))
	outcome(t, f, "proven", 1.17)
	if !near(f.Stress.Value, 1/0.92, 1e-6) {
		t.Errorf("equivalent %g, want 1.087", f.Stress.Value)
	}
	outcome(t, run("IR=1.2A", of("C1", study.RippleCurrentEquivalent, 1)), "violated/major", 1.08)
	outcome(t, run("IR=1.2A fIR=100Hz", of("C1", study.RippleCurrentEquivalent, 1)), "proven", 1.08)
	// Unweighted 1 A of a half wave: at most 1/(0.91 x 0.92) = 1.194 A at 120 Hz, at least 1/(1.22 x 0.92) = 0.891 A.
	f = run("IR=1.4A", of("C1", study.RippleCurrentRMS, 1))
	outcome(t, f, "proven", 1.26)
	if !near(f.Stress.Value, 1/(0.91*0.92), 1e-6) {
		t.Errorf("bound %g, want 1.194", f.Stress.Value)
	}
	outcome(t, run("IR=1.2A", of("C1", study.RippleCurrentRMS, 1)), "unproven", 1.08)
	outcome(t, run("IR=0.95A", of("C1", study.RippleCurrentRMS, 1)), "violated/major", 0.855)
	outcome(t, run("IR=0.85A", of("C1", study.RippleCurrentRMS, 1)), "violated/critical", 0.765)
	// Nothing stated: 5 mA is nothing to any electrolytic, 100 mA is.
	outcome(t, run("", of("C1", study.RippleCurrentEquivalent, 0.005)), "proven", 0.009)
	f = run("", of("C1", study.RippleCurrentEquivalent, 0.092))
	outcome(t, f, "unproven", whatever)
	if f.Needs == nil || !near(f.Needs.Value, 0.1/0.9, 1e-6) {
		t.Errorf("needs %+v", f.Needs)
	}
}

func TestExpectedLife(t *testing.T) {
	// 2000 h at 105 degC: 16 times as long at 65 degC; below 40 degC no more than 2^6.5.
	for _, c := range []struct{ temperature, want float64 }{{105, 2000}, {95, 4000}, {65, 32000}, {40, 181019}, {20, 181019}} {
		if got := ExpectedLife(2000, 105, c.temperature); !near(got, c.want, 1e-5) {
			t.Errorf("%g degC: %g h, want %g", c.temperature, got, c.want)
		}
	}
}

func TestEndurance(t *testing.T) {
	run := func(duty string) []Finding {
		return findings(t, "capacitor-endurance", capacitorDeck, "ambient 0C..60C\n"+duty, of("C1", study.RippleCurrentEquivalent, 0.92))
	}
	// 0.92 A at 100 Hz is the rated 1 A at 120 Hz: 60 + 5 = 65 degC, 2000 x 2^4 = 32000 h.
	const part = "rate C1 UR=50V IR=1A category=105C endurance=2000h\n"
	f := only(t, run(part+"life 30000h"), "")
	outcome(t, f, "proven", 30000)
	if !near(f.Stress.Value, 32000, 1e-6) {
		t.Errorf("%g h, want 32000", f.Stress.Value)
	}
	outcome(t, only(t, run(part+"life 40000h"), ""), "violated/minor", 40000)
	outcome(t, only(t, run(part+"life 70000h"), ""), "violated/major", 70000)
	if list := run(part); len(list) != 0 {
		t.Errorf("%d findings without a stated life", len(list))
	}
	outcome(t, only(t, run("rate C1 UR=50V IR=1A category=105C\nlife 30000h"), ""), "unproven", whatever)
	// Twice the rated current heats by 20 K: 80 degC, below a category temperature of 85; three times by 45 K: beyond it.
	outcome(t, only(t, run("rate C1 UR=50V IR=0.3A category=85C endurance=2000h"), ""), "violated/major", 85)
}

func TestStoredCharge(t *testing.T) {
	run := func(duty string, stresses ...study.Stress) []Finding {
		return findings(t, "stored-charge", "V1 in 0 300\nR1 in out 100\nC1 out 0 100u", duty, stresses...)
	}
	crest := of("C1", study.MaxVoltage, 330)
	// Unless a profile is stated it is a caution.
	f := only(t, run("", crest, of("C1", study.DischargeTime, 5)), "")
	outcome(t, f, "violated/minor", 2)
	// 2 s/(1.2 x 100 uF x ln(330/60)) = 9777 ohm
	if f.Remedy != "a bleeder of at most 9.7 kOhm across it" {
		t.Errorf("remedy %q", f.Remedy)
	}
	outcome(t, only(t, run("profile laboratory", crest, of("C1", study.DischargeTime, 6)), ""), "violated/critical", 5)
	outcome(t, only(t, run("profile laboratory", crest, of("C1", study.DischargeTime, 4)), ""), "proven", 5)
	outcome(t, only(t, run("", crest), ""), "unproven", whatever)
	if list := run("", of("C1", study.MaxVoltage, 59)); len(list) != 0 {
		t.Errorf("%d findings at 59 V", len(list))
	}
	// 40 V of a source whose off-load rise is not known may be 72 V.
	outcome(t, only(t, run("", doubtful(of("C1", study.MaxVoltage, 40), "the off-load voltage is unknown")), ""), "unproven", whatever)
	if list := run("", doubtful(of("C1", study.MaxVoltage, 30), "the off-load voltage is unknown")); len(list) != 0 {
		t.Errorf("%d findings at 30 V", len(list))
	}
}
