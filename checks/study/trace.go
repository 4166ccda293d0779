package study

import (
	"context"
	"errors"
	"fmt"
	"math"

	"railproof/checks/solver"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

// SignalKind tells voltages from currents.
type SignalKind string

// The kinds of signals.
const (
	VoltageSignal SignalKind = "voltage" // V
	CurrentSignal SignalKind = "current" // A
	InputSignal   SignalKind = "input"   // V; of a regulator its input, positive in the working direction; else as voltage
)

// Signal is what a trace follows: the voltage of a node against ground, or the voltage or current of an element.
// The voltage of an element is that of its first terminal against its second, its current flows into the first:
// anode to cathode, collector to emitter, drain to source. Of a regulator they are its input above its output, and
// the current out of its output, both counted positive in the working direction.
type Signal struct {
	IsNode  bool
	Node    netlist.NodeID
	Element netlist.ElementID
	Kind    SignalKind
}

// Instant is a value and when it occurs, s.
type Instant struct{ Time, Value float64 }

// Waveform is one signal over the times of its trace.
type Waveform struct {
	Signal
	Name     string // element or "node:NAME"
	Unit     quantity.Unit
	Values   []float64 // one for each time; nil if there is no solution
	Max, Min Instant
	// Unproven says why there are no values, or why they prove nothing; empty when they are good.
	Unproven string
}

// Trace holds waveforms of one condition on a common time axis: every moment for which a value of any of them was
// solved. Where a signal has no value of its own it is interpolated. At a jump two values share one step.
type Trace struct {
	Condition Condition
	Held      bool      // regulator outputs are held at their set voltage, to show missing headroom
	Phase     float64   // of a cold start: where in the period it begins, as a part of it
	Period    float64   // s; 0: all sources constant
	Times     []float64 // s, into the period, or from switch-on
	Waveforms []Waveform
}

// Window says how long a trace is: a number of periods, or a time in s if that is not zero.
type Window struct {
	Periods  int
	Duration float64
}

// maxWindow is how many periods a trace may hold.
const maxWindow = 1000

// restPeriod stands for the period where all sources are constant, s.
const restPeriod = 0.02

// end is the length of the window in s.
func (w Window) end(period float64) float64 {
	if period == 0 {
		period = restPeriod
	}
	if w.Duration > 0 {
		return w.Duration
	}
	return float64(w.Periods) * period
}

// Fits reports whether a trace of this supply may be so long, and the most it may be, in s.
func (p *Plan) Fits(w Window) (most float64, ok bool) {
	most = Window{Periods: maxWindow}.end(p.period)
	return most, w.end(p.period) <= most
}

// Period is the period of the sources, s; 0: all are constant.
func (p *Plan) Period() float64 { return p.period }

// Setting returns what was solved in a condition, so that it can be traced; ok is false for a condition that no
// setting of a supply with its line on describes.
func (c Condition) Setting() (set Setting, ok bool) {
	if c.setting == nil || c.setting.LineOff {
		return Setting{}, false
	}
	return *c.setting, true
}

// Trace solves one setting, or integrates its cold start, and follows signals over a window.
func (p *Plan) Trace(ctx context.Context, set Setting, signals []Signal, w Window) *Trace {
	t := &Trace{Condition: p.condition(&set), Held: set.Held, Phase: set.Phase, Period: p.period}
	var out *outcome
	var islands []solver.Island
	if set.Cold {
		out, islands = p.lay(set)
	} else {
		out = p.solve(ctx, set, nil)
	}
	if out.low != nil {
		t.Period = out.low.net.Period
	}
	list := p.sources(out, signals)
	var found [][]*series
	if set.Cold {
		found = followCold(ctx, out, islands, list, w.end(t.Period))
	} else {
		found = followSteady(out, list, w.end(t.Period))
	}
	var all []*series
	for k, signal := range signals {
		t.Waveforms = append(t.Waveforms, p.waveform(out, signal, list[k]))
		all = append(all, found[k]...)
	}
	times, values := align(all)
	t.Times = times
	next := 0
	for k := range t.Waveforms {
		parts := found[k]
		if len(parts) > 0 {
			t.Waveforms[k].join(t.Times, parts, values[next:next+len(parts)])
		}
		next += len(parts)
	}
	return t
}

// join adds up the parts of a waveform and finds its extremes.
func (w *Waveform) join(times []float64, parts []*series, values [][]float64) {
	w.Values = values[0]
	for _, more := range values[1:] {
		for n := range w.Values {
			w.Values[n] += more[n]
		}
	}
	if len(parts) == 1 {
		w.Max, w.Min = parts[0].max, parts[0].min
		return
	}
	w.Max, w.Min = Instant{Value: math.Inf(-1)}, Instant{Value: math.Inf(1)}
	for n, v := range w.Values {
		if v > w.Max.Value {
			w.Max = Instant{times[n], v}
		}
		if v < w.Min.Value {
			w.Min = Instant{times[n], v}
		}
	}
}

// waveform is a waveform without values, with the reason if there can be none.
func (p *Plan) waveform(out *outcome, s Signal, list []source) Waveform {
	w := Waveform{Signal: s, Unit: quantity.Volt}
	if s.Kind == CurrentSignal {
		w.Unit = quantity.Ampere
	}
	c := p.supply.Circuit
	if s.IsNode {
		w.Name = "node:" + c.Nodes[s.Node].Name
	} else {
		w.Name = c.Elements[s.Element].Name
	}
	switch {
	case out.failed != nil:
		w.Unproven = out.failed.Error()
	case len(list) == 0 && s.IsNode:
		w.Unproven = "nothing fixes its voltage"
	case len(list) == 0 && !s.IsNode:
		w.Unproven = "it has no waveform of its own"
		if i := out.islandOf(c, s.Element); i >= 0 && out.islands[i].blocked != "" {
			w.Unproven = out.islands[i].blocked
		}
	}
	for _, part := range list {
		is := &out.islands[part.island]
		switch {
		case is.blocked != "":
			w.Unproven = is.blocked
		case is.err != nil && errors.Is(is.err, solver.ErrInaccurate) && is.solution != nil:
			w.Unproven = fmt.Sprintf("the curve is not settled to the tolerance: %v", is.err)
		case is.err != nil:
			w.Unproven = is.err.Error()
		}
	}
	return w
}
