package checks

import (
	"math"
	"strings"
	"testing"

	"railproof/checks/study"
	"railproof/netlist"
)

func TestFuseSurge(t *testing.T) {
	secondary := "V1 ac 0 SIN(0 20 50)\nRF1 ac b 0.1\nD1 b out 1N4001\nC1 out 0 470u"
	primary := "V1 l 0 SIN(0 325.27 50)\nRF1 l p 1\nL1 p 0 10\nL2 s 0 0.05\nK1 L1 L2 0.99\nD1 s out 1N4001\nC1 out 0 470u"
	run := func(deck, duty string, stresses ...study.Stress) Finding {
		return only(t, findings(t, "fuse-surge", deck, duty, stresses...), "")
	}
	const winding = "winding V1 as-drawn\n"
	// T 500 mA: 1.4 A2s at 10 ms and 3.1 A2s at 10 IN are published; the smaller counts.
	const fuse = "rate RF1 IN=0.5A family=T-250V\n"
	outcome(t, run(secondary, winding+fuse, cold("RF1", study.SurgeI2t, 1.3)), "proven", 1.4)
	outcome(t, run(secondary, winding+fuse, cold("RF1", study.SurgeI2t, 1.5)), "violated/critical", 1.4)
	outcome(t, run(secondary, winding+"rate RF1 IN=0.5A I2t=2A2s", cold("RF1", study.SurgeI2t, 1.5)), "proven", 2)
	outcome(t, run(secondary, winding+"rate RF1 IN=0.45A", cold("RF1", study.SurgeI2t, 1.5)), "unproven", whatever)
	outcome(t, run(secondary, winding+fuse), "unproven", whatever)
	// In the primary the magnetising inrush counts: a half sine of 12 A and 10 ms is 12^2 x 10 ms/2 = 0.72 A2s.
	const line = "line V1 230V -10%..+10% 50Hz\n"
	f := run(primary, line+fuse, cold("RF1", study.SurgeI2t, 0.6))
	outcome(t, f, "unproven", 1.4)
	if f.Needs == nil || f.Needs.Statement != "rate L1 Iinrush=...A" {
		t.Errorf("needs %+v", f.Needs)
	}
	f = run(primary, line+fuse+"rate L1 Iinrush=12A", cold("RF1", study.SurgeI2t, 0.6))
	outcome(t, f, "proven", 1.4)
	if !near(f.Stress.Value, 1.32, 1e-9) {
		t.Errorf("%g A2s, want 0.6 + 0.72", f.Stress.Value)
	}
	outcome(t, run(primary, line+fuse+"rate L1 Iinrush=12A", cold("RF1", study.SurgeI2t, 0.8)), "violated/critical", 1.4)
}

func TestFuseClearsAShort(t *testing.T) {
	deck := "V1 ac 0 SIN(0 20 50)\nRF1 ac b 0.1\nD1 b out 1N4001\nC1 out 0 470u"
	run := func(duty string, short float64) Finding {
		return only(t, findings(t, "fuse-current", deck, "winding V1 as-drawn\nrate RF1 IN=0.5A family=T-250V "+duty, of("RF1", study.RMSCurrent, 0.3), of("RF1", study.ShortCurrent, short)), study.ShortCurrent)
	}
	// It opens for certain from 2.1 x 0.5 A = 1.05 A.
	outcome(t, run("", 0.9), "violated/major", 1.05)
	outcome(t, run("", 1.2), "proven", 1.05)
	outcome(t, run("IBC=35A", 50), "violated/major", 35)
	outcome(t, run("IBC=35A", 30), "proven", 1.05)
}

func TestWindingDC(t *testing.T) {
	deck := "V1 ac 0 SIN(0 20 50)\nD1 ac out 1N4001\nC1 out 0 470u"
	run := func(dc float64) Finding {
		return only(t, findings(t, "winding-current", deck, "winding V1 12V 1A regulation=10%", of("V1", study.RMSCurrent, 0.5), of("V1", study.DCCurrent, dc)), study.DCCurrent)
	}
	// A twentieth of 1 A.
	outcome(t, run(0.04), "proven", 0.05)
	outcome(t, run(0.06), "violated/minor", 0.05)
	// The halves of a centre-tap carry half the load each, one against the other.
	halves := "V1 a 0 SIN(0 20 50)\nV2 0 b SIN(0 20 50)\nD1 a out 1N4001\nD2 b out 1N4001\nC1 out 0 470u\nRL out 0 100"
	list := findings(t, "winding-current", halves, "winding V1 12V 1A regulation=10%\nwinding V2 12V 1A regulation=10%", of("V1", study.RMSCurrent, 0.5), of("V1", study.DCCurrent, 0.3))
	for _, f := range list {
		if f.Stress != nil && f.Stress.Quantity == study.DCCurrent {
			t.Errorf("found %s", show(f))
		}
	}
}

func TestChokeSaturation(t *testing.T) {
	deck := "V1 in 0 20\nL1 in out 10m\nC1 out 0 470u\nRL out 0 10"
	list := findings(t, "winding-current", deck, "rate L1 Irms=2A Isat=3A", of("L1", study.RMSCurrent, 1.9), of("L1", study.PeakCurrent, 3.5))
	outcome(t, only(t, list, study.RMSCurrent), "proven", 2)
	outcome(t, only(t, list, study.PeakCurrent), "violated/critical", 3)
}

func TestInputChoke(t *testing.T) {
	bridge := "V1 a b SIN(0 20 50)\nD1 a p 1N4001\nD2 b p 1N4001\nD3 n a 1N4001\nD4 n b 1N4001\nRL out 0 100\nC1 out 0 470u\n"
	for _, c := range []struct {
		what, deck string
		stress     study.Stress
		want       string
	}{
		{"positive rail", bridge + "L1 p out 1\nR9 n 0 0", of("L1", study.MinCurrent, 0.01), "proven"},
		{"positive rail, current gone", bridge + "L1 p out 1\nR9 n 0 0", of("L1", study.MinCurrent, 0.0001), "violated/major"},
		{"drawn from the load", bridge + "L1 out p 1\nR9 n 0 0", of("L1", study.LeastCurrent, 0.01), "proven"},
		{"drawn from the load, not solved", bridge + "L1 out p 1\nR9 n 0 0", of("L1", study.MinCurrent, -0.5), "unproven"},
		{"negative side", bridge + "L1 0 n 1\nR9 p out 0", of("L1", study.MinCurrent, 0.01), "proven"},
		{"behind a capacitor", bridge + "L1 p out 1\nR9 n 0 0\nC9 p 0 100u", of("L1", study.MinCurrent, 0), ""},
	} {
		list := findings(t, "choke-inductance", c.deck, "winding V1 as-drawn", c.stress, of("L1", study.PeakCurrent, 0.3))
		if c.want == "" {
			if len(list) != 0 {
				t.Errorf("%s: %d findings", c.what, len(list))
			}
			continue
		}
		f := only(t, list, "")
		t.Log(c.what)
		outcome(t, f, c.want, whatever)
	}
}

func TestRail(t *testing.T) {
	run := func(least, most float64) (Finding, Finding) {
		list := findings(t, "rail-voltage", fixedDeck, "rail out 11.4V..12.6V", of("node:out", study.MinVoltage, least), of("node:out", study.MaxVoltage, most))
		return only(t, list, study.MinVoltage), only(t, list, study.MaxVoltage)
	}
	low, high := run(11.5, 12.5)
	outcome(t, low, "proven", 11.4)
	outcome(t, high, "proven", 12.6)
	low, high = run(11.3, 12.7)
	outcome(t, low, "violated/critical", 11.4)
	outcome(t, high, "violated/critical", 12.6)
	// A range equal to the tolerance of the regulator holds: rounding is none of the circuit's.
	low, high = run(11.39999, 12.60001)
	outcome(t, low, "proven", 11.4)
	outcome(t, high, "proven", 12.6)
	for _, f := range findings(t, "rail-voltage", fixedDeck, "rail out 11.4V..12.6V") {
		outcome(t, f, "unproven", whatever)
	}
	f := only(t, findings(t, "rail-ripple", fixedDeck, "rail out 11.4V..12.6V ripple=10mV", of("node:out", study.RipplePeakToPeak, 0.012), of("node:out", study.RippleFactor, 0.0003)), "")
	outcome(t, f, "violated/major", 0.01)
	if f.Element != "node:out" || f.Note != "ripple factor 0.03 %" {
		t.Errorf("%s", show(f))
	}
}

// What a regulator lets through: 7812, 55 dB at least, 562 times; 2.81 V at its input make 5 mV, 7 mV in all with 2 mV of
// its own; a stated rejection of 100 makes 28.1 mV; a regulator whose rejection nobody states proves nothing.
func TestRippleThroughARegulator(t *testing.T) {
	run := func(duty string) Finding {
		return only(t, findings(t, "rail-ripple", fixedDeck, "rail out 11.4V..12.6V ripple=10mV\n"+duty,
			of("node:out", study.RipplePeakToPeak, 0.002), of("node:in", study.RipplePeakToPeak, 2.81)), "")
	}
	f := run("")
	outcome(t, f, "proven", 0.01)
	if math.Abs(f.Stress.Value-7e-3) > 0.02e-3 {
		t.Errorf("%g V, expected 7 mV: %s", f.Stress.Value, f.Note)
	}
	f = run("rate X1 PSRRmin=100")
	outcome(t, f, "violated/major", 0.01)
	if math.Abs(f.Stress.Value-30.1e-3) > 0.1e-3 {
		t.Errorf("%g V, expected 30.1 mV", f.Stress.Value)
	}
	plain := strings.Replace(fixedDeck, "LM7812", "RAIL12", 1)
	f = only(t, findings(t, "rail-ripple", plain, "rail out 11.4V..12.6V ripple=10mV\nrate X1 VOUT=12V VDO=2V",
		of("node:out", study.RipplePeakToPeak, 0.002), of("node:in", study.RipplePeakToPeak, 2.81)), "")
	outcome(t, f, "unproven", whatever)
	if f.Needs == nil || f.Needs.Symbol != "PSRRmin" || f.Needs.Value != 352 {
		t.Errorf("%+v; expected 2.81 V/8 mV = 352", f.Needs) // rounded up
	}
}

func TestOutputShort(t *testing.T) {
	deck := "V1 in 0 10\nR1 in out 100\nRL out 0 1k"
	// 11 V across 95 ohm: 1.27 W, beyond 0.5 W: an advisory finding.
	f := only(t, findings(t, "output-short", deck, "rate R1 P70=0.5W", of("R1", study.ShortPower, 1.27)), "")
	outcome(t, f, "violated/minor", 0.5)
	outcome(t, only(t, findings(t, "output-short", deck, "rate R1 P70=2W", of("R1", study.ShortPower, 1.27)), ""), "proven", 2)
	outcome(t, only(t, findings(t, "output-short", deck, ""), ""), "unproven", whatever)
}

func TestTransistorBeyondItsControlRatings(t *testing.T) {
	deck := "V1 in 0 20\nVB b 0 10\nQ1 in b out QN\nRL out 0 50\n.model QN NPN(IS=1e-14 BF=100)"
	list := findings(t, "transistor-voltage", deck, "rate Q1 VCEO=40V VEBO=5V", of("Q1", study.MaxVCE, 20), of("Q1", study.MaxVEB, 6))
	outcome(t, only(t, list, study.MaxVCE), "proven", 40)
	outcome(t, only(t, list, study.MaxVEB), "violated/critical", 5)
	list = findings(t, "transistor-voltage", deck, "rate Q1 VCEO=40V VEBO=5V", of("Q1", study.MaxVCE, 20))
	if len(list) != 2 || list[1].Verdict != Unproven {
		t.Errorf("%d findings, want an unproven VEBO as well", len(list))
	}
}

// PD 40 W at 25 degC of the case, Tj 150 degC: at 40 + 10 W x (1 + 5) = 100 degC there are 40 x 50/125 = 16 W left.
func TestSafeArea(t *testing.T) {
	deck := "V1 in 0 20\nVB b 0 10\nQ1 in b out QN\nRL out 0 50\n.model QN NPN(IS=1e-14 BF=100)"
	const duty = "cooling Q1 5K/W\nrate Q1 Tj=150C RthJC=2K/W PD=40W"
	run := func(watts float64) []Finding {
		return findings(t, "transistor-safe-area", deck, duty, of("Q1", study.PeakPower, watts), of("Q1", study.MaxVCE, 20))
	}
	f := only(t, run(10), "")
	outcome(t, f, "unproven", 16)
	if !strings.Contains(f.Reason, "10 W at up to 20 V of VCE") {
		t.Errorf("reason %q", f.Reason)
	}
	// 40 + 14 x 6 = 124 degC leave 8.3 W.
	outcome(t, only(t, run(14), ""), "violated/critical", 8.32)
	if list := run(0.05); len(list) != 0 {
		t.Errorf("%d findings at 50 mW", len(list))
	}
}

func TestDoubtfulAmplitude(t *testing.T) {
	f := doubtfulAmplitude("V1", 230)
	// 230/sqrt(2) = 162.6; 230 x sqrt(2) = 325.3
	if want := "an amplitude of 230 V is a peak, that is 163 V rms; if 230 V rms are meant, the amplitude is 325 V"; f.Reason != want {
		t.Errorf("reason %q", f.Reason)
	}
	if want := "line V1 230V ..., with the amplitude 325.3; or winding V1 as-drawn"; f.Needs.Statement != want {
		t.Errorf("needs %q", f.Needs.Statement)
	}
}

func TestBleeder(t *testing.T) {
	// 2 s/(1.2 x 47 uF x ln(153.8/60)) = 37.66 kohm, to two figures downwards
	if got := Bleeder(47e-6, 153.8, 60, 2); !near(got, 37e3, 1e-9) {
		t.Errorf("%g ohm, want 37 kohm", got)
	}
}

func TestUnsolvedNamesItsPart(t *testing.T) {
	p := passOn(t, "unsolved", "V1 in 0 5\nR1 in 0 1k", "")
	p.Table.Unsolved = []study.UnsolvedIsland{
		{Elements: []string{"R1", "b", "c", "d", "e", "f", "g", "h", "i", "j"}, Why: "it oscillates", When: "low line"},
		{Why: "no network could be built", When: "high line"},
	}
	p.check.run(p)
	if len(p.findings) != 2 {
		t.Fatalf("%d findings, want 2", len(p.findings))
	}
	f := p.findings[0]
	if f.Element != "R1" || f.At.Line != 3 || f.Reason != "it oscillates (low line)" || !strings.HasSuffix(f.Note, "h and 2 more") {
		t.Errorf("%s at %v", show(f), f.At)
	}
	if p.findings[1].At.File == "" {
		t.Error("a finding without place")
	}
}

func TestRemarksBecomeFindings(t *testing.T) {
	for _, c := range []struct {
		name string
		kind netlist.RemarkKind
		want Severity
	}{
		{"value-suffix", netlist.RemarkValueSuffix, Major}, {"duplicate-name", netlist.RemarkDuplicateName, Major},
		{"library-not-read", netlist.RemarkLibraryNotRead, Minor}, {"after-end", netlist.RemarkAfterEnd, Minor}, {"model-note", netlist.RemarkModel, Minor},
	} {
		p := passOn(t, c.name, "V1 in 0 5\nR1 in 0 1k", "")
		p.Supply.Circuit.Remarks = []netlist.Remark{{Kind: netlist.RemarkAssumption, Text: "other"}, {Kind: c.kind, Element: "R1", Text: "this"}}
		p.check.run(p)
		f := only(t, p.findings, "")
		outcome(t, f, "violated/"+string(c.want), whatever)
		if f.Reason != "this" || f.Element != "R1" {
			t.Errorf("%s: %s", c.name, show(f))
		}
	}
}
