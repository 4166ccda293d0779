package report

import (
	"encoding/csv"
	"io"
	"strconv"

	"railproof/checks/study"
)

// csvHead names the columns of the table for the design file.
var csvHead = []string{
	"file", "element", "quantity", "stress", "unit", "error", "condition", "check", "verdict", "severity",
	"limit", "bound", "margin", "rating_symbol", "rating", "rating_unit", "origin", "rating_source", "policy", "factor", "limit_source",
	"needs", "remedy", "reason", "note", "at_file", "at_line", "fingerprint",
}

// WriteCSV writes the stress table for the design file: one line a finding, then one for each stress that no
// finding judges. Values are in SI units.
func (r *Report) WriteCSV(w io.Writer) error {
	rows := [][]string{csvHead}
	for k := range r.Files {
		f := &r.Files[k]
		judged := map[string]bool{}
		for n := range f.Findings {
			x := &f.Findings[n]
			if x.Stress != nil {
				judged[x.Stress.Element+"\x00"+string(x.Stress.Quantity)] = true
			}
			rows = append(rows, csvFinding(f.Name, x))
		}
		for n := range f.Stresses {
			if s := &f.Stresses[n]; !judged[s.Element+"\x00"+string(s.Quantity)] {
				row := csvStress(f.Name, s.Element, s)
				rows = append(rows, append(row, make([]string, len(csvHead)-len(row))...))
			}
		}
	}
	return csv.NewWriter(w).WriteAll(rows)
}

// csvStress is the first seven columns.
func csvStress(file, element string, s *study.Stress) []string {
	if s == nil {
		return []string{cell(file), cell(element), "", "", "", "", ""}
	}
	return []string{
		cell(file), cell(element), string(s.Quantity), plainNumber(s.Value), s.Unit.String(), plainError(s), cell(conditionWords(s.Condition)),
	}
}

func csvFinding(file string, f *Finding) []string {
	row := append(csvStress(file, f.Element, f.Stress), f.Check, string(f.Verdict), string(f.Severity))
	if f.Limit == nil {
		row = append(row, "", "", "")
	} else {
		bound := "at most"
		if f.Floor {
			bound = "at least"
		}
		row = append(row, plainNumber(f.Limit.Value), bound, plainNumber(f.Margin))
	}
	if f.Rating == nil {
		row = append(row, "", "", "", "", "")
	} else {
		row = append(row, string(f.Rating.Symbol), plainNumber(f.Rating.Value), f.Rating.Unit.String(), cell(originWords(f.Rating)), cell(f.Rating.Source))
	}
	if f.Limit == nil {
		row = append(row, "", "", "")
	} else {
		row = append(row, cell(f.Limit.Policy), plainNumber(f.Limit.Factor), cell(f.Limit.Source))
	}
	return append(row, cell(needWords(f)), cell(f.Remedy), cell(f.Reason), cell(f.Note), cell(slashed(f.At.File)), strconv.Itoa(f.At.Line), f.Fingerprint)
}
