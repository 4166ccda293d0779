package report

import (
	"bytes"
	"context"
	"encoding/csv"
	"encoding/json"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"railproof/checks"
	"railproof/checks/study"
	"railproof/netlist"
)

// dividerSpread draws trials of a divider, whose ripple is nought in every trial and whose source is steady.
func dividerSpread(t *testing.T, first uint64, n int) *Spread {
	t.Helper()
	file := filepath.Join(t.TempDir(), "divider.cir")
	if err := os.WriteFile(file, []byte("divider\nV1 a 0 10\nR1 a b 500\nR2 b 0 500\n"), 0o666); err != nil {
		t.Fatal(err)
	}
	r, faults, err := checks.Spread(context.Background(), checks.Options{Source: netlist.Source{File: file}},
		study.SpreadOptions{Seed: 5, First: first, Trials: n, Distribution: study.Normal})
	if err != nil || len(faults) > 0 {
		t.Fatal(err, faults)
	}
	s := NewSpread(r, "test")
	s.File = "divider.cir"
	return s
}

func spreadText(t *testing.T, s *Spread, format string, style Style) []byte {
	t.Helper()
	var b bytes.Buffer
	if err := s.Write(&b, format, style); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

func TestSpreadJSONIsValidAndReadBack(t *testing.T) {
	s := dividerSpread(t, 4, 9)
	s.Study.Stresses[2].Beyond = []uint64{5, 12}
	s.Study.Unsolved = []study.UnsolvedTrial{{Trial: 6, Why: "no reason"}}
	s.Study.Parts = []study.UnsolvedIsland{{Elements: []string{"R9"}, Why: "why", When: "when"}}
	text := spreadText(t, s, "json", Style{})
	if err := validate(schemaOf(t, "spread-1"), text); err != nil {
		t.Error(err)
	}
	for _, change := range [][2]string{{`"distribution": "normal"`, `"distribution": "gauss"`}, {`"farthest"`, `"far"`}, {`"kind": "line"`, `"kind": "road"`}} {
		broken := bytes.Replace(text, []byte(change[0]), []byte(change[1]), 1)
		if bytes.Equal(broken, text) || validate(schemaOf(t, "spread-1"), broken) == nil {
			t.Errorf("the schema takes %s in place of %s", change[1], change[0])
		}
	}
	back, err := ReadSpread("a.json", text)
	if err != nil {
		t.Fatal(err)
	}
	for _, format := range SpreadFormats() {
		if a, b := spreadText(t, s, format, Style{}), spreadText(t, back, format, Style{}); !bytes.Equal(a, b) {
			t.Errorf("%s read back:\n%s\nwant\n%s", format, b, a)
		}
	}
}

// Two pieces give the bytes of the whole, in every format.
func TestMergeSpreads(t *testing.T) {
	whole := dividerSpread(t, 1, 12)
	whole, err := MergeSpreads([]string{"whole"}, []*Spread{whole})
	if err != nil {
		t.Fatal(err)
	}
	var pieces []*Spread
	for _, s := range []*Spread{dividerSpread(t, 6, 7), dividerSpread(t, 1, 5)} {
		read, err := ReadSpread("piece", spreadText(t, s, "json", Style{}))
		if err != nil {
			t.Fatal(err)
		}
		pieces = append(pieces, read)
	}
	joined, err := MergeSpreads([]string{"b", "a"}, pieces)
	if err != nil {
		t.Fatal(err)
	}
	for _, format := range SpreadFormats() {
		if a, b := spreadText(t, whole, format, Style{}), spreadText(t, joined, format, Style{}); !bytes.Equal(a, b) {
			t.Errorf("%s joined:\n%s\nwant\n%s", format, b, a)
		}
	}
	pieces[1].Study.Stresses[0].Bound.Value += 1e-6
	if _, err := MergeSpreads([]string{"b", "a"}, pieces); err == nil || !strings.Contains(err.Error(), "the worst-case bounds are not the same") {
		t.Errorf("another bound: %v", err)
	}
}

// A piece that was cut or edited is refused with what is wrong.
func TestReadSpreadRefuses(t *testing.T) {
	good := string(spreadText(t, dividerSpread(t, 1, 3), "json", Style{}))
	for _, c := range []struct{ old, new, want string }{
		{`"railproof-spread/1"`, `"railproof-stress/1"`, `schema "railproof-stress/1"; expected "railproof-spread/1"`},
		{`"last": 3`, `"last": 4`, "the values do not fit the trials"},
		{`"last": 3`, `"last": 2`, "the values do not fit the trials"},
		{`"last": 3`, `"last": 18446744073709551615`, "the values do not fit the trials"},
		{`"first": 1`, `"first": 0`, "the values do not fit the trials"},
		{`"distribution": "normal"`, `"distribution": "flat"`, `distribution "flat"; expected uniform or normal`},
		{`"unit": "V"`, `"unit": "volt"`, `unit "volt" is not known`},
		{`"values": [`, `"values": [[1],`, "the values do not fit the trials"},
		{"\n  [", "\n  [1,", "expected one for each of"},
		{`"beyond": null`, `"beyond": {"trials": [4]}`, "trials beyond the bound that the study does not hold"},
		{`"beyond": null`, `"beyond": {"trials": [2, 1]}`, "trials beyond the bound that the study does not hold"},
		{"{", "[", "not a JSON spread"},
	} {
		text := strings.Replace(good, c.old, c.new, 1)
		if text == good {
			t.Fatalf("%s does not stand in the document", c.old)
		}
		if _, err := ReadSpread("a.json", []byte(text)); err == nil || !strings.Contains(err.Error(), c.want) || !strings.HasPrefix(err.Error(), "a.json: ") {
			t.Errorf("%s: %v, want %q", c.new, err, c.want)
		}
	}
}

// Colour only paints: without it the same characters stand, all of them plain, in at most 80 columns.
func TestSpreadText(t *testing.T) {
	s := dividerSpread(t, 1, 40)
	plain := spreadText(t, s, "text", Style{})
	painted := spreadText(t, s, "text", Style{Colour: true})
	if bytes.Equal(plain, painted) || !bytes.Equal(plain, regexp.MustCompile(`\x1b\[[0-9;]*m`).ReplaceAll(painted, nil)) {
		t.Error("colour changes more than colour")
	}
	for _, line := range strings.Split(string(plain), "\n") {
		if len(line) > width || strings.ContainsFunc(line, func(r rune) bool { return r > '~' }) {
			t.Errorf("%d columns: %s", len(line), line)
		}
	}
	if s.Exit() != ExitPassed {
		t.Errorf("exit %d", s.Exit())
	}
}

// The columns of a chart say how many trials a bin has: 6, 3, 1 and one in a hundred of 6 rows.
func TestChart(t *testing.T) {
	st := study.Statistics{Counts: make([]int, study.HistogramBins), Low: 0, High: 48, Percentiles: [4]float64{1, 24, 40, 41}}
	st.Counts[0], st.Counts[1], st.Counts[2], st.Counts[3] = 600, 300, 150, 1
	x := &study.Sampled{Bound: study.Stress{Quantity: study.MaxVoltage, Value: 48}}
	got := strings.Join(chart(x, &st), "\n")
	want := `600 |#
    |#
    |#
    |##
    |##:
    |###.
    +` + strings.Repeat("-", 48) + `
      [                      m               ]      !
     0` + strings.Repeat(" ", 43) + `48.0`
	if got != want {
		t.Errorf("\n%s\nwant\n%s", got, want)
	}
}

func TestSpreadCSV(t *testing.T) {
	s := dividerSpread(t, 1, 6)
	rows, err := csv.NewReader(bytes.NewReader(spreadText(t, s, "csv", Style{}))).ReadAll()
	if err != nil || len(rows) != len(s.Study.Stresses)+1 || len(rows[0]) != 27+study.HistogramBins {
		t.Fatal(err, len(rows), len(rows[0]))
	}
	if rows[0][26] != "histogram_high" || rows[0][27] != "bin_01" || rows[0][len(rows[0])-1] != "bin_48" {
		t.Errorf("%v", rows[0])
	}
}

func TestSelectStresses(t *testing.T) {
	s := dividerSpread(t, 1, 1)
	got, err := SelectStresses(s.Study, []string{"r1=Mean-Power", "node:B=min-voltage"})
	if err != nil || len(got) != 2 {
		t.Fatal(got, err)
	}
	if x := s.Study.Stresses[got[1]].Bound; x.Element != "node:b" || x.Quantity != study.MinVoltage {
		t.Errorf("%s %s", x.Element, x.Quantity)
	}
	for text, want := range map[string]string{
		"R1": "expected ELEMENT=quantity", "=mean-power": "expected ELEMENT=quantity", "R1=": "expected ELEMENT=quantity",
		"node:c=min-voltage": "did you mean node:a?", "R1=meen-power": "did you mean mean-power?", "R1=zzz": "R1 has no steady",
	} {
		if _, err := SelectStresses(s.Study, []string{text}); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: %v, want %q", text, err, want)
		}
	}
}

// The document is one of the schema's version, whatever the numbers of its values.
func TestSpreadValuesStandALineATrial(t *testing.T) {
	text := spreadText(t, dividerSpread(t, 1, 3), "json", Style{})
	var d struct{ Values [][]*float64 }
	if err := json.Unmarshal(text, &d); err != nil || len(d.Values) != 3 {
		t.Fatal(err, len(d.Values))
	}
	tail := text[bytes.Index(text, []byte(` "values": [`)):]
	if lines := bytes.Count(tail, []byte("\n")); lines != 6 {
		t.Errorf("%d lines:\n%s", lines, tail)
	}
}

// Whatever is read as a piece can be joined, judged and written.
func FuzzReadSpread(f *testing.F) {
	f.Add([]byte(`{"schema": "railproof-spread/1", "seed": 1, "distribution": "uniform", "trials": [{"first": 1, "last": 2}, {"first": 9, "last": 9}],
 "varied": [{"kind": "line", "name": "line"}, {"kind": "load", "name": "RL"}, {"kind": "tolerance", "name": "R1", "symbol": "R", "low": -0.1, "high": 0.1}],
 "stresses": [{"element": "R1", "quantity": "mean-power", "unit": "W", "headline": true, "proves": ["resistor-power"],
  "bound": {"value": 1, "error": 0, "kind": "at most", "condition": {"name": "", "line": "", "load": "", "start": "steady"}},
  "nominal": 0.9, "beyond": {"trials": [2], "farthest": 2, "value": 2, "positions": []}},
  {"element": "X1", "quantity": "min-headroom", "unit": "V", "bound": {"value": null, "error": 1e308, "unproven": "why"}}],
 "unsolved": [{"trial": 9, "why": "no"}], "unsolved_parts": [], "values": [[0.5, -1e308], [2, 1e308], [null, 3]]}`))
	f.Fuzz(func(t *testing.T, text []byte) {
		s, err := ReadSpread("a", text)
		if err != nil {
			return
		}
		whole, err := MergeSpreads([]string{"a"}, []*Spread{s})
		if err != nil {
			return
		}
		for _, format := range SpreadFormats() {
			if err := whole.Write(new(bytes.Buffer), format, Style{}); err != nil {
				t.Errorf("%s: %v", format, err)
			}
		}
		if whole.Beyond() > 0 && whole.Exit() != ExitViolated {
			t.Errorf("exit %d with %d bounds broken", whole.Exit(), whole.Beyond())
		}
	})
}
