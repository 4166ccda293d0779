package report

import (
	"bytes"
	"fmt"
	"strings"
	"testing"

	"railproof/checks"
)

// changed is the bench supply after an edit: D1 got worse, the headroom better but still critical, C1 is rated
// and proven, V1 stays open, the zener is beyond its limit, and the remark is gone.
func changed(t testing.TB) *checks.Result {
	r := benchResult(t)
	r.File = "elsewhere/supply.cir"
	r.Findings = r.Findings[:len(r.Findings)-1]
	for k := range r.Findings {
		f := &r.Findings[k]
		f.At.Line += 2
		switch {
		case f.Element == "D1":
			f.Margin = -0.2
		case f.Check == "regulator-headroom":
			f.Margin = -0.1
		case f.Element == "C1":
			f.Verdict, f.Needs = checks.Proven, nil
		case f.Check == "zener-power":
			f.Verdict, f.Severity, f.Margin = checks.Violated, checks.Critical, -0.3
		}
	}
	return r
}

func compared(t testing.TB, gate string) *Comparison {
	t.Helper()
	after := New([]Input{{File: "elsewhere/supply.cir", Result: changed(t)}}, Options{Version: "test", Gate: gateAt(t, "critical"), Now: day})
	c, err := CompareReports("old.json", written(t, benchReport(t), "json", Style{}), "new.json", written(t, after, "json", Style{}), gateAt(t, gate), false)
	if err != nil {
		t.Fatal(err)
	}
	return c
}

func TestCompare(t *testing.T) {
	c := compared(t, "critical")
	var got []string
	for _, d := range c.Changes {
		f := d.New
		if f == nil {
			f = d.Old
		}
		got = append(got, fmt.Sprintf("%s %s %s", d.Change, f.Check, f.Element))
	}
	want := "new zener-power DZ1; worse diode-reverse-voltage D1; better regulator-headroom R1; cleared capacitor-voltage C1; cleared after-end "
	if strings.Join(got, "; ") != want {
		t.Errorf("changes %s", strings.Join(got, "; "))
	}
	if c.Unchanged != 4 { // D2, D3, D4 and V1
		t.Errorf("%d unchanged, want 4", c.Unchanged)
	}
	if c.Exit != ExitViolated || c.Gate.Stops != 1 {
		t.Errorf("exit %d with %d stops; a new critical violation must stop", c.Exit, c.Gate.Stops)
	}
	if c := compared(t, "major"); c.Gate.Stops != 2 {
		t.Errorf("%d stops at major, want the new critical one and the worse major one", c.Gate.Stops)
	}
	if c := compared(t, "never"); c.Exit != ExitPassed {
		t.Errorf("exit %d at never", c.Exit)
	}
	var text, document bytes.Buffer
	if err := c.Write(&text, "text", Style{}); err != nil {
		t.Fatal(err)
	}
	golden(t, "compare.txt", text.Bytes())
	if err := c.Write(&document, "json", Style{}); err != nil {
		t.Fatal(err)
	}
	if err := validate(schemaOf(t, "comparison-1"), document.Bytes()); err != nil {
		t.Error(err)
	}
}

// A report compared with itself shows no change and passes every gate.
func TestCompareWithItself(t *testing.T) {
	text := written(t, benchReport(t), "json", Style{})
	c, err := CompareReports("a", text, "b", text, gateAt(t, "minor"), false)
	if err != nil || len(c.Changes) != 0 || c.Exit != ExitPassed || c.Unchanged != 8 {
		t.Errorf("%d changes, %d unchanged, exit %d, %v", len(c.Changes), c.Unchanged, c.Exit, err)
	}
}

// Changes that read the same on the diodes of a bridge are one entry, and a report judged by another policy says so.
func TestCompareOfPolicies(t *testing.T) {
	milder := benchResult(t)
	milder.PolicyVersion = "rating 1111"
	for k := range milder.Findings {
		if f := &milder.Findings[k]; f.Check == "diode-reverse-voltage" {
			f.Verdict, f.Severity, f.Margin = checks.Proven, "", 0.1
		}
	}
	report := New([]Input{{File: milder.File, Result: milder}}, Options{Now: day})
	c, err := CompareReports("old.json", written(t, report, "json", Style{}), "new.json", written(t, benchReport(t), "json", Style{}), Gate{}, false)
	if err != nil {
		t.Fatal(err)
	}
	if len(c.Judges) != 1 || c.Judges[0].Old.Policy != "rating 1111" || c.Judges[0].New.Policy != "common 0000" {
		t.Errorf("judged by %+v", c.Judges)
	}
	var text, document bytes.Buffer
	if err := c.WriteText(&text, false); err != nil {
		t.Fatal(err)
	}
	if err := c.WriteJSON(&document); err != nil {
		t.Fatal(err)
	}
	for _, want := range []string{"policy rating 1111, now\n  common 0000", "NEW       D1..D4  peak reverse voltage", "bench/supply.cir:3, 4, 5, 6", "new: 4 "} {
		if !strings.Contains(text.String(), want) {
			t.Errorf("%q is missing:\n%s", want, text.String())
		}
	}
	if err := validate(schemaOf(t, "comparison-1"), document.Bytes()); err != nil {
		t.Error(err)
	}
}

// rubbed is the bench supply after its diode rating was taken away: D1 is no longer judged.
func rubbed(t testing.TB) *checks.Result {
	r := benchResult(t)
	for k := range r.Findings {
		if f := &r.Findings[k]; f.Element == "D1" {
			f.Verdict, f.Severity, f.Rating, f.Limit, f.Margin, f.Reason = checks.Unproven, "", nil, nil, 0, "no rating VRRM is known"
		}
	}
	return r
}

// A gate cannot be opened by taking a rating away: a violation that is no longer judged is worse, and new
// against a baseline.
func TestLostJudgement(t *testing.T) {
	before := written(t, benchReport(t), "json", Style{})
	after := written(t, New([]Input{{File: "bench/supply.cir", Result: rubbed(t)}}, Options{Now: day}), "json", Style{})
	c, err := CompareReports("old.json", before, "new.json", after, gateAt(t, "critical"), false)
	if err != nil {
		t.Fatal(err)
	}
	if len(c.Changes) != 1 || c.Changes[0].Change != ChangeWorse || c.Exit != ExitUnproven {
		t.Errorf("changes %+v, exit %d; want one worse and exit 3", c.Changes, c.Exit)
	}
	var text bytes.Buffer
	if err := c.WriteText(&text, false); err != nil {
		t.Fatal(err)
	}
	if words := strings.Join(strings.Fields(text.String()), " "); !strings.HasSuffix(words, "0 violations, 1 headline check unproven") {
		t.Errorf("the last line does not say why: %s", words)
	}
	base, err := ReadBaseline("old.json", before)
	if err != nil {
		t.Fatal(err)
	}
	o := Options{Gate: gateAt(t, "critical"), Now: day, Baseline: base, NewOnly: true}
	if r := New([]Input{{File: "bench/supply.cir", Result: rubbed(t)}}, o); r.Exit != ExitUnproven {
		t.Errorf("exit %d against the baseline, want 3", r.Exit)
	}
	// What was unproven in the baseline already is no news, and the last word does not call it allowed.
	if o.Baseline, err = ReadBaseline("new.json", after); err != nil {
		t.Fatal(err)
	}
	r := New([]Input{{File: "bench/supply.cir", Result: rubbed(t)}}, o)
	if _, why := r.Outcome(); r.Exit != ExitPassed || !strings.Contains(why, "nothing new violates it; open as before: 2 headline checks unproven") {
		t.Errorf("exit %d, %q", r.Exit, why)
	}
}

func TestCompareRefuses(t *testing.T) {
	good := written(t, benchReport(t), "json", Style{})
	bad := written(t, badReport(t), "json", Style{})
	for name, pair := range map[string][2][]byte{
		"no JSON": {[]byte("{"), good}, "another schema": {[]byte(`{"schema":"railproof-stress/1"}`), good}, "unread files": {good, bad}, "unread before": {bad, good},
	} {
		if _, err := CompareReports("a", pair[0], "b", pair[1], Gate{}, false); err == nil {
			t.Errorf("%s: no error", name)
		}
	}
}

// With a baseline of the old report, what it has is unchanged, and the gate may look at new findings only.
func TestBaseline(t *testing.T) {
	base, err := ReadBaseline("old.json", written(t, benchReport(t), "json", Style{}))
	if err != nil {
		t.Fatal(err)
	}
	draw := func(r *checks.Result, newOnly bool) *Report {
		return New([]Input{{File: r.File, Result: r}}, Options{Gate: gateAt(t, "critical"), Now: day, Baseline: base, NewOnly: newOnly})
	}
	same := draw(benchResult(t), true)
	if same.Exit != ExitPassed {
		t.Errorf("nothing is new, yet exit %d", same.Exit)
	}
	for _, f := range same.Files[0].Findings {
		want := State("")
		if f.Verdict == checks.Violated || f.Verdict == checks.Unproven {
			want = IsUnchanged
		}
		if f.State != want {
			t.Errorf("%s on %s is %q, want %q", f.Check, f.Element, f.State, want)
		}
	}
	if r := draw(benchResult(t), false); r.Exit != ExitViolated {
		t.Errorf("without new-only an old violation stops too; exit %d", r.Exit)
	}
	r := draw(changed(t), true)
	if r.Exit != ExitViolated || r.Gate.Stops != 1 {
		t.Errorf("a new critical violation: exit %d, %d stops", r.Exit, r.Gate.Stops)
	}
	// A violation that was milder in the baseline is new.
	graver := benchResult(t)
	graver.Findings[0].Severity = checks.Critical
	if r := draw(graver, true); r.Exit != ExitViolated {
		t.Errorf("a violation that became critical passed: exit %d", r.Exit)
	}
	if err := validate(schemaOf(t, "report-1"), written(t, r, "json", Style{})); err != nil {
		t.Error(err)
	}
}

func TestPairFiles(t *testing.T) {
	files := func(names ...string) []jsonFile {
		var list []jsonFile
		for _, n := range names {
			list = append(list, jsonFile{File: n})
		}
		return list
	}
	for _, c := range []struct {
		before, after []jsonFile
		want          string
	}{
		{files("a.cir", "b.cir"), files("b.cir", "a.cir"), "b.cir=b.cir a.cir=a.cir"},
		{files("x/a.cir", "x/b.cir"), files("y/a.cir", "y/c.cir"), "x/a.cir=y/a.cir -=y/c.cir x/b.cir=-"},
		{files("old.cir"), files("new.cir"), "old.cir=new.cir"},
		{files("x/a.cir", "y/a.cir"), files("z/a.cir"), "-=z/a.cir x/a.cir=- y/a.cir=-"},
	} {
		var got []string
		for _, p := range pairFiles(c.before, c.after) {
			name := [2]string{"-", "-"}
			for k, f := range p {
				if f != nil {
					name[k] = f.File
				}
			}
			got = append(got, name[0]+"="+name[1])
		}
		if strings.Join(got, " ") != c.want {
			t.Errorf("%v and %v: %v, want %s", c.before, c.after, got, c.want)
		}
	}
}
