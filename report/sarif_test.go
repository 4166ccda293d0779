package report

import (
	"bytes"
	"encoding/json"
	"net/url"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/santhosh-tekuri/jsonschema/v6"

	"railproof/netlist"
	"railproof/netlist/quantity"
)

// concededReport is the bench report with the headroom violation conceded.
func concededReport(t testing.TB) *Report {
	r := benchResult(t)
	r.Duty.Concessions = []netlist.Concession{{
		Check: "regulator-headroom", Target: "R1", Ceiling: quantity.Value{Number: 1, Unit: quantity.Volt},
		Until: "2031-01-01", Reason: "review 12", At: netlist.Position{File: "bench/supply.duty", Line: 4, Column: 1},
	}}
	return New([]Input{{File: r.File, Result: r}}, Options{Version: "test", Gate: gateAt(t, "critical"), Now: day})
}

func badReport(t testing.TB) *Report {
	return New([]Input{
		{File: "bad file.cir", Diagnostics: []netlist.Diagnostic{{At: netlist.Position{File: "bad file.cir", Line: 3, Column: 7}, What: "value 1x", Expected: "a number"}}},
		{File: "/gone.cir", Failure: errGone{}},
	}, Options{Version: "test", Gate: gateAt(t, "critical"), Now: day})
}

// sarifSchema is where the OASIS schema of SARIF 2.1.0 may stand; RAILPROOF_SARIF_SCHEMA names another place.
func sarifSchema() string {
	if p := os.Getenv("RAILPROOF_SARIF_SCHEMA"); p != "" {
		return p
	}
	return "../../shared/schemas/sarif-schema-2.1.0.json"
}

func TestSARIFAgainstTheOASISSchema(t *testing.T) {
	text, err := os.ReadFile(sarifSchema())
	if err != nil {
		t.Skipf("THE SARIF OUTPUT WAS NOT VALIDATED: the OASIS schema is not at %s; name its place in RAILPROOF_SARIF_SCHEMA", sarifSchema())
	}
	document, err := jsonschema.UnmarshalJSON(bytes.NewReader(text))
	if err != nil {
		t.Fatal(err)
	}
	c := jsonschema.NewCompiler()
	if err := c.AddResource("urn:sarif", document); err != nil {
		t.Fatal(err)
	}
	s, err := c.Compile("urn:sarif")
	if err != nil {
		t.Fatal(err)
	}
	for _, r := range []*Report{benchReport(t), concededReport(t), badReport(t), New(nil, Options{})} {
		if err := validate(s, written(t, r, "sarif", Style{})); err != nil {
			t.Error(err)
		}
	}
	if validate(s, []byte(`{"version":"2.1.0","runs":[{}]}`)) == nil {
		t.Error("the schema takes a run without a tool")
	}
}

// What the standard asks for beyond its schema: level none unless kind is fail, rule indices that point at
// their rule, relative URIs with a base, no time stamp, results present though empty.
func TestSARIFRules(t *testing.T) {
	for _, r := range []*Report{benchReport(t), concededReport(t), badReport(t), New(nil, Options{})} {
		text := written(t, r, "sarif", Style{})
		var log sarifLog
		if err := json.Unmarshal(text, &log); err != nil {
			t.Fatal(err)
		}
		if strings.Contains(string(text), "TimeUtc") {
			t.Error("a time stamp stands in the log")
		}
		run := log.Runs[0]
		if run.Results == nil || run.ColumnKind != "unicodeCodePoints" {
			t.Error("results or columnKind are missing")
		}
		for _, x := range run.Results {
			if (x.Kind == "fail") != (x.Level != "none") {
				t.Errorf("%s: kind %s with level %s", x.RuleID, x.Kind, x.Level)
			}
			if run.Tool.Driver.Rules[x.RuleIndex].ID != x.RuleID {
				t.Errorf("%s: rule index %d is %s", x.RuleID, x.RuleIndex, run.Tool.Driver.Rules[x.RuleIndex].ID)
			}
			if !strings.HasPrefix(x.Fingerprints[fingerprintKey], "rp1-") {
				t.Errorf("%s: fingerprints %v", x.RuleID, x.Fingerprints)
			}
			for _, l := range x.Locations {
				if a := l.Physical.Artifact; a.BaseID != sourceRoot || strings.Contains(a.URI, "\\") || strings.HasPrefix(a.URI, "/") {
					t.Errorf("%s: location %+v", x.RuleID, a)
				}
			}
		}
	}
}

func TestSARIFKinds(t *testing.T) {
	var log sarifLog
	if err := json.Unmarshal(written(t, concededReport(t), "sarif", Style{}), &log); err != nil {
		t.Fatal(err)
	}
	got := map[string]int{}
	for _, x := range log.Runs[0].Results {
		key := x.Kind + " " + x.Level
		if len(x.Suppressions) > 0 {
			key += " suppressed: " + x.Suppressions[0].Justification
		}
		got[key]++
	}
	want := map[string]int{"fail warning": 4, "fail note": 1, "open none": 2, "fail error suppressed: until 2031-01-01, up to 1 V: review 12": 1}
	for key, n := range want {
		if got[key] != n {
			t.Errorf("%d results %q, want %d; all: %v", got[key], key, n, got)
		}
	}
	if n := log.Runs[0].Invocations[0].Notifications; len(n) != 2 {
		t.Errorf("%d notifications, want one for each unproven finding", len(n))
	}
}

// A path becomes a URI reference that resolves to it and to nothing else (RFC 3986, 4.2: a first segment with
// a colon must not stand bare).
func TestSARIFArtifact(t *testing.T) {
	for path, want := range map[string]string{
		"boards/a.cir": "boards/a.cir", "./a.cir": "a.cir", "a:b.cir": "./a:b.cir", "100%?#.cir": "100%25%3F%23.cir", "../a.cir": "../a.cir",
	} {
		a := sarifArtifactOf(path)
		if a.URI != want || a.BaseID != sourceRoot {
			t.Errorf("%s became %+v, want %s", path, a, want)
		}
		u, err := url.Parse(a.URI)
		if err != nil || u.Scheme != "" || filepath.Clean(u.Path) != filepath.Clean(path) {
			t.Errorf("%s is read back as %v, %v", a.URI, u, err)
		}
	}
}

func TestSARIFOfUnreadFiles(t *testing.T) {
	var log sarifLog
	if err := json.Unmarshal(written(t, badReport(t), "sarif", Style{}), &log); err != nil {
		t.Fatal(err)
	}
	call := log.Runs[0].Invocations[0]
	if call.Successful || call.ExitCode != 2 || len(call.Notifications) != 2 {
		t.Fatalf("%+v", call)
	}
	if uri := call.Notifications[0].Locations[0].Physical.Artifact.URI; uri != "bad%20file.cir" {
		t.Errorf("URI %s", uri)
	}
	if a := call.Notifications[1].Locations[0].Physical.Artifact; a.URI != "file:///gone.cir" || a.BaseID != "" {
		t.Errorf("absolute path became %+v", a)
	}
}
