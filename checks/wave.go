package checks

import (
	"context"
	"fmt"
	"math"

	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

// Wave is the curve whose extreme a finding judges, in the condition in which it is worst.
type Wave struct {
	Title  string // "reverse voltage of D1"
	Unit   quantity.Unit
	Cold   bool // from switch-on; else over two periods
	Times  []float64
	Values []float64
	Worst  study.Instant
	Lines  []WaveLine // what the curve must stay on one side of
}

// WaveLine is a limit or a rating across a wave.
type WaveLine struct {
	Name   string // "limit", "VRRM"
	Value  float64
	Rating bool
}

// side says which curve shows a stress: a signal, turned over if its largest negative values are what counts.
type side struct {
	kind   study.SignalKind
	sign   float64 // 0: whichever way the larger magnitude is positive
	floor  bool    // the smallest value is the worst
	words  string
	within bool // the stress is how far the curve is above a level, not its value
}

// sides are the stresses that a curve shows; of mean values, powers and integrals there is none.
var sides = map[study.Quantity]side{
	study.PeakReverseVoltage: {kind: study.VoltageSignal, sign: -1, words: "reverse voltage"},
	study.ReverseVoltage:     {kind: study.VoltageSignal, sign: -1, words: "reverse voltage"},
	study.MaxVoltage:         {kind: study.VoltageSignal, words: "voltage"},
	study.MinVoltage:         {kind: study.VoltageSignal, words: "voltage"},
	study.SteadyMaxVoltage:   {kind: study.VoltageSignal, words: "voltage"},
	study.PeakVoltage:        {kind: study.VoltageSignal, words: "voltage"},
	study.MaxVCE:             {kind: study.VoltageSignal, words: "collector-emitter voltage"},
	study.MaxVDS:             {kind: study.VoltageSignal, words: "drain-source voltage"},
	study.PeakCurrent:        {kind: study.CurrentSignal, words: "current"},
	study.SurgeCurrent:       {kind: study.CurrentSignal, words: "current"},
	study.MinHeadroom:        {kind: study.InputSignal, sign: 1, floor: true, words: "input voltage", within: true},
	study.MaxInputVoltage:    {kind: study.InputSignal, sign: 1, words: "input voltage"},
	study.MinDifferential:    {kind: study.VoltageSignal, sign: 1, floor: true, words: "input above output"},
	study.MaxDifferential:    {kind: study.VoltageSignal, sign: 1, words: "input above output"},
	study.MaxOutputCurrent:   {kind: study.CurrentSignal, sign: 1, words: "output current"},
	study.MinOutputCurrent:   {kind: study.CurrentSignal, sign: 1, floor: true, words: "output current"},
	study.LeastCurrent:       {kind: study.CurrentSignal, floor: true, words: "current"},
}

// shown reports whether a wave of a finding is wanted: it is violated, or a headline check that is proven.
func (f *Finding) shown() bool {
	return f.Stress != nil && f.Limit != nil && (f.Verdict == Violated || f.Verdict == Proven && f.Headline)
}

// waveGroup is the findings of one condition, solved together.
type waveGroup struct {
	set      study.Setting
	findings []*Finding
	signals  []study.Signal
}

// addWaves follows the curves of the findings whose stress is a peak or a trough of one.
func addWaves(ctx context.Context, c *netlist.Circuit, plan *study.Plan, findings []Finding) {
	var groups []*waveGroup
	index := map[string]*waveGroup{}
	for k := range findings {
		f := &findings[k]
		if !f.shown() {
			continue
		}
		view, ok := sides[f.Stress.Quantity]
		set, solved := f.Stress.Condition.Setting()
		if !ok || !solved {
			continue
		}
		signal, ok := signalOf(c, f.Stress.Element, view.kind)
		if !ok {
			continue
		}
		key := fmt.Sprintf("%v %v", f.Stress.Condition, set)
		g := index[key]
		if g == nil {
			g = &waveGroup{set: set}
			index[key] = g
			groups = append(groups, g)
		}
		g.findings, g.signals = append(g.findings, f), append(g.signals, signal)
	}
	for _, g := range groups {
		t := plan.Trace(ctx, g.set, g.signals, waveWindow(g, plan.Period()))
		for k, f := range g.findings {
			f.Wave = newWave(f, t, &t.Waveforms[k])
		}
	}
}

// signalOf is the signal of an element or "node:NAME".
func signalOf(c *netlist.Circuit, name string, kind study.SignalKind) (study.Signal, bool) {
	if id, ok := c.Find(name); ok {
		return study.Signal{Element: id, Kind: kind}, true
	}
	if len(name) > len(nodePrefix) && name[:len(nodePrefix)] == nodePrefix {
		if id, ok := c.FindNode(name[len(nodePrefix):]); ok {
			return study.Signal{IsNode: true, Node: id, Kind: kind}, true
		}
	}
	return study.Signal{}, false
}

// Lengths of the wave of a cold start, in periods.
const (
	leastColdWave = 5
	mostColdWave  = 60
)

// waveWindow is two periods, from a cold start long enough to hold the worst moments.
func waveWindow(g *waveGroup, period float64) study.Window {
	if !g.set.Cold {
		return study.Window{Periods: steadyPeriods}
	}
	n := leastColdWave
	for _, f := range g.findings {
		if at := f.Stress.Phase; period > 0 && !math.IsNaN(at) && at/period < mostColdWave {
			n = max(n, int(at/period)+2)
		}
	}
	return study.Window{Periods: min(n, mostColdWave)}
}

// otherCurve is the part of a stress by which the extreme of a curve may differ from it before the curve counts as
// another one than was judged.
const otherCurve = 0.02

// newWave turns a waveform into the wave of a finding, nil if it does not show its stress.
func newWave(f *Finding, t *study.Trace, w *study.Waveform) *Wave {
	view := sides[f.Stress.Quantity]
	if w.Values == nil || w.Unit != f.Stress.Unit {
		return nil
	}
	sign, name := view.sign, f.Stress.Element
	floor := view.floor || f.Floor
	switch {
	case w.IsNode:
		sign, name = 1, name[len(nodePrefix):]
	case sign == 0 && -w.Min.Value > w.Max.Value:
		sign = -1
	case sign == 0:
		sign = 1
	}
	wave := &Wave{Title: view.words + " of " + name, Unit: w.Unit, Cold: t.Condition.Start == "cold", Times: t.Times, Worst: w.Max, Values: w.Values}
	if floor == (sign > 0) {
		wave.Worst = w.Min
	}
	if sign < 0 {
		wave.Values = make([]float64, len(w.Values))
		for k, v := range w.Values {
			wave.Values[k] = -v
		}
		wave.Worst.Value = -wave.Worst.Value
	}
	if view.within {
		level := wave.Worst.Value - f.Stress.Value
		wave.Lines = []WaveLine{{Name: "VOUT + VDO", Value: level, Rating: true}}
		if f.Limit.Value != 0 {
			wave.Lines = append(wave.Lines, WaveLine{Name: "with the reserve", Value: level + f.Limit.Value})
		}
		return wave
	}
	if math.Abs(wave.Worst.Value-f.Stress.Value) > otherCurve*math.Abs(f.Stress.Value)+f.Stress.Error {
		return nil
	}
	wave.Lines = []WaveLine{{Name: "limit", Value: f.Limit.Value}}
	if r := f.Rating; r != nil && r.Unit == w.Unit && r.Value != f.Limit.Value && !f.Floor {
		wave.Lines = append(wave.Lines, WaveLine{Name: string(r.Symbol), Value: r.Value, Rating: true})
	} else if r != nil && r.Unit == w.Unit && r.Value == f.Limit.Value {
		wave.Lines = []WaveLine{{Name: string(r.Symbol), Value: r.Value, Rating: true}}
	}
	return wave
}
