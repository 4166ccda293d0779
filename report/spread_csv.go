package report

import (
	"encoding/csv"
	"fmt"
	"io"
	"strconv"

	"railproof/checks/study"
)

// WriteCSV writes one line a stress, SI units, the counts of its histogram last: bin_01 begins at histogram_low,
// bin_48 ends at histogram_high.
func (s *Spread) WriteCSV(w io.Writer) error {
	head := []string{"file", "element", "quantity", "unit", "headline", "bound", "error", "kind", "condition", "unproven", "nominal", "trials", "solved",
		"min", "min_trial", "mean", "standard_deviation"}
	for _, p := range study.Percentiles {
		head = append(head, "p"+strconv.FormatFloat(p, 'g', -1, 64))
	}
	head = append(head, "max", "max_trial", "used", "beyond", "histogram_low", "histogram_high")
	for k := range study.HistogramBins {
		head = append(head, fmt.Sprintf("bin_%02d", k+1))
	}
	rows := [][]string{head}
	for k, st := range s.stats() {
		x := &s.Study.Stresses[k]
		b := &x.Bound
		kind := "at most"
		if x.SmallerIsWorse() {
			kind = "at least"
		}
		row := []string{
			cell(s.File), cell(b.Element), string(b.Quantity), b.Unit.String(), strconv.FormatBool(x.Headline), plainNumber(b.Value), plainNumber(b.Error), kind,
			cell(conditionWords(b.Condition)), cell(b.Unproven), plainNumber(x.Nominal), strconv.Itoa(s.trials()), strconv.Itoa(st.Solved),
			plainNumber(st.Min.Value), trialNumber(st.Min), plainNumber(st.Mean), plainNumber(st.Deviation),
		}
		for _, v := range st.Percentiles {
			row = append(row, plainNumber(v))
		}
		row = append(row, plainNumber(st.Max.Value), trialNumber(st.Max), plainNumber(st.Used), strconv.Itoa(len(x.Beyond)), plainNumber(st.Low), plainNumber(st.High))
		for i := range study.HistogramBins {
			count := ""
			if st.Counts != nil {
				count = strconv.Itoa(st.Counts[i])
			}
			row = append(row, count)
		}
		rows = append(rows, row)
	}
	return csv.NewWriter(w).WriteAll(rows)
}

// trialNumber is the trial of an extremum; trials count from 1.
func trialNumber(e study.Extremum) string {
	if e.Trial == 0 {
		return ""
	}
	return strconv.FormatUint(e.Trial, 10)
}
