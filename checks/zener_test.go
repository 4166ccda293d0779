package checks

import (
	"testing"

	"railproof/checks/study"
)

const zenerDeck = "V1 in 0 24\nR1 in out 470\nDZ1 0 out 1N4742A\nILOAD out 0 5m"

func TestZenerResistorWithTheOutputShorted(t *testing.T) {
	run := func(stresses ...study.Stress) Finding {
		return only(t, findings(t, "zener-resistor-power", zenerDeck, "rate R1 P70=1W", stresses...), "")
	}
	// 26.4^2/446.5 = 1.56 W with the output shorted: beyond 1 W, a fire hazard, though 0.5 W suit the policy.
	f := run(of("R1", study.MeanPower, 0.5), of("R1", study.ShortPower, 1.56))
	outcome(t, f, "violated/major", 1)
	if f.Remedy != "a part with P70 of 2 W (needs 1.56 W)" {
		t.Errorf("remedy %q", f.Remedy)
	}
	f = run(of("R1", study.MeanPower, 0.5), of("R1", study.ShortPower, 0.9))
	outcome(t, f, "proven", 0.6)
	if f.Note != "output shorted: 900 mW" {
		t.Errorf("note %q", f.Note)
	}
	outcome(t, run(of("R1", study.MeanPower, 1.2), of("R1", study.ShortPower, 1.56)), "violated/critical", 0.6)
}

// A film resistor at 100 degC has (155 - 100)/85 = 0.647 of its power left.
func TestResistorInTheHeat(t *testing.T) {
	const hot = "ambient 0C..100C\n"
	f := only(t, findings(t, "zener-resistor-power", zenerDeck, hot+"rate R1 P70=1W", of("R1", study.MeanPower, 0.5)), "")
	outcome(t, f, "violated/major", 0.6*0.647)
	// 0.5 W/(0.6 x 0.647) = 1.29 W
	if f.Remedy != "a part with P70 of 2 W (needs 1.29 W)" {
		t.Errorf("remedy %q", f.Remedy)
	}
	f = only(t, findings(t, "zener-resistor-power", zenerDeck, hot, of("R1", study.MeanPower, 0.5)), "")
	outcome(t, f, "unproven", whatever)
	if f.Needs == nil || !near(f.Needs.Value, 0.5/(0.6*0.647), 1e-3) || f.Needs.NextStandard != 2 {
		t.Errorf("needs %+v", f.Needs)
	}
}

func TestZenerPower(t *testing.T) {
	power := func(duty, kind string, watts float64) Finding {
		deck := "V1 in 0 24\nR1 in out 470\nDZ1 0 out " + kind + "\n.model DZX D(BV=12)"
		return only(t, findings(t, "zener-power", deck, duty, of("DZ1", study.MeanPower, watts)), study.MeanPower)
	}
	// Sold as 1 W at a lead of 50 degC: in air of 45 degC (200 - 45)/170 = 0.912 W, x 0.6 = 0.547 W.
	outcome(t, power("ambient 0C..45C", "1N4742A", 0.5), "proven", 0.547)
	f := power("ambient 0C..45C", "1N4742A", 0.6)
	outcome(t, f, "violated/major", 0.547)
	// 0.6/(0.6 x 0.912) = 1.097 W: next 1.3 W
	if f.Remedy != "a part with PD of 1.3 W (needs 1.1 W)" {
		t.Errorf("remedy %q", f.Remedy)
	}
	outcome(t, power("ambient 0C..45C", "1N4742A", 0.95), "violated/critical", 0.547)
	// A bare 0.5 W holds at 25 degC and falls to nothing at 150: at 75 degC 0.3 W are left, x 0.6 = 0.18 W.
	outcome(t, power("ambient 0C..75C\nrate DZ1 VZ=12V PD=0.5W", "DZX", 0.17), "proven", 0.18)
	outcome(t, power("ambient 0C..75C\nrate DZ1 VZ=12V PD=0.5W", "DZX", 0.2), "violated/major", 0.18)
	// With a stated knee of 60 degC and slope: 0.5 - 15 x 4 mW = 0.44 W.
	outcome(t, power("ambient 0C..75C\nrate DZ1 VZ=12V PD=0.5W TPD=60C kPD=4mW/K", "DZX", 0.2), "proven", 0.264)
	// Nothing known: 0.2/0.6 = 0.333 W, next 0.5 W.
	f = power("rate DZ1 VZ=12V", "DZX", 0.2)
	outcome(t, f, "unproven", whatever)
	if f.Needs == nil || f.Needs.Symbol != "PD" || f.Needs.NextStandard != 0.5 {
		t.Errorf("needs %+v", f.Needs)
	}
}

func TestZenerCurrent(t *testing.T) {
	run := func(stresses ...study.Stress) Finding {
		q := stresses[len(stresses)-1].Quantity
		return only(t, findings(t, "zener-power", zenerDeck, "", append([]study.Stress{of("DZ1", study.MeanPower, 0.1)}, stresses...)...), q)
	}
	// 1N4742A: IZM 76 mA.
	outcome(t, run(of("DZ1", study.PeakCurrent, 0.05)), "proven", 0.076)
	outcome(t, run(of("DZ1", study.PeakCurrent, 0.09)), "unproven", 0.076)
	outcome(t, run(of("DZ1", study.PeakCurrent, 0.09), of("DZ1", study.MeanReverseCurrent, 0.06)), "proven", 0.076)
	outcome(t, run(of("DZ1", study.PeakCurrent, 0.09), of("DZ1", study.MeanReverseCurrent, 0.08)), "violated/critical", 0.076)
}

func TestZenerTrough(t *testing.T) {
	run := func(kind string, least, peak float64) Finding {
		deck := "V1 in 0 24\nR1 in out 470\nDZ1 0 out " + kind + "\n.model DZX D(BV=12)"
		return only(t, findings(t, "zener-regulation", deck, "rate DZ1 VZ=12V", of("DZ1", study.MinCurrent, least), of("DZ1", study.PeakCurrent, peak)), "")
	}
	// 1N4742A: IZK 0.25 mA.
	outcome(t, run("1N4742A", 1e-3, 0.03), "proven", 0.25e-3)
	outcome(t, run("1N4742A", 0.2e-3, 0.03), "violated/major", 0.25e-3)
	outcome(t, run("1N4742A", 1e-9, 0.03), "violated/critical", 0.25e-3)
	// One that never conducts is a clamp, or starved: neither is proven.
	outcome(t, run("1N4742A", 1e-12, 1e-9), "unproven", whatever)
	// Without IZK only a current that is gone can be judged.
	outcome(t, run("DZX", 0, 0.03), "violated/critical", whatever)
	f := run("DZX", 1e-3, 0.03)
	outcome(t, f, "unproven", whatever)
	if !f.Floor || f.Needs == nil || f.Needs.Symbol != "IZK" || f.Needs.Value != 1e-3 {
		t.Errorf("needs %+v", f.Needs)
	}
}
