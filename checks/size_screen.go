package checks

import (
	"context"
	"fmt"
	"runtime"
	"slices"

	"golang.org/x/sync/errgroup"

	"railproof/checks/study"
	"railproof/netlist/quantity"
)

// screenedChecks are those whose violations a changed value mends and no rating does.
var screenedChecks = []*Check{regulatorHeadroom, zenerRegulation, chokeInductance, railVoltage}

// mostScreened bounds how many violations of a file get a remedy that was solved; the others keep their general one.
const mostScreened = 8

// remedied puts into violations the smallest value that mends them, solved in the condition that is worst alone, or
// what is short where none does. `size` solves the rest.
func remedied(ctx context.Context, p *prepared, jobs int, t *study.Table, findings []Finding) {
	var list []*Finding
	for k := range findings {
		f := &findings[k]
		check, _ := Named(f.Check)
		if f.Verdict == Violated && slices.Contains(screenedChecks, check) && len(list) < mostScreened {
			list = append(list, f)
		}
	}
	if len(list) == 0 {
		return
	}
	z := newSizer(ctx, p, jobs, t, slices.Clone(findings), nil)
	if jobs <= 0 {
		jobs = runtime.GOMAXPROCS(0)
	}
	var group errgroup.Group
	group.SetLimit(jobs)
	for _, f := range list {
		group.Go(func() error {
			if words := z.quick(*f); words != "" {
				f.Remedy = words
			}
			return nil
		})
	}
	_ = group.Wait() // the functions return none
}

// quick is the remedy of a violation from its worst condition alone, in words; empty if none was found.
func (z *sizer) quick(f Finding) string {
	short := ""
	for _, a := range z.adjustments(&f) {
		if !a.circuit() || !found(f.Stress) {
			continue
		}
		tried := map[int]*Finding{}
		solvable := true
		k := smallest(len(a.values), func(k int) bool {
			then, passes, ok := z.screened(&f, z.table, f.Stress.Condition, &a, a.values[k])
			tried[k], solvable = then, solvable && ok
			return passes || !ok
		})
		switch {
		case !solvable || z.ctx.Err() != nil:
		case k >= 0 && found(tried[k].stress()):
			return fmt.Sprintf("%s %s in place of %s (%s) passes in that condition with %s; `railproof size` solves the others",
				z.names(a.elements), quantity.Format(a.values[k], a.unit, 3), quantity.Format(a.from, a.unit, 3), a.series,
				quantity.Format(tried[k].Stress.Value, tried[k].Stress.Unit, 3))
		default:
			if miss := z.missed(&f, &a, tried[len(a.values)-1]); short == "" && miss.unproven == "" {
				short = miss.words
			}
		}
	}
	return short
}

// stress is the stress of a finding, nil without either.
func (f *Finding) stress() *study.Stress {
	if f == nil {
		return nil
	}
	return f.Stress
}
