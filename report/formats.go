package report

import (
	"fmt"
	"io"
	"slices"
	"strings"
)

// Style is how a report for people is to look.
type Style struct {
	Colour bool
	Proven bool // the ledger lists all that is proven, not the headline checks alone
}

// format is one way to write a report.
type format struct {
	name  string
	about string
	write func(r *Report, w io.Writer, s Style) error
}

// reportFormats is every format of `check`, the default first. A new one is one file with its writer and one line here.
var reportFormats = []format{
	{"text", "the ledger for people", func(r *Report, w io.Writer, s Style) error { return r.WriteText(w, s) }},
	{"json", "schema " + ReportSchema, func(r *Report, w io.Writer, _ Style) error { return r.WriteJSON(w) }},
	{"sarif", "SARIF 2.1.0", func(r *Report, w io.Writer, _ Style) error { return r.WriteSARIF(w) }},
	{"junit", "JUnit XML", func(r *Report, w io.Writer, _ Style) error { return r.WriteJUnit(w) }},
	{"html", "one self-contained page", func(r *Report, w io.Writer, _ Style) error { return r.WriteHTML(w) }},
	{"markdown", "the ledger as Markdown", func(r *Report, w io.Writer, _ Style) error { return r.WriteMarkdown(w) }},
	{"csv", "the stress table for the design file", func(r *Report, w io.Writer, _ Style) error { return r.WriteCSV(w) }},
}

// stressFormats is every format of `stress`, the default first.
var stressFormats = []struct {
	name  string
	write func(t *StressTable, w io.Writer, s Style) error
}{
	{"text", func(t *StressTable, w io.Writer, s Style) error { return t.WriteText(w, s.Colour) }},
	{"json", func(t *StressTable, w io.Writer, _ Style) error { return t.WriteJSON(w) }},
	{"csv", func(t *StressTable, w io.Writer, _ Style) error { return t.WriteCSV(w) }},
}

// Formats names the formats of a report.
func Formats() []string {
	var names []string
	for _, f := range reportFormats {
		names = append(names, f.name)
	}
	return names
}

// StressFormats names the formats of a stress table.
func StressFormats() []string {
	var names []string
	for _, f := range stressFormats {
		names = append(names, f.name)
	}
	return names
}

// ShowsWaves reports whether a format shows the curves of findings.
func ShowsWaves(name string) bool { return name == "html" }

// Write writes the report in a named format.
func (r *Report) Write(w io.Writer, name string, s Style) error {
	k := slices.IndexFunc(reportFormats, func(f format) bool { return f.name == name })
	if k < 0 {
		return unknownFormat(name, Formats())
	}
	return reportFormats[k].write(r, w, s)
}

// Write writes the table in a named format.
func (t *StressTable) Write(w io.Writer, name string, s Style) error {
	for _, f := range stressFormats {
		if f.name == name {
			return f.write(t, w, s)
		}
	}
	return unknownFormat(name, StressFormats())
}

func unknownFormat(name string, known []string) error {
	return fmt.Errorf("format %q; expected one of %s", name, strings.Join(known, ", "))
}
