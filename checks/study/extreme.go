package study

import (
	"context"
	"math"
)

// Extreme value analysis: every toleranced parameter at the end that is bad for the stress in question (the
// method and its pessimism: RIAC, worst case circuit analysis). For each base condition that is the worst of
// some stress, each parameter is moved to both ends alone; the signs of the changes give the vertex for each
// stress, and every distinct vertex is solved. Where the changes do not add up there, the signs are taken again
// around the vertex, until they no longer change. Parameters of different islands do not influence one another,
// so they are moved together: the cost grows with the largest island, not with their number.

const (
	// indifferent is the relative change of a stress below which a parameter does not count for it.
	indifferent = 1e-4
	// additive and resolved: a vertex may miss the sum of all single changes by this part of it and this part of the
	// stress itself, the accuracy of one grid, beside its numerical error, before the signs are taken again.
	additive = 0.05
	resolved = 1e-3
	// bent is the part by which the effects of a parameter towards its two ends may differ, each by the length of its
	// way, before it counts as a corner: a regulator that drops out, a zener that lets go.
	bent = 0.5
	// maxRounds bounds how often signs are taken again.
	maxRounds = 3
)

// corners is the analysis around one base condition.
type corners struct {
	plan    *Plan
	table   *Table
	base    *outcome
	columns [][]int       // columns[j] lists the j-th parameter of each island, or one parameter of the whole supply
	rank    []int         // parameter -> its column
	affect  map[int][]int // island -> the parameters that may influence it
}

func newCorners(p *Plan, t *Table, base *outcome) *corners {
	c := &corners{plan: p, table: t, base: base, rank: make([]int, len(p.Parameters)), affect: map[int][]int{}}
	var wide []int
	for k, q := range p.Parameters {
		if q.Element == supplyWide {
			wide = append(wide, k)
			c.rank[k] = len(c.columns)
			c.columns = append(c.columns, []int{k})
		}
	}
	first := len(c.columns)
	for k, q := range p.Parameters {
		if q.Element == supplyWide || p.beyondSearch(p.islands[q.Element]) {
			continue
		}
		i := p.islands[q.Element]
		if c.affect[i] == nil {
			c.affect[i] = append([]int(nil), wide...)
		}
		j := first + len(c.affect[i]) - len(wide)
		c.affect[i] = append(c.affect[i], k)
		c.rank[k] = j
		for len(c.columns) <= j {
			c.columns = append(c.columns, nil)
		}
		c.columns[j] = append(c.columns[j], k)
	}
	return c
}

// states are the periodic states of an outcome, from which a neighbouring setting may start.
func (o *outcome) states() states {
	warm := states{}
	for i := range o.islands {
		if s := o.islands[i].solution; s != nil {
			warm[i] = s.States
		}
	}
	return warm
}

// shifted is the base setting with some parameters moved.
func (c *corners) shifted(shift []float64) Setting {
	set := c.base.set
	set.Shift = shift
	return set
}

type readings map[tableKey]*Stress

// readingsOf indexes the stresses of a settled outcome.
func readingsOf(out *outcome) readings {
	m := make(readings, len(out.read))
	for k := range out.read {
		s := &out.read[k]
		m[tableKey{s.Element, s.Quantity}] = s
	}
	return m
}

// vertex is a combination of ends with the stresses it is meant to be the worst of.
type vertex struct {
	shift []float64
	fixed []bool // parameters whose position counts for one of the stresses
	keys  []tableKey
	found readings
	warm  states // from which its neighbours start
}

// solve finds the vertices for the given stresses and merges their outcomes into the table.
func (c *corners) solve(ctx context.Context, keys []tableKey, jobs int) {
	at := c.vertex()
	at.keys, at.found, at.warm = keys, readingsOf(c.base), c.base.states()
	start := at.warm
	open := c.next(ctx, []*vertex{at}, jobs)
	for round := 1; len(open) > 0 && round <= maxRounds && ctx.Err() == nil; round++ {
		outcomes := make([]*outcome, len(open))
		inParallel(len(open), jobs, func(k int) {
			outcomes[k] = c.plan.settle(c.plan.solve(ctx, c.shifted(open[k].vertex.shift), start))
		})
		var doubtful []*vertex
		for k, out := range outcomes {
			c.table.take(out)
			v := open[k]
			v.vertex.found, v.vertex.warm = readingsOf(out), out.states()
			if v.doubtful() {
				doubtful = append(doubtful, v.vertex)
			}
		}
		open = c.next(ctx, doubtful, jobs)
	}
}

func (c *corners) vertex() *vertex {
	return &vertex{shift: make([]float64, len(c.plan.Parameters)), fixed: make([]bool, len(c.plan.Parameters))}
}

// proposal is a vertex with what single changes promise there for each of its stresses.
type proposal struct {
	vertex   *vertex
	promised []promise // by key
}

// promise is what the changes of single parameters let a stress become at a vertex.
type promise struct {
	value    float64
	movement float64 // the sum of the magnitudes of the changes
	corner   bool    // the effect of some parameter has one
}

// doubtful keeps the stresses for which the vertex does not hold what the single changes promised, or for which they
// could not promise anything, a corner lying in between.
func (p *proposal) doubtful() bool {
	var keys []tableKey
	for k, key := range p.vertex.keys {
		s, ok := p.vertex.found[key]
		if !ok || math.IsNaN(s.Value) {
			continue
		}
		if at := p.promised[k]; at.corner || math.Abs(s.Value-at.value) > additive*at.movement+resolved*math.Abs(s.Value)+s.Error+trifle(s.Unit) {
			keys = append(keys, key)
		}
	}
	p.vertex.keys = keys
	return len(keys) > 0
}

// next moves every parameter alone around each vertex and proposes the vertices that its stresses then ask for, those
// already solved left out.
func (c *corners) next(ctx context.Context, around []*vertex, jobs int) []*proposal {
	var probes []probe
	for v, at := range around {
		wanted := c.wanted(at)
		for j := range c.columns {
			if wanted[j] {
				probes = append(probes, probe{v, j})
			}
		}
	}
	// Each column is boiled down to the stresses it counts for as soon as its ends are solved: the readings of every
	// probe together would be large.
	references := make([]readings, len(around))
	inParallel(len(around), jobs, func(v int) {
		if len(probes) > 0 {
			references[v] = c.probed(ctx, around[v])
		}
	})
	effects := make([][]effect, len(probes))
	inParallel(len(probes), jobs, func(k int) {
		p := probes[k]
		low, high := c.ends(ctx, around[p.vertex], p.column)
		effects[k] = c.effects(around[p.vertex], p.column, references[p.vertex], low, high)
	})
	return c.gather(around, probes, effects)
}

// probe is a column to move around a vertex.
type probe struct{ vertex, column int }

// effect is what moving a parameter does to a stress of a vertex.
type effect struct {
	key, parameter int
	end            float64 // the end that is worse; 0: where it is
	change         float64 // of the stress when moved there
	corner         bool
}

// ends reads a vertex with one column moved to either end, where it is not already. The second starts from where the
// first one's change, reversed, leads to.
func (c *corners) ends(ctx context.Context, at *vertex, column int) (low, high readings) {
	warm := at.warm
	if !c.isAt(at, c.columns[column], -1) {
		out := c.moved(ctx, at, column, -1, warm)
		low, warm = readingsOf(out), c.reversed(at, column, out.states())
	}
	if !c.isAt(at, c.columns[column], 1) {
		high = readingsOf(c.moved(ctx, at, column, 1, warm))
	}
	return low, high
}

// reversed extrapolates the periodic states of a vertex from those with a column at its low end to its high end.
func (c *corners) reversed(at *vertex, column int, low states) states {
	high := states{}
	for i, x := range at.warm {
		k, ok := c.in(column, i)
		if !ok || len(low[i]) != len(x) {
			continue
		}
		q := c.plan.Parameters[k]
		there, here, begin := q.factor(1), q.factor(at.shift[k]), q.factor(-1)
		if here == begin {
			high[i] = x
			continue
		}
		ratio := (there - here) / (begin - here)
		moved := make([]float64, len(x))
		for n := range x {
			moved[n] = x[n] + ratio*(low[i][n]-x[n])
		}
		high[i] = moved
	}
	return high
}

// moved solves a vertex with one column moved to an end.
func (c *corners) moved(ctx context.Context, at *vertex, column int, end float64, warm states) *outcome {
	shift := append([]float64(nil), at.shift...)
	for _, q := range c.columns[column] {
		shift[q] = end
	}
	return c.plan.settle(c.plan.probe(ctx, c.shifted(shift), warm))
}

// effects lists for which stresses of a vertex the parameters of a column count.
func (c *corners) effects(at *vertex, column int, reference, low, high readings) []effect {
	var list []effect
	for n, key := range at.keys {
		home, ok := c.table.home[key.element]
		now := reference[key]
		if !ok || home < 0 || now == nil || math.IsNaN(now.Value) {
			continue
		}
		k, ok := c.in(column, home)
		if !ok {
			continue
		}
		corner := c.plan.Parameters[k].bends(now, low[key], high[key])
		end, matters := badEnd(now, low[key], high[key])
		switch {
		case !matters && !corner:
			continue
		case !matters || end == 0:
			list = append(list, effect{key: n, parameter: k, corner: corner})
			continue
		}
		to := high[key]
		if end < 0 {
			to = low[key]
		}
		list = append(list, effect{n, k, end, to.Value - now.Value, corner})
	}
	return list
}

// in finds the parameter of a column that may influence an island.
func (c *corners) in(column, island int) (int, bool) {
	for _, k := range c.columns[column] {
		if q := c.plan.Parameters[k]; q.Element == supplyWide || c.plan.islands[q.Element] == island {
			return k, true
		}
	}
	return 0, false
}

// gather proposes a vertex for every stress whose effects ask for another one.
func (c *corners) gather(around []*vertex, probes []probe, effects [][]effect) []*proposal {
	type wish struct {
		ends map[int]float64
		promise
	}
	var list []*proposal
	for v, from := range around {
		wishes := make([]wish, len(from.keys))
		for k, p := range probes {
			if p.vertex != v {
				continue
			}
			for _, e := range effects[k] {
				w := &wishes[e.key]
				if w.ends == nil {
					w.ends, w.value = map[int]float64{}, from.found[from.keys[e.key]].Value
				}
				w.corner = w.corner || e.corner
				w.ends[e.parameter] = from.shift[e.parameter]
				if e.end != 0 {
					w.ends[e.parameter] = e.end
					w.value += e.change
					w.movement += math.Abs(e.change)
				}
			}
		}
		for n := range wishes {
			if w := &wishes[n]; w.movement > 0 {
				list = c.propose(list, from.keys[n], w.ends, w.promise)
			}
		}
	}
	return list
}

// probed reads the vertex itself by the same short way as its neighbours, so that what is left of the numerical error
// cancels in the differences.
func (c *corners) probed(ctx context.Context, v *vertex) readings {
	out := c.plan.settle(c.plan.probe(ctx, c.shifted(v.shift), v.warm))
	v.warm = out.states()
	return readingsOf(out)
}

// wanted says which columns hold a parameter that may influence a stress of the vertex.
func (c *corners) wanted(v *vertex) []bool {
	wanted := make([]bool, len(c.columns))
	seen := map[int]bool{}
	for _, key := range v.keys {
		home, ok := c.table.home[key.element]
		if !ok || seen[home] {
			continue
		}
		seen[home] = true
		for _, k := range c.affect[home] {
			wanted[c.rank[k]] = true
		}
	}
	return wanted
}

// isAt reports whether a vertex has every parameter of a column at an end.
func (c *corners) isAt(v *vertex, column []int, end float64) bool {
	for _, k := range column {
		if v.shift[k] != end {
			return false
		}
	}
	return true
}

// propose adds a stress to a vertex that its ends do not contradict, or to a new one.
func (c *corners) propose(list []*proposal, key tableKey, ends map[int]float64, promised promise) []*proposal {
next:
	for _, p := range list {
		for k, end := range ends {
			if p.vertex.fixed[k] && p.vertex.shift[k] != end {
				continue next
			}
		}
		p.add(key, ends, promised)
		return list
	}
	p := &proposal{vertex: c.vertex()}
	p.add(key, ends, promised)
	return append(list, p)
}

func (p *proposal) add(key tableKey, ends map[int]float64, promised promise) {
	for k, end := range ends {
		p.vertex.shift[k], p.vertex.fixed[k] = end, true
	}
	p.vertex.keys = append(p.vertex.keys, key)
	p.promised = append(p.promised, promised)
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
		home, ok := t.home[s.Element]
		if !ok || home < 0 || t.Plan.beyondSearch(home) || math.IsNaN(s.Value) {
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
