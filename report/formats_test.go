package report

import (
	"bytes"
	"encoding/csv"
	"encoding/xml"
	"strconv"
	"strings"
	"testing"
)

// Every format writes the same bytes twice and names every part with a finding.
func TestFormatsAreDeterministic(t *testing.T) {
	for _, name := range Formats() {
		one, two := written(t, benchReport(t), name, Style{}), written(t, benchReport(t), name, Style{})
		if !bytes.Equal(one, two) {
			t.Errorf("%s: two runs differ", name)
		}
		for _, word := range []string{"D1", "C1", "V1", "bench/supply.cir"} {
			if !bytes.Contains(one, []byte(word)) {
				t.Errorf("%s does not name %s", name, word)
			}
		}
		if written(t, New(nil, Options{}), name, Style{}) == nil {
			t.Errorf("%s writes nothing for no file", name)
		}
		written(t, badReport(t), name, Style{})
	}
	if err := benchReport(t).Write(&bytes.Buffer{}, "yaml", Style{}); err == nil || !strings.Contains(err.Error(), "text, json, sarif") {
		t.Errorf("unknown format: %v", err)
	}
}

func TestJUnit(t *testing.T) {
	var run junitRun
	text := written(t, benchReport(t), "junit", Style{})
	if err := xml.Unmarshal(text, &run); err != nil {
		t.Fatal(err)
	}
	if run.Tests != 10 || run.Failures != 6 || run.Skipped != 2 || run.Errors != 0 {
		t.Errorf("%d tests, %d failures, %d skipped, %d errors; want 10, 6, 2, 0", run.Tests, run.Failures, run.Skipped, run.Errors)
	}
	names := map[string]bool{}
	for _, c := range run.Suites[0].Cases {
		if names[c.Class+c.Name] {
			t.Errorf("case %s %s stands twice", c.Class, c.Name)
		}
		names[c.Class+c.Name] = true
	}
	if err := xml.Unmarshal(written(t, badReport(t), "junit", Style{}), &run); err != nil || run.Errors != 2 {
		t.Errorf("unread files: %d errors, %v", run.Errors, err)
	}
}

// Characters that XML forbids do not reach the document.
func TestJUnitHostileNames(t *testing.T) {
	r := benchResult(t)
	r.Findings[0].Element = "D\x00\x1b<&\"\ufffe"
	r.Findings[0].Reason = "a\x0bb"
	text := written(t, New([]Input{{File: "x\x01.cir", Result: r}}, Options{Now: day}), "junit", Style{})
	if err := xml.Unmarshal(text, new(junitRun)); err != nil {
		t.Error(err)
	}
	if bytes.ContainsAny(text, "\x00\x01\x0b\x1b") {
		t.Error("a forbidden character stands in the document")
	}
}

func TestCSV(t *testing.T) {
	r := benchResult(t)
	r.Findings[0].Remedy = "=HYPERLINK(1)"
	text := written(t, New([]Input{{File: "x.cir", Result: r}}, Options{Now: day}), "csv", Style{})
	rows, err := csv.NewReader(bytes.NewReader(text)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	column := map[string]int{}
	for k, name := range rows[0] {
		column[name] = k
	}
	if len(rows) != 1+10+1 {
		t.Errorf("%d lines, want a head, 10 findings and the one stress without a check", len(rows))
	}
	found := false
	for _, row := range rows[1:] {
		if row[column["element"]] == "D1" {
			found = true
			if row[column["remedy"]] != "'=HYPERLINK(1)" {
				t.Errorf("a cell can be taken for a formula: %s", row[column["remedy"]])
			}
			if v, err := strconv.ParseFloat(row[column["stress"]], 64); err != nil || v != 41.8 {
				t.Errorf("stress %s", row[column["stress"]])
			}
		}
		for _, c := range row {
			if strings.Contains(c, "NaN") || strings.Contains(c, "Inf") {
				t.Errorf("cell %s", c)
			}
		}
	}
	if !found {
		t.Error("no line for D1")
	}
}

func TestMarkdown(t *testing.T) {
	r := benchResult(t)
	r.Title = "a | b <script> [x](y) `z`"
	got := string(written(t, New([]Input{{File: "x.cir", Result: r}}, Options{Now: day}), "markdown", Style{}))
	if !strings.Contains(got, "a \\| b \\<script\\> \\[x\\](y) \\`z\\`") {
		t.Errorf("the title is not escaped:\n%s", got)
	}
	golden(t, "supply.md", written(t, benchReport(t), "markdown", Style{}))
}
