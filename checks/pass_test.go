package checks

import (
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

// passOn prepares a check on a netlist whose stresses are given instead of solved.
func passOn(t *testing.T, name, deck, duty string, stresses ...study.Stress) *Pass {
	t.Helper()
	c, ok := Named(name)
	if !ok {
		t.Fatalf("no check %s", name)
	}
	file := filepath.Join(t.TempDir(), "case.cir")
	if err := os.WriteFile(file, []byte("case\n"+deck+"\n.end\n"), 0o644); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(strings.TrimSuffix(file, ".cir")+".duty", []byte(duty+"\n"), 0o644); err != nil {
		t.Fatal(err)
	}
	p, diagnostics, err := prepare(Options{Source: netlist.Source{File: file}})
	for _, d := range diagnostics {
		t.Error(d)
	}
	if err != nil || p == nil {
		t.Fatal(err)
	}
	return &Pass{Supply: p.supply, Policy: p.policy, Table: study.Gather(study.NewPlan(p.supply), stresses...), check: c}
}

// findings runs a check on a netlist whose stresses are given.
func findings(t *testing.T, name, deck, duty string, stresses ...study.Stress) []Finding {
	t.Helper()
	p := passOn(t, name, deck, duty, stresses...)
	p.check.run(p)
	return p.findings
}

// of is a stress in the steady state.
func of(element string, q study.Quantity, value float64) study.Stress {
	return study.Stress{Element: element, Quantity: q, Value: value, Phase: math.NaN(), Unit: quantity.One,
		Condition: study.Condition{Name: "high line, full load", Line: "high", Load: "full", Start: "steady"}}
}

// cold is a stress of a switch-on.
func cold(element string, q study.Quantity, value float64) study.Stress {
	s := of(element, q, value)
	s.Condition.Start = "cold"
	return s
}

// doubtful is a stress that proves nothing.
func doubtful(s study.Stress, why string) study.Stress {
	s.Unproven = why
	return s
}

// only is the finding on a quantity; with an empty one, the only finding.
func only(t *testing.T, list []Finding, q study.Quantity) Finding {
	t.Helper()
	var hits []Finding
	for _, f := range list {
		if q == "" || f.Stress != nil && f.Stress.Quantity == q {
			hits = append(hits, f)
		}
	}
	if len(hits) != 1 {
		for _, f := range list {
			t.Log(show(f))
		}
		t.Fatalf("%d findings on %q, want 1", len(hits), q)
	}
	return hits[0]
}

func near(got, want, tolerance float64) bool { return math.Abs(got-want) <= tolerance*math.Abs(want) }

// outcome holds a finding against a verdict/severity and a limit (NaN: not looked at).
func outcome(t *testing.T, f Finding, verdict string, limit float64) {
	t.Helper()
	got := string(f.Verdict)
	if f.Severity != "" {
		got += "/" + string(f.Severity)
	}
	if got != verdict {
		t.Errorf("%s, want %s: %s", got, verdict, show(f))
	}
	if !math.IsNaN(limit) {
		if f.Limit == nil {
			t.Errorf("no limit, want %g", limit)
		} else if !near(f.Limit.Value, limit, 1e-3) {
			t.Errorf("limit %g, want %g", f.Limit.Value, limit)
		}
	}
	if f.Verdict == Violated && f.Remedy == "" {
		t.Errorf("no remedy: %s", show(f))
	}
	if f.Verdict == Unproven && f.Reason == "" {
		t.Errorf("no reason: %s", show(f))
	}
}

// whatever is a limit that is not looked at.
var whatever = math.NaN()
