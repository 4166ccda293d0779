package study

import (
	"cmp"
	"fmt"
	"slices"
)

// Join makes one spread of several of the same study, whatever their order; trials that stand in two of them are
// an error.
func Join(list []*Spread) (*Spread, error) {
	whole := *list[0]
	type piece struct {
		Range
		rows [][]float64
	}
	var pieces []piece
	whole.Trials, whole.Values, whole.Unsolved = nil, nil, nil
	for _, s := range list {
		row := 0
		for _, r := range s.Trials {
			count := int(r.Last - r.First + 1)
			pieces = append(pieces, piece{r, s.Values[row : row+count]})
			row += count
		}
		whole.Unsolved = append(whole.Unsolved, s.Unsolved...)
	}
	slices.SortFunc(pieces, func(a, b piece) int { return cmp.Compare(a.First, b.First) })
	for _, p := range pieces {
		last := len(whole.Trials) - 1
		switch {
		case last >= 0 && p.First <= whole.Trials[last].Last:
			return nil, fmt.Errorf("trials %d..%d stand in two of the studies", p.First, min(p.Last, whole.Trials[last].Last))
		case last >= 0 && p.First == whole.Trials[last].Last+1:
			whole.Trials[last].Last = p.Last
		default:
			whole.Trials = append(whole.Trials, p.Range)
		}
		whole.Values = append(whole.Values, p.rows...)
	}
	whole.Stresses = slices.Clone(whole.Stresses)
	for k := range whole.Stresses {
		var beyond []uint64
		for _, s := range list {
			beyond = append(beyond, s.Stresses[k].Beyond...)
		}
		slices.Sort(beyond)
		whole.Stresses[k].Beyond = beyond
	}
	slices.SortFunc(whole.Unsolved, func(a, b UnsolvedTrial) int { return cmp.Compare(a.Trial, b.Trial) })
	return &whole, nil
}
