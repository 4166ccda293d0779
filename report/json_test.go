package report

import (
	"bytes"
	"encoding/json"
	"math"
	"strings"
	"testing"

	"github.com/santhosh-tekuri/jsonschema/v6"

	"railproof/netlist"
)

// schemaOf compiles one of the embedded schemas.
func schemaOf(t testing.TB, name string) *jsonschema.Schema {
	t.Helper()
	text, err := Schemas.ReadFile("schema/" + name + ".json")
	if err != nil {
		t.Fatal(err)
	}
	document, err := jsonschema.UnmarshalJSON(bytes.NewReader(text))
	if err != nil {
		t.Fatal(err)
	}
	closed(document)
	c := jsonschema.NewCompiler()
	if err := c.AddResource("urn:railproof:schema:"+name, document); err != nil {
		t.Fatal(err)
	}
	s, err := c.Compile("urn:railproof:schema:" + name)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// closed forbids members that a schema does not name. The published schemas let them pass, since members may be
// added within one version; what is written today must be named there all the same.
func closed(node any) {
	switch n := node.(type) {
	case map[string]any:
		if _, ok := n["properties"].(map[string]any); ok {
			n["additionalProperties"] = false
		}
		for key, child := range n {
			if key != "allOf" { // that only narrows what stands beside it
				closed(child)
			}
		}
	case []any:
		for _, child := range n {
			closed(child)
		}
	}
}

// A document with a member of a later day is still valid by the published schema, and not by the closed one.
func TestSchemasLetMembersBeAdded(t *testing.T) {
	text := bytes.Replace(written(t, benchReport(t), "json", Style{}), []byte(`"schema":`), []byte(`"later": 1, "schema":`), 1)
	if validate(schemaOf(t, "report-1"), text) == nil {
		t.Error("a member that no schema names passes the test's schema")
	}
	published, err := Schemas.ReadFile("schema/report-1.json")
	if err != nil {
		t.Fatal(err)
	}
	document, err := jsonschema.UnmarshalJSON(bytes.NewReader(published))
	if err != nil {
		t.Fatal(err)
	}
	c := jsonschema.NewCompiler()
	if err := c.AddResource("urn:published", document); err != nil {
		t.Fatal(err)
	}
	s, err := c.Compile("urn:published")
	if err != nil {
		t.Fatal(err)
	}
	if err := validate(s, text); err != nil {
		t.Error(err)
	}
}

func validate(s *jsonschema.Schema, text []byte) error {
	value, err := jsonschema.UnmarshalJSON(bytes.NewReader(text))
	if err != nil {
		return err
	}
	return s.Validate(value)
}

func TestJSONIsValid(t *testing.T) {
	s := schemaOf(t, "report-1")
	text := written(t, benchReport(t), "json", Style{})
	if err := validate(s, text); err != nil {
		t.Error(err)
	}
	// The schema must be able to fail: one member renamed, one verdict unknown, one severity missing.
	for _, change := range [][2]string{{`"fingerprint"`, `"finger"`}, {`"verdict": "violated"`, `"verdict": "fine"`}, {`"severity": "critical"`, `"severity": null`}, {`"check"`, `"rule"`}} {
		broken := bytes.Replace(text, []byte(change[0]), []byte(change[1]), 1)
		if bytes.Equal(broken, text) {
			t.Fatalf("%s does not stand in the report", change[0])
		}
		if validate(s, broken) == nil {
			t.Errorf("the schema takes %s in place of %s", change[1], change[0])
		}
	}
}

func TestJSONOfBadInput(t *testing.T) {
	r := New([]Input{
		{File: "bad.cir", Diagnostics: []netlist.Diagnostic{{At: netlist.Position{File: "bad.cir", Line: 3, Column: 7}, What: "value 1x", Expected: "a number"}}},
		{File: "gone.cir", Failure: errGone{}},
	}, Options{Version: "test", Gate: gateAt(t, "never"), Now: day})
	text := written(t, r, "json", Style{})
	if err := validate(schemaOf(t, "report-1"), text); err != nil {
		t.Error(err)
	}
	var d jsonReport
	if err := json.Unmarshal(text, &d); err != nil {
		t.Fatal(err)
	}
	if d.Exit != ExitBadInput || len(d.Files) != 2 || d.Files[0].Diagnostics[0].At.Line != 3 || d.Files[1].Diagnostics[0].What != "gone" {
		t.Errorf("%s", text)
	}
}

type errGone struct{}

func (errGone) Error() string { return "gone" }

func TestStressJSONIsValid(t *testing.T) {
	var b bytes.Buffer
	if err := NewStressTable(benchResult(t), false).WriteJSON(&b); err != nil {
		t.Fatal(err)
	}
	if err := validate(schemaOf(t, "stress-1"), b.Bytes()); err != nil {
		t.Error(err)
	}
	if strings.Contains(b.String(), "NaN") || strings.Contains(b.String(), "Inf") {
		t.Error("a value that is no number stands in the document")
	}
}

// A number keeps at least seven significant digits, and what is not finite is null.
func TestNumber(t *testing.T) {
	for v, want := range map[float64]string{
		math.Pi: "3.141592654", 1.0 / 3e7: "3.333333333e-8", 0: "0", math.Copysign(0, -1): "0",
		math.Inf(1): "null", math.NaN(): "null", 123456789.123: "123456789.1", 1e-300: "1e-300", 47: "47",
	} {
		got, err := json.Marshal(number(v))
		if err != nil || string(got) != want {
			t.Errorf("%g is written %s, want %s (%v)", v, got, want, err)
		}
	}
}
