package study

import (
	"context"
	"math"
	"slices"
	"sort"
)

// A stress may be worst inside the range of a load or of the line: the dissipation of a regulator with resistance
// before it, a choke that stops conducting, a regulator that just drops out. So the ranges between base conditions are
// scanned at five points, and where one of the inner ones is worse than both ends the neighbourhood is searched by
// halving. What is found is solved as a further base condition.

const (
	scanPoints   = 4 // intervals of the first scan
	scanHalvings = 4 // after which the position is known to 1/64 of the range
	// scanMost bounds how many inner conditions of one path are solved.
	scanMost = 6
)

// path runs through the settings between two base conditions, from 0 to 1.
type path func(position float64) Setting

// paths lists the ranges to scan: all loads together and, if those of an independent part are few, each alone with its
// others full, at low and at high line; and the line with the loads light and full.
func (p *Plan) paths() []path {
	var list []path
	n, groups := len(p.loads), p.loadGroups()
	all := func(position float64) []float64 {
		loads := make([]float64, n)
		for k := range loads {
			loads[k] = position
		}
		return loads
	}
	add := func(line LineEnd, loads func(position float64) []float64) {
		list = append(list, func(position float64) Setting {
			return Setting{Line: line, Loads: loads(position)}
		})
	}
	for _, line := range []LineEnd{LineLow, LineHigh} {
		if n > 0 {
			add(line, all)
		}
		for j := range fewLoads {
			var alone []int // the j-th load of every part that has a few
			for _, members := range groups {
				if len(members) > max(1, j) && len(members) <= fewLoads {
					alone = append(alone, members[j])
				}
			}
			if alone == nil {
				break
			}
			add(line, func(position float64) []float64 {
				loads := all(1)
				for _, k := range alone {
					loads[k] = position
				}
				return loads
			})
		}
	}
	if len(p.lines) == 0 {
		return list
	}
	for _, load := range []float64{0, 1} {
		list = append(list, func(position float64) Setting {
			return Setting{Line: LineBetween, LineAt: position, Loads: all(load)}
		})
		if n == 0 {
			break
		}
	}
	return list
}

// interior finds and solves the conditions between base conditions in which a stress is worse than at both ends.
func (t *Table) interior(ctx context.Context, base []*outcome, jobs int) []*outcome {
	p := t.Plan
	paths := p.paths()
	found := make([][]inner, len(paths))
	inParallel(len(paths), jobs, func(k int) { found[k] = t.scan(ctx, paths[k], base) })
	var all []inner
	for _, list := range found {
		all = append(all, list...)
	}
	outcomes := make([]*outcome, len(all))
	inParallel(len(all), jobs, func(k int) { outcomes[k] = p.settle(p.solve(ctx, all[k].set, all[k].warm)) })
	for k, out := range outcomes {
		out.base = len(base) + k
		t.take(out)
	}
	return outcomes
}

// inner is a condition between base conditions, with its periodic states on one grid.
type inner struct {
	set  Setting
	warm states
}

// scan returns the inner conditions of a path in which some stress is worst, in ascending order.
func (t *Table) scan(ctx context.Context, along path, base []*outcome) []inner {
	known, solved := map[float64]readings{}, map[float64]states{}
	probe := func(x float64) {
		if _, ok := known[x]; !ok && ctx.Err() == nil {
			set := along(x)
			warm, ok := between(solved, x)
			if !ok {
				warm = nearest(base, &set)
			}
			out := t.Plan.settle(t.Plan.probe(ctx, set, warm))
			known[x], solved[x] = readingsOf(out), out.states()
		}
	}
	// The ends, and then always the middle between known positions.
	for width := 1.0; width >= 1.0/scanPoints; width /= 2 {
		for x := 0.0; x <= 1; x += width {
			probe(x)
		}
	}
	var peaks []peak
	for range scanHalvings {
		peaks = t.peaks(known)
		for _, at := range peaks {
			probe(0.5 * (at.left + at.x))
			probe(0.5 * (at.x + at.right))
		}
	}
	peaks = t.peaks(known)
	sort.SliceStable(peaks, func(a, b int) bool { return peaks[a].stresses > peaks[b].stresses })
	var positions []float64
	for _, at := range peaks[:min(len(peaks), scanMost)] {
		positions = append(positions, at.x)
	}
	slices.Sort(positions)
	var list []inner
	for _, x := range positions {
		list = append(list, inner{along(x), solved[x]})
	}
	return list
}

// between interpolates the periodic states at a position from the nearest ones on both sides.
func between(solved map[float64]states, x float64) (states, bool) {
	below, above := math.Inf(-1), math.Inf(1)
	for at := range solved {
		if at < x {
			below = math.Max(below, at)
		} else {
			above = math.Min(above, at)
		}
	}
	if math.IsInf(below, 0) || math.IsInf(above, 0) {
		return nil, false
	}
	warm, share := states{}, (x-below)/(above-below)
	for i, low := range solved[below] {
		high := solved[above][i]
		if len(high) != len(low) {
			continue
		}
		warm[i] = make([]float64, len(low))
		for n := range low {
			warm[i][n] = low[n] + share*(high[n]-low[n])
		}
	}
	return warm, true
}

// nearest is the periodic state of the base condition nearest to a setting.
func nearest(base []*outcome, set *Setting) states {
	var best *outcome
	for _, out := range base {
		if out.set.Held == set.Held && (best == nil || out.set.distance(set) < best.set.distance(set)) {
			best = out
		}
	}
	if best == nil {
		return nil
	}
	return best.states()
}

// peak is an inner position at which stresses are worse than at both ends, with its neighbours.
type peak struct {
	left, x, right float64
	stresses       int // how many
}

// peaks gathers the inner positions at which any stress of the table is worst, in ascending order.
func (t *Table) peaks(known map[float64]readings) []peak {
	positions := make([]float64, 0, len(known))
	for x := range known {
		positions = append(positions, x)
	}
	slices.Sort(positions)
	last := len(positions) - 1
	count := make([]int, len(positions))
	for k := range t.Stresses {
		key := tableKey{t.Stresses[k].Element, t.Stresses[k].Quantity}
		if key.quantity == MinHeadroom && t.Plan.held() {
			continue // its own conditions, with outputs held
		}
		badAt := func(at int) float64 {
			s := known[positions[at]][key]
			if s == nil || math.IsNaN(s.Value) {
				return math.Inf(-1)
			}
			return badness(key.quantity, s.Value)
		}
		worst := 0
		for at := 1; at <= last; at++ {
			if badAt(at) > badAt(worst) {
				worst = at
			}
		}
		end := math.Max(badAt(0), badAt(last))
		if worst > 0 && worst < last && badAt(worst) > end+resolved*math.Abs(end)+trifle(t.Stresses[k].Unit) {
			count[worst]++
		}
	}
	var list []peak
	for at := 1; at < last; at++ {
		if count[at] > 0 {
			list = append(list, peak{positions[at-1], positions[at], positions[at+1], count[at]})
		}
	}
	return list
}
