package study

import (
	"context"
	"math"
)

// Extreme value analysis: every toleranced parameter at the end that is bad for the stress in question (the
// method and its pessimism: RIAC, worst case circuit analysis). For each base condition that is the worst of
// some stress, each parameter is moved to both ends alone; the signs of the changes give the corner for each
// stress, and every distinct corner is solved. Parameters of different islands do not influence one another,
// so they are moved together: the cost grows with the largest island, not with their number.

// indifferent is the relative change of a stress below which a parameter does not count for it.
const indifferent = 1e-4

// corners is the analysis around one base condition.
type corners struct {
	plan    *Plan
	table   *Table
	base    *outcome
	warm    states
	island  []int   // of each parameter
	columns [][]int // columns[j] lists the j-th parameter of each island
	rank    []int   // parameter -> its j
}

func newCorners(p *Plan, t *Table, base *outcome) *corners {
	c := &corners{plan: p, table: t, base: base, warm: states{}}
	for i := range base.islands {
		if s := base.islands[i].solution; s != nil {
			c.warm[i] = s.States
		}
	}
	count := map[int]int{}
	for k, q := range p.Parameters {
		i := t.islands[q.Element]
		c.island = append(c.island, i)
		j := count[i]
		count[i]++
		c.rank = append(c.rank, j)
		for len(c.columns) <= j {
			c.columns = append(c.columns, nil)
		}
		c.columns[j] = append(c.columns[j], k)
	}
	return c
}

// shifted is the base setting with some parameters moved.
func (c *corners) shifted(shift []float64) Setting {
	set := c.base.set
	set.Shift = shift
	return set
}

// readings indexes the stresses of a settled outcome.
func readings(out *outcome) map[tableKey]*Stress {
	m := make(map[tableKey]*Stress, len(out.read))
	for k := range out.read {
		s := &out.read[k]
		m[tableKey{s.Element, s.Quantity}] = s
	}
	return m
}

// solve finds the corners for the given stresses and merges their outcomes into the table.
func (c *corners) solve(ctx context.Context, keys []tableKey, jobs int) {
	settings := make([]Setting, 0, 2*len(c.columns))
	for _, column := range c.columns {
		for _, end := range []float64{-1, 1} {
			shift := make([]float64, len(c.plan.Parameters))
			for _, k := range column {
				shift[k] = end
			}
			settings = append(settings, c.shifted(shift))
		}
	}
	nominal := readings(c.base)
	moved := make([]map[tableKey]*Stress, len(settings))
	outcomes := make([]*outcome, len(settings))
	inParallel(len(settings), jobs, func(k int) {
		outcomes[k] = c.plan.settle(c.plan.solve(ctx, settings[k], c.warm))
		moved[k] = readings(outcomes[k])
	})
	for _, out := range outcomes {
		c.table.take(out)
	}

	// The corner of each stress, as signs of the parameters of its island; 0 where it does not care.
	perIsland := map[int][][]float64{}
	for _, key := range keys {
		island, ok := c.table.home[key.element]
		if !ok || island < 0 {
			continue
		}
		at, ok := nominal[key]
		if !ok || math.IsNaN(at.Value) {
			continue
		}
		signs := make([]float64, len(c.plan.Parameters))
		for k := range signs {
			if c.island[k] != island {
				continue
			}
			low, high := moved[2*c.rank[k]][key], moved[2*c.rank[k]+1][key]
			signs[k] = badEnd(at, low, high)
		}
		perIsland[island] = addCorner(perIsland[island], signs)
	}
	most := 0
	for _, list := range perIsland {
		most = max(most, len(list))
	}
	settings = settings[:0]
	for m := range most {
		shift := make([]float64, len(c.plan.Parameters))
		for k := range shift {
			if list := perIsland[c.island[k]]; m < len(list) {
				shift[k] = list[m][k]
			}
		}
		settings = append(settings, c.shifted(shift))
	}
	outcomes = make([]*outcome, len(settings))
	inParallel(len(settings), jobs, func(k int) { outcomes[k] = c.plan.settle(c.plan.solve(ctx, settings[k], c.warm)) })
	for _, out := range outcomes {
		c.table.take(out)
	}
}

// badEnd says at which end of a parameter a stress is worst: -1, 1, or 0 if neither end is worse.
func badEnd(at, low, high *Stress) float64 {
	threshold := indifferent * math.Abs(at.Value)
	gain := func(s *Stress) float64 {
		if s == nil {
			return 0
		}
		d := s.Value - at.Value
		if smallerIsWorse[at.Quantity] {
			d = -d
		}
		if math.IsNaN(d) {
			return 0
		}
		return d
	}
	l, h := gain(low), gain(high)
	switch {
	case l > threshold && l >= h:
		return -1
	case h > threshold:
		return 1
	}
	return 0
}

// addCorner adds a corner to a list, merged with one that it does not contradict.
func addCorner(list [][]float64, signs []float64) [][]float64 {
	moved := false
	for _, s := range signs {
		moved = moved || s != 0
	}
	if !moved {
		return list
	}
next:
	for _, old := range list {
		for k, s := range signs {
			if s != 0 && old[k] != 0 && s != old[k] {
				continue next
			}
		}
		for k, s := range signs {
			if s != 0 {
				old[k] = s
			}
		}
		return list
	}
	return append(list, signs)
}

// tolerances adds the extreme value analysis around every base outcome that is the worst of some stress.
func (t *Table) tolerances(ctx context.Context, base []*outcome, jobs int) {
	if len(t.Plan.Parameters) == 0 {
		return
	}
	owners := make([][]tableKey, len(base))
	for k := range t.Stresses {
		s := &t.Stresses[k]
		if s.Condition.Start == "cold" || s.base < 0 || s.base >= len(base) {
			continue
		}
		owners[s.base] = append(owners[s.base], tableKey{s.Element, s.Quantity})
	}
	for b, keys := range owners {
		if len(keys) == 0 || base[b].failed != nil || ctx.Err() != nil {
			continue
		}
		newCorners(t.Plan, t, base[b]).solve(ctx, keys, jobs)
	}
}
