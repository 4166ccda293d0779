package report

import (
	"encoding/csv"
	"fmt"
	"io"
	"math"
	"strings"

	"railproof/checks"
	"railproof/checks/study"
	"railproof/netlist/quantity"
)

// TraceSheet is the waveforms of one condition, to be written as numbers or as a drawing.
type TraceSheet struct {
	File  string
	Title string
	Trace *study.Trace
	Worst *study.Stress // the stress whose condition is traced; nil: none was asked for
}

// NewTraceSheet takes the waveforms out of what was followed.
func NewTraceSheet(t *checks.Traced) *TraceSheet {
	return &TraceSheet{File: slashed(t.File), Title: ownTitle(t.Title), Trace: t.Trace, Worst: t.Worst}
}

// traceFormats is every format of `trace`, the default first.
var traceFormats = []struct {
	name  string
	write func(t *TraceSheet, w io.Writer) error
}{
	{"csv", (*TraceSheet).WriteCSV},
	{"svg", (*TraceSheet).WriteSVG},
	{"png", (*TraceSheet).WritePNG},
}

// TraceFormats names the formats of a trace.
func TraceFormats() []string {
	var names []string
	for _, f := range traceFormats {
		names = append(names, f.name)
	}
	return names
}

// Write writes the waveforms in a named format.
func (t *TraceSheet) Write(w io.Writer, name string) error {
	for _, f := range traceFormats {
		if f.name == name {
			return f.write(t, w)
		}
	}
	return unknownFormat(name, TraceFormats())
}

// Unsolved lists, for each signal without a waveform, what it waits for.
func (t *TraceSheet) Unsolved() []string {
	var list []string
	for k := range t.Trace.Waveforms {
		if w := &t.Trace.Waveforms[k]; w.Values == nil {
			list = append(list, fmt.Sprintf("no waveform of %s (%s): %s", signalName(w), t.when(), w.Unproven))
		}
	}
	return list
}

// Doubts lists what the waveforms that are there do not prove.
func (t *TraceSheet) Doubts() []string {
	var list []string
	for k := range t.Trace.Waveforms {
		if w := &t.Trace.Waveforms[k]; w.Values != nil && w.Unproven != "" {
			list = append(list, signalName(w)+": "+w.Unproven)
		}
	}
	return list
}

// when is the condition in words.
func (t *TraceSheet) when() string {
	words := conditionWords(t.Trace.Condition)
	if t.Trace.Held {
		words += ", regulator outputs held at their set voltage"
	}
	if t.Trace.Phase > 0 {
		words += fmt.Sprintf(", switched on at %.4g degrees of the period", 360*t.Trace.Phase)
	}
	return printable(words)
}

// worst says which stress the condition is worst for, empty if none was asked for.
func (t *TraceSheet) worst() string {
	if t.Worst == nil {
		return ""
	}
	words := fmt.Sprintf("worst for %s %s, %s", t.Worst.Element, t.Worst.Quantity, figure(t.Worst.Value, t.Worst.Unit))
	return printable(joinWith(words, momentWords(t.Worst), " at "))
}

// signalName is a waveform in words: "OUT voltage".
func signalName(w *study.Waveform) string {
	return printable(strings.TrimPrefix(w.Name, "node:")) + " " + string(w.Kind)
}

// extremeWords is the range of a waveform: "11.2 V at 8.1 ms to 15.3 V at 4.9 ms", or "12 V throughout".
func extremeWords(w *study.Waveform) string {
	largest := math.Max(math.Abs(w.Min.Value), math.Abs(w.Max.Value))
	value := func(v float64) string {
		if math.Abs(v) <= nothing*largest {
			v = 0
		}
		return quantity.Format(v, w.Unit, 4)
	}
	if w.Max.Value-w.Min.Value <= steadyCurve*largest {
		return value(w.Max.Value) + " throughout"
	}
	at := func(i study.Instant) string { return value(i.Value) + " at " + figure(i.Time, quantity.Second) }
	return at(w.Min) + " to " + at(w.Max)
}

// Parts of the largest magnitude of a curve: below the first a value is rounding, below the second the whole curve
// is constant.
const (
	nothing     = 1e-12
	steadyCurve = 1e-5
)

// WriteCSV writes one line a moment: the time in s, then each waveform in V or A. All values that were solved are
// there, both sides of a jump too.
func (t *TraceSheet) WriteCSV(w io.Writer) error {
	c := csv.NewWriter(w)
	row := []string{"time_s"}
	for k := range t.Trace.Waveforms {
		wave := &t.Trace.Waveforms[k]
		row = append(row, cell(wave.Name+":"+string(wave.Kind)+"_"+wave.Unit.String()))
	}
	if err := c.Write(row); err != nil {
		return err
	}
	for n, at := range t.Trace.Times {
		row[0] = plainNumber(at)
		for k := range t.Trace.Waveforms {
			row[k+1] = ""
			if values := t.Trace.Waveforms[k].Values; values != nil {
				row[k+1] = plainNumber(values[n])
			}
		}
		if err := c.Write(row); err != nil {
			return err
		}
	}
	c.Flush()
	return c.Error()
}
