package report

import (
	"fmt"
	"math/rand/v2"
	"slices"
	"testing"
	"time"

	"pgregory.net/rapid"

	"railproof/checks"
	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

func TestTotalsAndGate(t *testing.T) {
	r := benchReport(t)
	want := Totals{Critical: 1, Major: 4, Minor: 1, Unproven: 2, Proven: 2, HeadlineUnproven: 1}
	if r.Totals != want {
		t.Errorf("totals %+v, want %+v", r.Totals, want)
	}
	if r.Gate.Passed || r.Gate.Stops != 1 || r.Exit != ExitViolated {
		t.Errorf("gate %+v exit %d, want one stop and exit 1", r.Gate, r.Exit)
	}
}

// The exit statuses of the product description: 2 beats 1 beats 3.
func TestExit(t *testing.T) {
	finding := func(check string, v checks.Verdict, s checks.Severity, headline bool) checks.Finding {
		return checks.Finding{Check: check, Element: "D1", Verdict: v, Severity: s, Headline: headline}
	}
	critical := finding("diode-reverse-voltage", checks.Violated, checks.Critical, true)
	major := finding("diode-reverse-voltage", checks.Violated, checks.Major, true)
	open := finding("diode-reverse-voltage", checks.Unproven, "", true)
	openAside := finding("diode-average-current", checks.Unproven, "", false)
	unsolved := finding("unsolved", checks.Unproven, "", false)
	proven := finding("diode-reverse-voltage", checks.Proven, "", true)
	bad := Input{File: "x", Diagnostics: []netlist.Diagnostic{{What: "broken"}}}
	missing := Input{File: "x", Failure: fmt.Errorf("no such file")}
	for _, c := range []struct {
		name     string
		gate     string
		allow    bool
		findings [][]checks.Finding
		more     []Input
		want     Exit
	}{
		{"proven", "critical", false, [][]checks.Finding{{proven}}, nil, 0},
		{"nothing to judge", "critical", false, [][]checks.Finding{{}}, nil, 0},
		{"critical at critical", "critical", false, [][]checks.Finding{{critical}}, nil, 1},
		{"major at critical", "critical", false, [][]checks.Finding{{major}}, nil, 0},
		{"major at major", "major", false, [][]checks.Finding{{major}}, nil, 1},
		{"critical at major: graver ones are implied", "major", false, [][]checks.Finding{{critical}}, nil, 1},
		{"critical at minor", "minor", false, [][]checks.Finding{{critical}}, nil, 1},
		{"critical at never", "never", false, [][]checks.Finding{{critical}}, nil, 0},
		{"unproven headline", "critical", false, [][]checks.Finding{{open}}, nil, 3},
		{"unproven headline at never", "never", false, [][]checks.Finding{{open}}, nil, 3},
		{"unproven headline allowed", "critical", true, [][]checks.Finding{{open}}, nil, 0},
		{"unproven other check", "critical", false, [][]checks.Finding{{openAside}}, nil, 0},
		{"unsolved island", "critical", false, [][]checks.Finding{{unsolved}}, nil, 3},
		{"one beats three", "critical", false, [][]checks.Finding{{open}, {critical}}, nil, 1},
		{"one beats three, allowed", "critical", true, [][]checks.Finding{{open}, {critical}}, nil, 1},
		{"two beats one", "critical", false, [][]checks.Finding{{critical}}, []Input{bad}, 2},
		{"two beats three", "critical", true, [][]checks.Finding{{open}}, []Input{missing}, 2},
		{"unread at never", "never", true, nil, []Input{missing}, 2},
	} {
		var inputs []Input
		for k, list := range c.findings {
			inputs = append(inputs, Input{File: fmt.Sprint("f", k), Result: &checks.Result{Findings: list}})
		}
		r := New(append(inputs, c.more...), Options{Gate: gateAt(t, c.gate), AllowUnproven: c.allow, Now: day})
		if r.Exit != c.want {
			t.Errorf("%s: exit %d, want %d", c.name, r.Exit, c.want)
		}
	}
}

func TestParseGate(t *testing.T) {
	for text, want := range map[string]string{
		"critical": "critical", "major": "critical, major", "critical,major": "critical, major",
		" Minor , critical": "critical, major, minor", "never": "never",
	} {
		if g := gateAt(t, text); g.String() != want {
			t.Errorf("gate %q is %q, want %q", text, g, want)
		}
	}
	for _, text := range []string{"", "severe", "never,major", "critical,"} {
		if _, err := ParseGate(text); err == nil {
			t.Errorf("gate %q was taken", text)
		}
	}
}

// Whatever the order in which findings arrive, the report is the same.
func TestOrderIsTotal(t *testing.T) {
	want := benchReport(t)
	rapid.Check(t, func(rt *rapid.T) {
		r := benchResult(t)
		seed := rapid.Uint64().Draw(rt, "seed")
		rand.New(rand.NewPCG(seed, 1)).Shuffle(len(r.Findings), func(a, b int) {
			r.Findings[a], r.Findings[b] = r.Findings[b], r.Findings[a]
		})
		got := New([]Input{{File: r.File, Result: r}}, Options{Version: "test", Gate: gateAt(t, "critical"), Now: day})
		for k, f := range got.Files[0].Findings {
			w := want.Files[0].Findings[k]
			if f.Check != w.Check || f.Element != w.Element || f.Fingerprint != w.Fingerprint {
				rt.Fatalf("finding %d is %s on %s, want %s on %s", k, f.Check, f.Element, w.Check, w.Element)
			}
		}
	})
}

// A fingerprint holds no line, value or file, tells check, element and quantity apart, and never repeats in a file.
func TestFingerprint(t *testing.T) {
	base := benchReport(t).Files[0].Findings
	moved := benchResult(t)
	for k := range moved.Findings {
		f := &moved.Findings[k]
		f.At.Line += 40
		f.At.File = "elsewhere.cir"
		if f.Stress != nil {
			s := *f.Stress
			s.Value *= 1.01
			f.Stress = &s
		}
	}
	moved.File = "elsewhere.cir"
	again := New([]Input{{File: moved.File, Result: moved}}, Options{Gate: gateAt(t, "critical"), Now: day}).Files[0].Findings
	seen := map[string]bool{}
	for k := range base {
		if base[k].Fingerprint != again[k].Fingerprint {
			t.Errorf("%s on %s: fingerprint changed with place and value", base[k].Check, base[k].Element)
		}
		if seen[base[k].Fingerprint] {
			t.Errorf("%s on %s: fingerprint repeats", base[k].Check, base[k].Element)
		}
		seen[base[k].Fingerprint] = true
	}
	same := []Finding{{Finding: checks.Finding{Check: "library-not-read"}}, {Finding: checks.Finding{Check: "library-not-read"}}}
	fingerprint(same)
	if same[0].Fingerprint == same[1].Fingerprint {
		t.Error("two like findings share a fingerprint")
	}
	// Known value: echo -n with the bytes 0 between the words, sha256, first twelve bytes.
	known := []Finding{{Finding: checks.Finding{Check: "diode-reverse-voltage", Element: "D1", Stress: &study.Stress{Quantity: study.PeakReverseVoltage}}}}
	fingerprint(known)
	if want := "rp1-f3183196dda57fcd4364801b"; known[0].Fingerprint != want {
		t.Errorf("fingerprint %s, want %s: a filed baseline would no longer match", known[0].Fingerprint, want)
	}
}

func TestConcessions(t *testing.T) {
	concession := func(target, ceiling, until string) netlist.Concession {
		v, err := quantity.Parse(ceiling, quantity.Volt)
		if err != nil {
			t.Fatal(err)
		}
		return netlist.Concession{Check: "diode-reverse-voltage", Element: 1, Target: target, Ceiling: v, Until: until, Reason: "review 12", At: netlist.Position{File: "s.duty", Line: 3, Column: 1}}
	}
	for _, c := range []struct {
		name       string
		concession netlist.Concession
		conceded   int
		findings   int    // of the check on concessions
		says       string // part of its reason, or of the note of the violation
	}{
		{"covers", concession("D1", "45V", "2030-12-31"), 1, 0, ""},
		{"covers on its last day", concession("D1", "45V", "2030-05-20"), 1, 0, ""},
		{"the day after", concession("D1", "45V", "2030-05-19"), 0, 1, "expired on 2030-05-19"},
		{"case of the name aside", concession("d1", "45V", "2030-12-31"), 1, 0, ""},
		{"worse than the ceiling", concession("D1", "41V", "2030-12-31"), 0, 0, "beyond its concession"},
		{"numerical error counts against the part", concession("D1", "41.80001V", "2030-12-31"), 0, 0, "beyond its concession"},
		{"no such finding", concession("DZ1", "45V", "2030-12-31"), 0, 1, "matches no finding"},
	} {
		r := benchResult(t)
		r.Duty.Concessions = []netlist.Concession{c.concession}
		rep := New([]Input{{File: r.File, Result: r}}, Options{Gate: gateAt(t, "major"), Now: day})
		if rep.Totals.Conceded != c.conceded || rep.Totals.Major != 4-c.conceded {
			t.Errorf("%s: %d conceded, %d major", c.name, rep.Totals.Conceded, rep.Totals.Major)
		}
		own, said := 0, c.says == ""
		for _, f := range rep.Files[0].Findings {
			if f.Check == ConcessionCheck.Name {
				own++
			}
			said = said || slices.ContainsFunc([]string{f.Reason, f.Note}, func(s string) bool { return c.says != "" && contains(s, c.says) })
		}
		if own != c.findings || !said {
			t.Errorf("%s: %d findings on the concession, want %d; said %q: %v", c.name, own, c.findings, c.says, said)
		}
	}
}

func TestConcessionOfUnprovenAndProven(t *testing.T) {
	for check, want := range map[string]string{"capacitor-voltage": "only a violation can be conceded", "zener-power": "is not needed"} {
		r := benchResult(t)
		target := map[string]string{"capacitor-voltage": "C1", "zener-power": "DZ1"}[check]
		r.Duty.Concessions = []netlist.Concession{{Check: check, Target: target, Ceiling: quantity.Value{Number: 100, Unit: quantity.Volt}, Until: "2031-01-01"}}
		rep := New([]Input{{File: r.File, Result: r}}, Options{Gate: gateAt(t, "critical"), Now: day})
		k := slices.IndexFunc(rep.Files[0].Findings, func(f Finding) bool { return f.Check == ConcessionCheck.Name })
		if k < 0 || !contains(rep.Files[0].Findings[k].Reason, want) {
			t.Errorf("%s: no finding that says %q", check, want)
		}
		if rep.Totals.Conceded != 0 {
			t.Errorf("%s was conceded", check)
		}
	}
}

// Of a lower limit the ceiling is how low the stress may go.
func TestConcessionOfFloor(t *testing.T) {
	for ceiling, conceded := range map[float64]int{1.4: 1, 1.5: 0} {
		r := benchResult(t)
		r.Duty.Concessions = []netlist.Concession{{Check: "regulator-headroom", Target: "R1", Ceiling: quantity.Value{Number: ceiling, Unit: quantity.Volt}, Until: "2031-01-01"}}
		rep := New([]Input{{File: r.File, Result: r}}, Options{Gate: gateAt(t, "critical"), Now: day})
		if rep.Totals.Conceded != conceded {
			t.Errorf("down to %g V: %d conceded, want %d", ceiling, rep.Totals.Conceded, conceded)
		}
	}
}

func TestExpiredIsJudgedByDay(t *testing.T) {
	late := time.Date(2030, 5, 20, 23, 59, 59, 0, time.UTC)
	if expired("2030-05-20", late) || !expired("2030-05-20", late.Add(time.Second)) {
		t.Error("a concession holds to the end of its last day, UTC, and no longer")
	}
	if !expired("some day", late) {
		t.Error("an unreadable day must not keep a concession alive")
	}
}
