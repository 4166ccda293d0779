package study

import (
	"context"
	"math"
)

// trials solves the conditions of a spread, each from nothing, so that a trial does not depend on the others.
type trials struct {
	plan   *Plan
	spread *Spread
	column map[tableKey]int
	passes []bool // the solutions a trial needs, held or not: the real one, and with regulators that of their held outputs
}

// noRail is the ripple factor above which a node is no rail but an alternating voltage: its mean passes through
// nought somewhere between the ends of the load, and its ripple factor, which nothing reads, has no bound.
const noRail = 10

// newTrials solves the nominal condition and lists the stresses that are sampled, in the order of the table.
func newTrials(ctx context.Context, t *Table, s *Spread) *trials {
	p := t.Plan
	n := &trials{plan: p, spread: s, column: map[tableKey]int{}, passes: []bool{false}}
	if p.held() {
		n.passes = append(n.passes, true)
	}
	loads := make([]float64, len(p.loads))
	for k := range loads {
		loads[k] = 1
	}
	nominal := map[tableKey]float64{}
	for _, held := range n.passes {
		out := p.solve(ctx, Setting{Line: LineNominal, Loads: loads, Held: held}, nil)
		p.extract(out, func(st Stress) {
			if p.counts(held, st.Quantity) {
				nominal[tableKey{st.Element, st.Quantity}] = found(&st)
			}
		})
	}
	for k := range t.Stresses {
		bound := t.Stresses[k]
		key := tableKey{bound.Element, bound.Quantity}
		v, ok := nominal[key]
		if !ok || bound.Quantity == RippleFactor && bound.Value > noRail {
			continue
		}
		bound.Value, bound.Error, bound.Phase = kept(bound.Value), kept(bound.Error), kept(bound.Phase)
		n.column[key] = len(s.Stresses)
		s.Stresses = append(s.Stresses, Sampled{Bound: bound, Nominal: v})
	}
	return n
}

// counts reports whether a quantity is read from a solution with held regulators, or from the real one.
func (p *Plan) counts(held bool, q Quantity) bool {
	return held == (q == MinHeadroom && p.held())
}

// found is the value of a stress that was solved, NaN otherwise.
func found(s *Stress) float64 {
	if s.Unproven != "" {
		return math.NaN()
	}
	return kept(s.Value)
}

// solve finds the stresses of one trial and which of them lie beyond their bounds; why says what was not found
// although it has a bound, empty if nothing.
func (n *trials) solve(ctx context.Context, trial uint64) (row []float64, beyond []int, why string) {
	stresses := n.spread.Stresses
	read := make([]Stress, len(stresses))
	for k := range read {
		read[k] = Stress{Element: stresses[k].Bound.Element, Quantity: stresses[k].Bound.Quantity, Value: math.NaN(), Unproven: "no value was found"}
	}
	positions := n.spread.Positions(trial)
	for _, held := range n.passes {
		set := n.plan.trial(positions)
		set.Held = held
		n.plan.extract(n.plan.solve(ctx, set, nil), func(st Stress) {
			if k, ok := n.column[tableKey{st.Element, st.Quantity}]; ok && n.plan.counts(held, st.Quantity) {
				read[k] = st
			}
		})
	}
	row = make([]float64, len(stresses))
	for k := range read {
		st := &read[k]
		row[k] = found(st)
		switch {
		case stresses[k].beyond(row[k], st.Error):
			beyond = append(beyond, k)
		case math.IsNaN(row[k]) && stresses[k].Bounded() && why == "":
			why = st.Element + " " + string(st.Quantity) + ": " + st.Unproven
		}
	}
	return row, beyond, why
}
