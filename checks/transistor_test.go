package checks

import (
	"testing"

	"railproof/checks/study"
)

const followerByNumber = "V1 in 0 20\nVB b 0 10\nQ1 in b out "

// Ratings of a row reach the checks as stated ones do. TIP31A: VCEO 60 V, VEBO 5 V, IC 3 A, Tj 150 degC.
func TestTransistorRatingsOfTheRow(t *testing.T) {
	deck := followerByNumber + "TIP31A\nRL out 0 50"
	list := findings(t, "transistor-voltage", deck, "", of("Q1", study.MaxVCE, 61), of("Q1", study.MaxVEB, 1))
	outcome(t, only(t, list, study.MaxVCE), "violated/critical", 60)
	outcome(t, only(t, list, study.MaxVEB), "proven", 5)
	outcome(t, only(t, findings(t, "transistor-current", deck, "", of("Q1", study.PeakCurrent, 2.5)), ""), "proven", 3)
	outcome(t, only(t, findings(t, "transistor-current", deck, "rate Q1 IC=2A", of("Q1", study.PeakCurrent, 2.5)), ""), "violated/critical", 2)
	// Free air: 40 + 2 W x 62.5 K/W = 165 degC; on a sink of 10 K/W 40 + 2 x (3.125 + 1 + 10) = 68 degC. Both against 150 - 25.
	outcome(t, only(t, findings(t, "transistor-junction-temperature", deck, "", of("Q1", study.MeanPower, 2)), ""), "violated/critical", 125)
	f := only(t, findings(t, "transistor-junction-temperature", deck, "cooling Q1 10K/W", of("Q1", study.MeanPower, 2)), "")
	outcome(t, f, "proven", 125)
	if !near(f.Stress.Value, 68.25, 1e-6) {
		t.Errorf("junction at %g degC, want 68.25", f.Stress.Value)
	}
}

// The safe area falls with the case, or with the air where PD is that of free air.
func TestSafeAreaOfTheRow(t *testing.T) {
	run := func(number, duty string, watts float64) Finding {
		return only(t, findings(t, "transistor-safe-area", followerByNumber+number+"\nRL out 0 50", duty, of("Q1", study.PeakPower, watts), of("Q1", study.MaxVCE, 20)), "")
	}
	// TIP31A, 40 W up to 25 degC of the case: 40 + 10 W x (1 + 4) = 90 degC leave 40 x 60/125 = 19.2 W.
	outcome(t, run("TIP31A", "cooling Q1 4K/W", 10), "unproven", 19.2)
	// 40 + 14 W x 5 = 110 degC leave 40 x 40/125 = 12.8 W.
	outcome(t, run("TIP31A", "cooling Q1 4K/W", 14), "violated/critical", 12.8)
	// BC547B, 0.5 W up to 25 degC of the air: at 40 degC 0.5 x 110/125 = 0.44 W.
	outcome(t, run("BC547B", "", 0.4), "unproven", 0.44)
	outcome(t, run("BC547B", "", 0.45), "violated/critical", 0.44)
}
