package study

import (
	"context"
	"errors"
	"fmt"
	"slices"
	"time"

	"railproof/checks/solver"
	"railproof/netlist"
)

// outcome is the solution of one setting, island by island.
type outcome struct {
	set     Setting
	low     *lowered
	islands []solvedIsland
	home    []place                   // device of the whole network -> where it was solved
	nodes   []place                   // node of the whole network -> where it was solved
	uses    map[solver.Device][]place // device -> where it takes part
	failed  error                     // no network could be built
	read    []Stress                  // every stress, once the waveforms are given up; see settle
	base    int                       // index among the base conditions
	only    map[int]bool              // the islands solved, those a shorted output takes part in; nil: all
}

// place is an island and an index in it; island -1: nowhere.
type place struct{ island, index int }

type solvedIsland struct {
	solution *solver.Solution
	err      error  // no, or no accurate, solution
	blocked  string // an element without a model touches it
}

// states holds the periodic states of a neighbouring setting, by island, from which the search starts.
type states map[int][]float64

// The grids of the many conditions of a check: the difference of two grids counts against the part, so that they
// may be coarser than those of the netlist exactly as written.
const (
	workingSteps    = 64
	workingMaxSteps = 4096
)

// lay builds the network of the supply in one setting and takes it apart into islands, none of them solved.
func (p *Plan) lay(set Setting) (*outcome, []solver.Island) {
	out := &outcome{set: set}
	low, err := p.supply.lower(&set, p)
	if err != nil {
		out.failed = err
		return out, nil
	}
	out.low = low
	if p.Blocked != "" {
		out.failed = errors.New(p.Blocked)
	}
	parts := low.net.Islands()
	out.uses = map[solver.Device][]place{}
	out.home = make([]place, low.net.Devices())
	for k := range out.home {
		out.home[k].island = -1
	}
	out.nodes = make([]place, low.net.Nodes())
	for k := range out.nodes {
		out.nodes[k].island = -1
	}
	for i, part := range parts {
		is := solvedIsland{}
		for local, d := range part.Devices {
			out.uses[d] = append(out.uses[d], place{i, local})
			if out.home[d].island < 0 {
				out.home[d] = place{i, local}
			}
			if why, ok := low.blocked[d]; ok && is.blocked == "" {
				is.blocked = why
			}
		}
		for local, n := range part.Nodes {
			if out.nodes[n].island < 0 {
				out.nodes[n] = place{i, local}
			}
		}
		is.err = out.failed
		out.islands = append(out.islands, is)
	}
	return out, parts
}

// islandTime ends the search for the steady state of one island in one setting: a thousand times what a usual one takes.
const islandTime = time.Minute

// solve finds the steady state of every island of the supply in one setting.
func (p *Plan) solve(ctx context.Context, set Setting, warm states) *outcome {
	// The conditions of a check fill the cores by themselves; a netlist exactly as written has only its islands.
	if set.Nominal {
		return p.solveWith(ctx, set, warm, 0, solver.Options{})
	}
	return p.solveWith(ctx, set, warm, 1, solver.Options{Steps: workingSteps, MaxSteps: workingMaxSteps, Tolerances: solver.Working})
}

// probe solves a setting on one grid, without an estimate of the numerical error: good enough to see which way a
// stress moves, not to prove one.
func (p *Plan) probe(ctx context.Context, set Setting, warm states) *outcome {
	return p.solveWith(ctx, set, warm, 1, solver.Options{Steps: workingSteps, OneGrid: true})
}

func (p *Plan) solveWith(ctx context.Context, set Setting, warm states, jobs int, effort solver.Options) *outcome {
	out, parts := p.lay(set)
	if out.failed != nil {
		return out
	}
	if set.Short != nil {
		out.only = out.joined(p.supply.Circuit, *set.Short)
	}
	inParallel(len(parts), jobs, func(i int) {
		if out.only != nil && !out.only[i] {
			return
		}
		is, own := &out.islands[i], effort
		own.Start = warm[i]
		limited, cancel := context.WithTimeout(ctx, islandTime)
		defer cancel()
		defer func() {
			if ctx.Err() == nil && is.solution == nil && errors.Is(is.err, context.DeadlineExceeded) {
				is.err = fmt.Errorf("no steady state was found within %v", islandTime)
			}
		}()
		is.solution, is.err = solver.SteadyState(limited, parts[i].Network, own)
		if is.err != nil && !errors.Is(is.err, solver.ErrInaccurate) && warm[i] != nil && limited.Err() == nil {
			own.Start = nil
			is.solution, is.err = solver.SteadyState(limited, parts[i].Network, own)
		}
	})
	return out
}

// joined are the island of an element and those that share a source with it.
func (o *outcome) joined(c *netlist.Circuit, id netlist.ElementID) map[int]bool {
	home := o.islandOf(c, id)
	joined := map[int]bool{home: true}
	for _, places := range o.uses {
		if slices.ContainsFunc(places, func(p place) bool { return p.island == home }) {
			for _, p := range places {
				joined[p.island] = true
			}
		}
	}
	return joined
}

// settle reads every stress of the outcome and gives up the waveforms, which are large; the periodic states are
// kept for neighbouring conditions.
func (p *Plan) settle(out *outcome) *outcome {
	p.extract(out, func(s Stress) { out.read = append(out.read, s) })
	for i := range out.islands {
		if s := out.islands[i].solution; s != nil {
			out.islands[i].solution = &solver.Solution{States: s.States}
		}
	}
	return out
}

// islandOf returns the index of the island in which an element was solved, -1 if none.
func (o *outcome) islandOf(c *netlist.Circuit, id netlist.ElementID) int {
	if o.low == nil {
		return -1
	}
	if d := o.low.devices[id]; d != none {
		return o.home[d].island
	}
	for _, n := range c.Elements[id].Nodes {
		if n != netlist.Ground {
			return o.nodes[n].island
		}
	}
	return -1
}
