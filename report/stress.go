package report

import (
	"encoding/csv"
	"io"
	"math"
	"strconv"

	"railproof/checks"
	"railproof/checks/study"
)

// StressSchema names the layout of the JSON stress table.
const StressSchema = "railproof-stress/1"

// StressTable is the worst stress of every part of one netlist, whether or not a rating is known.
type StressTable struct {
	File          string
	Title         string
	Circumstances checks.Circumstances
	RailMap       []string
	Assumptions   []checks.Assumption
	Stresses      []study.Stress
	Nominal       bool   // the netlist exactly as written
	PartsVersion  string // of the parts tables
	SharedSheet   string // path of the shared sheet that was read; empty: none
}

// NewStressTable takes the stresses out of a result.
func NewStressTable(r *checks.Result, nominal bool) *StressTable {
	t := &StressTable{
		PartsVersion: r.PartsVersion, File: slashed(r.File), Title: r.Title, Circumstances: r.Circumstances, RailMap: r.RailMap,
		Assumptions: r.Assumptions, Stresses: r.Stresses, Nominal: nominal,
	}
	if r.Duty != nil && !nominal {
		t.SharedSheet = slashed(r.Duty.SharedSheet)
	}
	return t
}

type jsonStressTable struct {
	Schema   string          `json:"schema"`
	File     string          `json:"file"`
	Stresses []jsonStressRow `json:"stresses"`
}

type jsonStressRow struct {
	Element   string         `json:"element"`
	Quantity  study.Quantity `json:"quantity"`
	Value     number         `json:"value"`
	Unit      string         `json:"unit"`
	Condition jsonCondition  `json:"condition"`
	Error     number         `json:"error"`
	Phase     number         `json:"phase_s"`
	Unproven  string         `json:"unproven,omitempty"`
}

// WriteJSON writes the table as one JSON document of StressSchema; SCHEMA.md describes it.
func (t *StressTable) WriteJSON(w io.Writer) error {
	d := jsonStressTable{Schema: StressSchema, File: t.File, Stresses: []jsonStressRow{}}
	for k := range t.Stresses {
		s := &t.Stresses[k]
		j := toJSONStress(s)
		d.Stresses = append(d.Stresses, jsonStressRow{s.Element, s.Quantity, j.Value, j.Unit, j.Condition, j.Error, j.Phase, s.Unproven})
	}
	return encode(w, d)
}

// WriteCSV writes one line a stress, SI units.
func (t *StressTable) WriteCSV(w io.Writer) error {
	c := csv.NewWriter(w)
	rows := [][]string{{"file", "element", "quantity", "value", "unit", "error", "condition", "start", "phase_s", "unproven"}}
	for k := range t.Stresses {
		s := &t.Stresses[k]
		rows = append(rows, []string{
			cell(t.File), cell(s.Element), string(s.Quantity), plainNumber(s.Value), s.Unit.String(), plainError(s),
			cell(conditionWords(s.Condition)), s.Condition.Start, plainNumber(s.Phase), cell(s.Unproven),
		})
	}
	return c.WriteAll(rows)
}

// plainNumber writes a number for a spreadsheet; empty where there is none.
func plainNumber(v float64) string {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return ""
	}
	if v == 0 {
		return "0"
	}
	return strconv.FormatFloat(v, 'g', jsonDigits, 64)
}

// plainError is the numerical error for a spreadsheet: where there is no value there is none.
func plainError(s *study.Stress) string {
	if plainNumber(s.Value) == "" {
		return ""
	}
	return plainNumber(s.Error)
}

// cell makes text safe for a spreadsheet: a leading character that would begin a formula is quoted.
func cell(text string) string {
	text = printable(text)
	if text == "" {
		return ""
	}
	switch text[0] {
	case '=', '+', '-', '@':
		return "'" + text
	}
	return text
}
