package checks

import (
	"math"
	"testing"

	"railproof/checks/policy"
	"railproof/checks/study"
	"railproof/netlist"
)

// Under every policy a maximum is held against a limit that is not above the rating, and every verdict has what it
// needs to be told.
func TestEveryPolicy(t *testing.T) {
	deck := "V1 ac 0 SIN(0 30 50)\nRF1 ac b 0.1\nD1 b in 1N4002\nC1 in 0 470u\nX1 in 0 out LM7812\nC2 out 0 1u\nR1 in z 470\nDZ1 0 z 1N4742A\nRL out 0 100"
	duty := "winding V1 21V 1A regulation=10%\nambient 0C..60C\nlife 20000h\nrate RF1 IN=1A family=T-250V\nrate R1 P70=2W\n" +
		"rate C1 UR=50V IR=1A category=105C endurance=2000h\nrail out 11.4V..12.6V ripple=10mV"
	stresses := []study.Stress{
		of("D1", study.PeakReverseVoltage, 66), of("D1", study.MeanCurrent, 0.3), of("D1", study.PeakCurrent, 2), of("D1", study.MeanPower, 0.3),
		cold("D1", study.SurgeCurrent, 20), cold("D1", study.SurgeI2t, 1), of("C1", study.MaxVoltage, 33), of("C1", study.MinVoltage, 0),
		of("C1", study.RippleCurrentEquivalent, 0.5), of("C2", study.MaxVoltage, 12), of("DZ1", study.MeanPower, 0.4), of("DZ1", study.PeakCurrent, 0.05),
		of("DZ1", study.MinCurrent, 0.01), of("R1", study.MeanPower, 0.8), of("R1", study.PeakVoltage, 21), of("X1", study.MinHeadroom, 1),
		of("X1", study.MaxInputVoltage, 33), of("X1", study.MeanPower, 2), of("X1", study.MaxOutputCurrent, 0.13), of("RF1", study.RMSCurrent, 0.8),
		cold("RF1", study.SurgeI2t, 1), of("V1", study.RMSCurrent, 0.8), of("node:out", study.MinVoltage, 11.5), of("node:out", study.MaxVoltage, 12.5),
	}
	for _, name := range policy.Names() {
		rules, err := policy.Named(name)
		if err != nil {
			t.Fatal(err)
		}
		judged := 0
		for _, c := range Catalogue() {
			p := passOn(t, c.Name, deck, duty, stresses...)
			p.Policy = rules
			c.run(p)
			for _, f := range p.findings {
				judged += coherent(t, name, f)
			}
		}
		if judged < 20 {
			t.Errorf("%s: only %d findings with numbers", name, judged)
		}
	}
}

// coherent holds a finding to what every finding must carry, and counts those with a stress and a limit.
func coherent(t *testing.T, policyName string, f Finding) int {
	t.Helper()
	fault := func(what string) { t.Errorf("%s, %s: %s: %s", policyName, f.Check, what, show(f)) }
	if f.Check == "" || f.Element == "" || f.At == (netlist.Position{}) {
		fault("no check, element or place")
	}
	switch f.Verdict {
	case Proven:
		if f.Severity != "" || f.Remedy != "" {
			fault("proven with a severity or a remedy")
		}
	case Violated:
		if f.Severity == "" || f.Remedy == "" {
			fault("violated without severity or remedy")
		}
	case Unproven:
		if f.Severity != "" || f.Reason == "" {
			fault("unproven with a severity or without a reason")
		}
	default:
		fault("no verdict")
	}
	if f.Stress == nil || f.Limit == nil || f.Verdict == Unproven {
		return 0
	}
	if math.IsNaN(f.Limit.Value) || f.Limit.Policy == "" || f.Limit.Rule == "" {
		fault("a limit without value, policy or rule")
	}
	if f.Rating != nil && !f.Floor && f.Limit.Value > f.Rating.Value {
		fault("a limit above the rating")
	}
	beyond := f.Stress.Value+f.Stress.Error > f.Limit.Value
	if f.Floor {
		beyond = f.Stress.Value-f.Stress.Error < f.Limit.Value
	}
	if beyond != (f.Verdict == Violated) || beyond != (f.Margin < 0) {
		fault("verdict, margin and numbers disagree")
	}
	return 1
}
