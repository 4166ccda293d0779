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

// paths lists the ranges to scan: all loads together and, if they are few, each alone with the others full, at low and
// at high line; and the line with the loads light and full.
func (p *Plan) paths() []path {
	var list []path
	n := len(p.loads)
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
		for k := range n {
			if n == 1 || n > fewLoads {
				break
			}
			add(line, func(position float64) []float64 {
				loads := all(1)
				loads[k] = position
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
	warm := base[0].states()
	found := make([][]float64, len(paths))
	inParallel(len(paths), jobs, func(k int) { found[k] = t.scan(ctx, paths[k], warm) })
	var settings []Setting
	for k, positions := range found {
		for _, x := range positions {
			settings = append(settings, paths[k](x))
		}
	}
	outcomes := p.solveAll(ctx, settings, jobs)
	for k, out := range outcomes {
		out.base = len(base) + k
		t.take(out)
	}
	return outcomes
}

// scan returns the inner positions of a path at which some stress is worst, in ascending order.
func (t *Table) scan(ctx context.Context, along path, warm states) []float64 {
	known := map[float64]readings{}
	probe := func(x float64) {
		if _, ok := known[x]; !ok && ctx.Err() == nil {
			out := t.Plan.settle(t.Plan.probe(ctx, along(x), warm))
			known[x] = readingsOf(out)
		}
	}
	for k := range scanPoints + 1 {
		probe(float64(k) / scanPoints)
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
	return positions
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
