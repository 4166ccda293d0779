package study

import (
	"context"
	"errors"
	"fmt"
	"math"
	"runtime"
	"slices"
	"sort"
	"strings"
	"sync"

	"railproof/checks/solver"
	"railproof/netlist"
)

// Table holds the worst stress of every part.
type Table struct {
	Stresses []Stress // elements in netlist order, then nodes; quantities in a fixed order
	Plan     *Plan
	Solved   int // conditions solved

	index   map[tableKey]int
	home    map[string]int                     // element or node name -> its island
	sources map[netlist.ElementID]map[int]bool // voltage source -> islands it takes part in
	// Unsolved lists islands without a steady state in some condition: the reason, in words.
	Unsolved []UnsolvedIsland
}

// UnsolvedIsland says why no steady state was found for a part of the circuit.
type UnsolvedIsland struct {
	Elements []string // its elements, in netlist order
	Why      string
	When     string // the condition in words
}

type tableKey struct {
	element  string
	quantity Quantity
}

// Get returns the worst stress of an element.
func (t *Table) Get(element string, q Quantity) (*Stress, bool) {
	k, ok := t.index[tableKey{element, q}]
	if !ok {
		return nil, false
	}
	return &t.Stresses[k], true
}

// Island is the index of the independent part of the circuit that an element belongs to, -1 if unknown.
func (t *Table) Island(id netlist.ElementID) int { return t.Plan.islands[id] }

// smallerIsWorse are the quantities whose worst value is the smallest.
var smallerIsWorse = map[Quantity]bool{MinVoltage: true, MinCurrent: true, MinDifferential: true, MinHeadroom: true, LeastCurrent: true, MinOutputCurrent: true}

// signed are the quantities whose value farther from nought is the worse: a source gives power away, and a negative
// rail is below ground.
var signed = map[Quantity]bool{MeanVoltage: true, MeanCurrent: true, MeanPower: true, ShortPower: true}

// badness orders the values of a quantity: the larger, the worse.
func badness(q Quantity, value float64) float64 {
	switch {
	case smallerIsWorse[q]:
		return -value
	case signed[q]:
		return math.Abs(value)
	}
	return value
}

// tie is the relative difference below which two conditions count as equally bad and the first one is shown.
const tie = 1e-6

// worse reports whether a is worse than b, each with its numerical error counted against the part.
func worse(a, b *Stress) bool {
	if math.IsNaN(b.Value) {
		return !math.IsNaN(a.Value)
	}
	if math.IsNaN(a.Value) {
		return false
	}
	return badness(a.Quantity, a.Value)+a.Error > badness(b.Quantity, b.Value)+b.Error+tie*math.Abs(b.Value)
}

// merge takes a stress into the table if it is the worst so far. A stress that proves nothing marks the
// entry, whatever its value.
func (t *Table) merge(s Stress) {
	key := tableKey{s.Element, s.Quantity}
	k, ok := t.index[key]
	if !ok {
		t.index[key] = len(t.Stresses)
		t.Stresses = append(t.Stresses, s)
		return
	}
	old := &t.Stresses[k]
	unproven := old.Unproven
	if unproven == "" {
		unproven = s.Unproven
	}
	if worse(&s, old) {
		*old = s
	}
	old.Unproven = unproven
}

func newTable(p *Plan) *Table { return &Table{Plan: p, index: map[tableKey]int{}} }

// Nominal solves the netlist exactly as written; with cold also its switch-on from empty.
func Nominal(ctx context.Context, s *Supply, cold bool) *Table {
	p := NewPlan(s)
	t := newTable(p)
	out := p.solve(ctx, Setting{Nominal: true, Line: LineAsWritten}, nil)
	p.extract(out, func(st Stress) {
		st.Condition = p.condition(&out.set)
		t.merge(st)
	})
	t.note(out)
	t.Solved = 1
	if cold {
		p.coldStart(ctx, Setting{Nominal: true}, true, t.merge)
	}
	t.order(s.Circuit)
	return t
}

// Worst solves every condition of the plan and gathers the worst stresses.
func Worst(ctx context.Context, s *Supply, jobs int) *Table {
	p := NewPlan(s)
	t := newTable(p)
	base := p.solveBase(ctx, jobs)
	for k, out := range base {
		out.base = k
		t.take(out)
	}
	starts := p.coldSettings()
	if anySolved(base) {
		base = append(base, t.interior(ctx, base, jobs)...)
		t.tolerances(ctx, base, jobs)
		p.lineOffs(ctx, jobs, t)
		p.outputShorts(ctx, jobs, t)
	} else {
		starts = starts[:1] // says why it cannot be solved either
	}
	p.coldStarts(ctx, starts, jobs, t)
	t.order(s.Circuit)
	t.block()
	t.unsearched()
	return t
}

// anySolved reports whether any part of the circuit was solved in any condition.
func anySolved(outcomes []*outcome) bool {
	for _, out := range outcomes {
		for i := range out.islands {
			if out.islands[i].solution != nil {
				return true
			}
		}
	}
	return false
}

// order sorts the stresses by element in netlist order, then nodes, keeping the order of quantities.
func (t *Table) order(c *netlist.Circuit) {
	rank := map[string]int{}
	for k := range c.Elements {
		rank[c.Elements[k].Name] = k
	}
	for k := range c.Nodes {
		rank["node:"+c.Nodes[k].Name] = len(c.Elements) + k
	}
	sort.SliceStable(t.Stresses, func(a, b int) bool { return rank[t.Stresses[a].Element] < rank[t.Stresses[b].Element] })
	for k := range t.Stresses {
		t.index[tableKey{t.Stresses[k].Element, t.Stresses[k].Quantity}] = k
	}
}

// block marks what cannot be proven because a source is neither declared a line nor a winding: its off-load
// rise and its resistance are unknown, and with them every stress of its island.
func (t *Table) block() {
	c := t.Plan.supply.Circuit
	wait := func(sources []netlist.ElementID, why, missing string) {
		waiting := map[int]netlist.ElementID{}
		for _, id := range sources {
			for i := range t.sources[id] {
				if _, ok := waiting[i]; !ok {
					waiting[i] = id
				}
			}
		}
		for k := range t.Stresses {
			s := &t.Stresses[k]
			if id, ok := waiting[t.home[s.Element]]; ok && s.Unproven == "" {
				name := c.Elements[id].Name
				s.Unproven, s.Missing = fmt.Sprintf(why, name), strings.ReplaceAll(missing, "NAME", name)
			}
		}
	}
	t.unbound()
	wait(t.Plan.Doubtful, "the amplitude of %s may be a peak or an RMS value", "line NAME ... or winding NAME as-drawn")
	wait(t.Plan.Undeclared, "the off-load voltage and the resistance of %s are unknown", "winding NAME ... or line NAME ...")
}

// unbound takes away the currents that nothing but a source's unknown resistance would limit: what was found
// is then no stress, not even one that could violate.
func (t *Table) unbound() {
	islands := map[int]string{}
	for _, id := range t.Plan.Undeclared {
		if t.Plan.bare(id) {
			for i := range t.sources[id] {
				islands[i] = t.Plan.supply.Circuit.Elements[id].Name
			}
		}
	}
	for k := range t.Stresses {
		s := &t.Stresses[k]
		switch s.Quantity {
		case SurgeCurrent, SurgeI2t, RippleCurrentRMS, RippleCurrentEquivalent:
			if name, ok := islands[t.home[s.Element]]; ok {
				s.Value, s.Error, s.Phase = math.NaN(), 0, math.NaN()
				if s.Unproven == "" {
					s.Unproven = "no resistance of " + name + " is drawn or stated, and nothing else limits the current"
					s.Missing = "winding " + name + " ..."
				}
			}
		}
	}
}

// take merges an outcome into the table.
func (t *Table) take(out *outcome) {
	t.Solved++
	held := out.set.Held
	for _, s := range out.read {
		// Held regulators are a device to read missing headroom; every other stress comes from the real law.
		if held != (s.Quantity == MinHeadroom) {
			if held || !t.Plan.held() {
				continue
			}
			if s.Quantity == MinHeadroom {
				continue
			}
		}
		s.base = out.base
		t.merge(s)
	}
	t.note(out)
}

// held reports whether the supply has regulators, so that conditions with held outputs are solved too.
func (p *Plan) held() bool {
	for k := range p.supply.Circuit.Elements {
		if d, ok := p.supply.Circuit.Elements[k].Device.(netlist.Regulator); ok && !d.Shunt {
			return true
		}
	}
	return false
}

// note records islands and failures of an outcome.
func (t *Table) note(out *outcome) {
	c := t.Plan.supply.Circuit
	if t.home == nil {
		t.place(out)
	}
	if out.set.Held {
		return
	}
	when := t.Plan.condition(&out.set).Name
	if out.low == nil && out.failed != nil {
		t.addUnsolved(UnsolvedIsland{Why: out.failed.Error(), When: when})
		return
	}
	for i := range out.islands {
		is := &out.islands[i]
		why := is.blocked
		if why == "" && is.err != nil && !errors.Is(is.err, solver.ErrInaccurate) {
			why = is.err.Error()
		}
		if why == "" {
			continue
		}
		u := UnsolvedIsland{Why: why, When: when}
		for k := range c.Elements {
			if t.Plan.islands[k] == i {
				u.Elements = append(u.Elements, c.Elements[k].Name)
			}
		}
		t.addUnsolved(u)
	}
}

// place remembers which island each element and node belongs to, and which islands each source feeds.
func (t *Table) place(out *outcome) {
	c := t.Plan.supply.Circuit
	t.home, t.sources = map[string]int{}, map[netlist.ElementID]map[int]bool{}
	for k := range c.Elements {
		t.home[c.Elements[k].Name] = t.Plan.islands[k]
	}
	if out.low == nil {
		return
	}
	for k := 1; k < len(c.Nodes); k++ {
		t.home["node:"+c.Nodes[k].Name] = out.nodes[k].island
	}
	for k := range c.Elements {
		if d := out.low.devices[k]; d != none {
			t.sources[netlist.ElementID(k)] = map[int]bool{}
			for _, p := range out.uses[d] {
				t.sources[netlist.ElementID(k)][p.island] = true
			}
		}
	}
}

func (t *Table) addUnsolved(u UnsolvedIsland) {
	for _, old := range t.Unsolved {
		if len(old.Elements) == len(u.Elements) && (len(u.Elements) == 0 || old.Elements[0] == u.Elements[0]) {
			return
		}
	}
	t.Unsolved = append(t.Unsolved, u)
}

// solveBase solves the base conditions on several cores, those with held regulators from the others; the outcomes are in
// the order of the settings and do not depend on the number of jobs.
func (p *Plan) solveBase(ctx context.Context, jobs int) []*outcome {
	settings := p.baseSettings()
	outcomes := make([]*outcome, len(settings))
	free := slices.IndexFunc(settings, func(s Setting) bool { return s.Held })
	if free < 0 {
		free = len(settings)
	}
	solve := func(k int, warm states) { outcomes[k] = p.settle(p.solve(ctx, settings[k], warm)) }
	inParallel(free, jobs, func(k int) { solve(k, nil) })
	inParallel(len(settings)-free, jobs, func(k int) { solve(free+k, outcomes[k].states()) })
	return outcomes
}

// inParallel calls work for 0..n-1 on up to jobs cores (0: all).
func inParallel(n, jobs int, work func(k int)) {
	if jobs <= 0 {
		jobs = runtime.GOMAXPROCS(0)
	}
	next := make(chan int)
	var group sync.WaitGroup
	for range min(jobs, n) {
		group.Add(1)
		go func() {
			defer group.Done()
			for k := range next {
				work(k)
			}
		}()
	}
	for k := range n {
		next <- k
	}
	close(next)
	group.Wait()
}
