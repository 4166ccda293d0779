package checks

import (
	"context"
	"path/filepath"
	"testing"

	"railproof/checks/study"
	"railproof/netlist"
)

// No random trial of a sample supply lies beyond its worst case.
func TestNoTrialBeyondTheWorstCase(t *testing.T) {
	if testing.Short() {
		t.Skip("takes long; held by the full run")
	}
	files, err := filepath.Glob("../testdata/*.cir")
	if err != nil || len(files) == 0 {
		t.Fatal(err, "no sample supplies")
	}
	for _, file := range files {
		t.Run(filepath.Base(file), func(t *testing.T) {

			r, faults, err := Spread(context.Background(), Options{Source: netlist.Source{File: file}},
				study.SpreadOptions{Seed: 1, First: 1, Trials: 10, Distribution: study.Uniform})
			if err != nil || len(faults) > 0 {
				t.Fatal(err, faults)
			}
			s := r.Spread

			for k := range s.Stresses {
				sampled, st := &s.Stresses[k], s.Statistics(k)
				if st.Solved == 0 && sampled.Bounded() {
					t.Errorf("%s %s: no trial was solved", sampled.Bound.Element, sampled.Bound.Quantity)
				}
				if worst := st.Farthest; worst.Trial > 0 {
					t.Errorf("%s %s: %d trials beyond %.10g +- %.2g (%s %v), farthest %.10g in trial %d at %v", sampled.Bound.Element, sampled.Bound.Quantity,
						len(sampled.Beyond), sampled.Bound.Value, sampled.Bound.Error, sampled.Bound.Condition.Name, sampled.Bound.Condition.Also, worst.Value, worst.Trial, s.Positions(worst.Trial))
				}
			}
		})
	}
}
