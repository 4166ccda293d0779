package checks

import (
	"context"
	"fmt"
	"math"

	"railproof/checks/policy"
	"railproof/checks/study"
	"railproof/netlist"
)

// sizer tries changes of one supply.
type sizer struct {
	ctx      context.Context
	supply   *study.Supply
	table    *study.Table
	policy   *policy.Policy
	jobs     int
	before   []Finding
	selected []*Check
	pass     *Pass // for what the options ask of the circuit
	rails    []netlist.RailChain
	full     map[string]*trial // trials of whole changes, by their words
}

// trial is a changed supply with all its conditions solved and judged.
type trial struct {
	supply   *study.Supply
	table    *study.Table
	findings []Finding
}

// miss says why an adjustment does not help.
type miss struct{ words, unproven string }

func newSizer(ctx context.Context, p *prepared, jobs int, t *study.Table, before []Finding, selected []*Check) *sizer {
	return &sizer{
		ctx: ctx, supply: p.supply, table: t, policy: p.policy, jobs: jobs, before: before, selected: selected,
		pass:  &Pass{Supply: p.supply, Table: t, Policy: p.policy, check: &Check{}},
		rails: p.supply.Circuit.RailMap(p.supply.Duty), full: map[string]*trial{},
	}
}

// judge applies checks to a table.
func judge(list []*Check, s *study.Supply, t *study.Table, rules *policy.Policy) []Finding {
	var findings []Finding
	for _, c := range list {
		pass := &Pass{Supply: s, Table: t, Policy: rules, check: c}
		c.run(pass)
		findings = append(findings, pass.findings...)
	}
	return findings
}

// findingKey tells the findings of a run from one another.
type findingKey struct {
	check, element string
	quantity       study.Quantity
}

func keyOf(f *Finding) findingKey {
	key := findingKey{check: f.Check, element: f.Element}
	if f.Stress != nil {
		key.quantity = f.Stress.Quantity
	}
	return key
}

// outcomeOf says what became of a violation: the finding that stands for it then, nil where the check no longer
// applies, and whether it passes. A check that fails by another of its stresses does not pass.
func (z *sizer) outcomeOf(f *Finding, after []Finding) (then *Finding, passes bool) {
	key := keyOf(f)
	passes = true
	for k := range after {
		a := &after[k]
		switch {
		case a.Check != key.check || a.Element != key.element:
		case keyOf(a) == key:
			then, passes = a, passes && a.Verdict == Proven
		case a.Verdict == Violated && !z.violatedBefore(keyOf(a)):
			if then == nil {
				then = a
			}
			passes = false
		}
	}
	return then, passes
}

func (z *sizer) violatedBefore(key findingKey) bool {
	for k := range z.before {
		if z.before[k].Verdict == Violated && keyOf(&z.before[k]) == key {
			return true
		}
	}
	return false
}

// smallest is the first of n values that passes, taking it that all after it pass too: the steps are doubled until
// one passes, then halved. The value before it was tried and failed. It is -1 if the last one fails.
func smallest(n int, passes func(k int) bool) int {
	low, high := -1, 0
	for !passes(high) {
		if high >= n-1 {
			return -1
		}
		low, high = high, min(2*high+1, n-1)
	}
	for high-low > 1 {
		middle := (low + high) / 2
		if passes(middle) {
			high = middle
		} else {
			low = middle
		}
	}
	return high
}

// screened judges the check of a violation on a changed supply: a rating on the stresses that are known, a value
// in the one condition in which the stress is worst. ok is false where that condition cannot be solved again.
func (z *sizer) screened(f *Finding, from *study.Table, worst study.Condition, a *adjustment, to float64) (then *Finding, passes, ok bool) {
	check, known := Named(f.Check)
	if !known {
		return nil, false, false
	}
	s, table := a.applied(z.supply, to), z.table
	if a.circuit() {
		if table, ok = from.Again(z.ctx, s, worst); !ok {
			return nil, false, false
		}
	}
	then, passes = z.outcomeOf(f, judge([]*Check{check}, s, table, z.policy))
	return then, passes, true
}

// whole solves and judges every condition of a changed supply; a rating is judged on the stresses that are known.
func (z *sizer) whole(a *adjustment, to float64) *trial {
	key := fmt.Sprint(a.elements, a.symbol, to)
	if t, ok := z.full[key]; ok && a.circuit() {
		return t
	}
	t := &trial{supply: a.applied(z.supply, to), table: z.table}
	if a.circuit() {
		t.table = study.Worst(z.ctx, t.supply, z.jobs)
	}
	t.findings = judge(z.selected, t.supply, t.table, z.policy)
	z.full[key] = t
	return t
}

// retries bounds how often the search goes on after the full solution found a worse condition than the screened one.
const retries = 3

// try finds the smallest value of an adjustment with which the check of a violation passes in every condition.
func (z *sizer) try(f *Finding, a *adjustment) (*Remedy, miss) {
	table, from := z.table, 0
	worst := study.Condition{}
	if f.Stress != nil {
		worst = f.Stress.Condition
	}
	for range retries {
		var last *Finding
		solvable := true
		rest := a.values[from:]
		if len(rest) == 0 {
			break
		}
		k := smallest(len(rest), func(k int) bool {
			then, passes, ok := z.screened(f, table, worst, a, rest[k])
			last, solvable = then, solvable && ok
			return passes || !ok
		})
		switch {
		case !solvable || z.ctx.Err() != nil:
			return nil, miss{}
		case k < 0:
			return nil, z.missed(f, a, last)
		}
		t := z.whole(a, rest[k])
		then, passes := z.outcomeOf(f, t.findings)
		if passes {
			return z.remedy(f, a, rest[k], then, t.findings), miss{}
		}
		if then == nil || then.Stress == nil || !a.circuit() {
			return nil, z.missed(f, a, then)
		}
		if then.Verdict == Unproven {
			return nil, z.missed(f, a, then)
		}
		table, worst, from = t.table, then.Stress.Condition, from+k+1
	}
	return nil, miss{words: fmt.Sprintf("no value of %s was settled in %d solutions of all conditions", z.names(a.elements), retries)}
}

func (z *sizer) remedy(f *Finding, a *adjustment, to float64, then *Finding, after []Finding) *Remedy {
	r := &Remedy{Changes: z.changes(a, to), Solved: a.circuit()}
	if then != nil {
		r.After, r.Limit, r.Floor = then.Stress, then.Limit, then.Floor
	}
	subject := keyOf(f)
	was, is := gravest(z.before), gravest(after)
	for k := range after {
		key := keyOf(&after[k])
		if key != subject && gravity(&after[k]) == is[key] && is[key] > was[key] {
			r.Worse = append(r.Worse, after[k])
			was[key] = math.MaxInt // each once
		}
	}
	for k := range z.before {
		key := keyOf(&z.before[k])
		if key != subject && z.before[k].Verdict == Violated && is[key] == 0 {
			r.Mends = append(r.Mends, z.before[k])
			is[key] = math.MaxInt
		}
	}
	return r
}

// gravity ranks what a finding means for a release: 0 proven, then unproven, then violated by severity.
func gravity(f *Finding) int {
	switch {
	case f.Verdict == Unproven:
		return 1
	case f.Verdict != Violated:
		return 0
	case f.Severity == Minor:
		return 2
	case f.Severity == Major:
		return 3
	}
	return 4
}

func gravest(list []Finding) map[findingKey]int {
	worst := map[findingKey]int{}
	for k := range list {
		key := keyOf(&list[k])
		worst[key] = max(worst[key], gravity(&list[k]))
	}
	return worst
}
