package study

import "math"

// A stress of a start may be that of another start on a finer grid only if it is near enough on the coarse one.
const (
	// ahead is by what part the worst found in other conditions must lie beyond the coarse value of a start for it to
	// be left coarse.
	ahead = 0.02
	// level is the relative difference below which a start that is refined anyway is taken for the worst.
	level = 1e-3
)

// races finds, stress by stress, the starts that may be the worst.
type races struct {
	table *Table
	order []tableKey
	of    map[tableKey]*race
}

// race is one stress among all starts.
type race struct {
	runners []runner
	reach   float64 // badness of the worst refined one, its numerical error counted against the part
	drift   float64 // the largest change between the coarse grid and the last one
	refined bool
}

// runner is a stress of one start on the coarse grid.
type runner struct {
	start, island, part, read int
	coarse                    float64 // badness
}

// heat is what is to be refined of one start.
type heat struct {
	start   int
	islands []int
}

func newRaces(t *Table, starts []*start) *races {
	r := &races{table: t, of: map[tableKey]*race{}}
	for k, st := range starts {
		for i := range st.islands {
			is := &st.islands[i]
			if is.err != nil {
				continue
			}
			for n, w := range is.parts {
				for m, read := range w.reads(&is.coarse[n]) {
					key := tableKey{t.Plan.supply.Circuit.Elements[w.id].Name, read.quantity}
					of := r.of[key]
					if of == nil {
						of = &race{reach: math.Inf(-1)}
						r.of[key], r.order = of, append(r.order, key)
					}
					of.runners = append(of.runners, runner{k, i, n, m, badness(read.quantity, read.value)})
				}
			}
		}
	}
	return r
}

// open lists what is to be refined next: of each stress the worst start, and once that is refined every other that may
// still exceed it.
func (r *races) open(starts []*start) []heat {
	chosen := make([]map[int]bool, len(starts))
	isChosen := func(x runner) bool {
		is := &starts[x.start].islands[x.island]
		return chosen[x.start][x.island] || is.fine != nil || is.err != nil
	}
	choose := func(x runner) {
		if isChosen(x) {
			return
		}
		if chosen[x.start] == nil {
			chosen[x.start] = map[int]bool{}
		}
		chosen[x.start][x.island] = true
	}
	for _, key := range r.order {
		of := r.of[key]
		if of.refined {
			for _, x := range of.runners {
				if x.coarse+of.drift > of.reach+tie*math.Abs(of.reach) {
					choose(x)
				}
			}
			continue
		}
		if x, ok := of.favourite(isChosen); ok && !r.beaten(key, x.coarse) {
			choose(x)
		}
	}
	var list []heat
	for k, islands := range chosen {
		h := heat{start: k}
		for i := range starts[k].islands {
			if islands[i] {
				h.islands = append(h.islands, i)
			}
		}
		if len(h.islands) > 0 {
			list = append(list, h)
		}
	}
	return list
}

// favourite is the runner that is worst on the coarse grid, or one as bad that is refined anyway.
func (of *race) favourite(isChosen func(runner) bool) (runner, bool) {
	if len(of.runners) == 0 {
		return runner{}, false
	}
	best := of.runners[0]
	for _, x := range of.runners {
		if x.coarse > best.coarse {
			best = x
		}
	}
	for _, x := range of.runners {
		if isChosen(x) && x.coarse >= best.coarse-level*math.Abs(best.coarse) {
			return x, true
		}
	}
	return best, true
}

// beaten reports whether other conditions are worse beyond doubt.
func (r *races) beaten(key tableKey, coarse float64) bool {
	s, ok := r.table.Get(key.element, key.quantity)
	return ok && !math.IsNaN(s.Value) && badness(key.quantity, s.Value) > coarse+ahead*math.Abs(coarse)
}

// note takes what was refined into account.
func (r *races) note(starts []*start) {
	for _, key := range r.order {
		of := r.of[key]
		for _, x := range of.runners {
			is := &starts[x.start].islands[x.island]
			if is.fine == nil || is.err != nil {
				continue
			}
			fine, coarse := is.parts[x.part].reads(&is.fine[x.part])[x.read], is.parts[x.part].reads(&is.coarse[x.part])[x.read]
			of.refined = true
			of.reach = math.Max(of.reach, badness(key.quantity, fine.value)+math.Abs(fine.value-coarse.value))
			of.drift = math.Max(of.drift, math.Abs(badness(key.quantity, fine.value)-x.coarse))
		}
	}
}
