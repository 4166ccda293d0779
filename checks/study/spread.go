package study

import (
	"context"
	"encoding/binary"
	"math"
	"math/rand/v2"
	"slices"
	"strconv"
)

// A spread is a Monte Carlo study: line, loads and tolerances drawn at random within the same ends as those of the
// worst case. It samples steady states only; what a bound holds of switch-on, line off or a shorted output is
// not sampled. Every value is kept, so that studies of separate trials join into one exactly.

// Distribution says how a tolerance is spread between its ends.
type Distribution string

// The distributions. Line, loads and ambient are uniform under both: their ranges are no tolerances.
const (
	Uniform Distribution = "uniform"
	Normal  Distribution = "normal" // the ends at 3 sigma, and cut off there
)

// normalEnds is at how many sigmas the ends of a tolerance are.
const normalEnds = 3

// position turns a uniform number of 0..1 into the position of a tolerance, -1..1.
func (d Distribution) position(u float64) float64 {
	if d != Normal {
		return 2*u - 1
	}
	inside := math.Erf(normalEnds / math.Sqrt2)
	return math.Erfinv(inside*(2*u-1)) * math.Sqrt2 / normalEnds
}

// VariedKind is what sort of circumstance a spread varies.
type VariedKind string

// The kinds, in the order in which their numbers are drawn.
const (
	VariedLine      VariedKind = "line"      // position 0 (low) to 1 (high)
	VariedLoad      VariedKind = "load"      // position 0 (light) to 1 (full)
	VariedTolerance VariedKind = "tolerance" // position -1 (low end) to 1 (high end)
	VariedAmbient   VariedKind = "ambient"   // position 0 (low) to 1 (high); it stands among the tolerances
)

// Varied is one circumstance that a spread varies.
type Varied struct {
	Kind      VariedKind
	Name      string  // "line", "RL", "C1", "U1 VOUT"
	Symbol    string  // of the toleranced quantity
	Low, High float64 // relative ends of a tolerance; of the ambient, degC
}

// Sampled is a stress of a spread and its bound, the worst case.
type Sampled struct {
	Bound    Stress
	Nominal  float64 // nominal line, full load, every tolerance at nought; NaN if unsolved
	Headline bool
	Proves   []string // checks that call the part proven by this bound
	Beyond   []uint64 // trials that lie beyond the bound, ascending
}

// UnsolvedTrial is a trial in which a stress that has a bound was not found.
type UnsolvedTrial struct {
	Trial uint64
	Why   string
}

// Range is a run of trials, both ends included.
type Range struct{ First, Last uint64 }

// Spread holds the values of every trial.
type Spread struct {
	Seed         uint64
	Distribution Distribution
	Varied       []Varied // in the order of the numbers drawn
	Stresses     []Sampled
	Trials       []Range     // ascending, apart from one another
	Values       [][]float64 // a row a trial, a column a stress; NaN where unsolved
	Unsolved     []UnsolvedTrial
	Parts        []UnsolvedIsland // parts of the circuit that the worst case could not solve
}

// SpreadOptions says which trials to solve.
type SpreadOptions struct {
	Seed, First  uint64
	Trials       int
	Distribution Distribution
	Jobs         int
	Begin        func(s *Spread) error // called when the stresses are known, before the first trial; may be nil
	Done         func()                // called after each trial, from several cores at once; may be nil
}

// draw gives n numbers of 0..1 that depend on the seed and the trial alone.
func draw(seed, trial uint64, n int) []float64 {
	key := [32]byte{}
	binary.LittleEndian.PutUint64(key[0:], seed)
	binary.LittleEndian.PutUint64(key[8:], trial)
	copy(key[16:], "railproof spread")
	source, numbers := rand.NewChaCha8(key), make([]float64, n)
	for k := range numbers {
		numbers[k] = float64(source.Uint64()>>11) / (1 << 53)
	}
	return numbers
}

// Positions are where the varied circumstances stand in a trial, in their order.
func (s *Spread) Positions(trial uint64) []float64 {
	at := draw(s.Seed, trial, len(s.Varied))
	for k, v := range s.Varied {
		if v.Kind == VariedTolerance {
			at[k] = s.Distribution.position(at[k])
		}
	}
	return at
}

// trial is the condition at the positions of what is varied.
func (p *Plan) trial(positions []float64) Setting {
	loads := len(p.loads)
	set := Setting{Line: LineBetween, LineAt: positions[0], Shift: slices.Clone(positions[1+loads:])}
	if loads > 0 {
		set.Loads = positions[1 : 1+loads]
	}
	if k, ok := p.index[statedKey{supplyWide, symbolAmbient}]; ok {
		set.Shift[k] = p.ambientShift(set.Shift[k])
	}
	return set
}

// ambientShift turns a position of the ambient from 0 (low) to 1 (high) into the shift of its parameter.
func (p *Plan) ambientShift(at float64) float64 {
	middle := p.temperature(&Setting{})
	t := p.Ambient[0] + at*(p.Ambient[1]-p.Ambient[0])
	switch {
	case t < middle:
		return -(middle - t) / (middle - p.Ambient[0])
	case t > middle:
		return (t - middle) / (p.Ambient[1] - middle)
	}
	return 0
}

// varied lists what a spread varies.
func (p *Plan) varied() []Varied {
	list := []Varied{{Kind: VariedLine, Name: "line"}}
	for _, l := range p.loads {
		list = append(list, Varied{Kind: VariedLoad, Name: p.supply.Circuit.Elements[l.element].Name})
	}
	for k, q := range p.Parameters {
		kind := VariedTolerance
		if q.Symbol == symbolAmbient {
			kind = VariedAmbient
		}
		list = append(list, Varied{kind, p.ParameterName(k), string(q.Symbol), q.Low, q.High})
	}
	return list
}

// Sample solves trials against the worst-case table of a supply.
func Sample(ctx context.Context, t *Table, o SpreadOptions) (*Spread, error) {
	p := t.Plan
	s := &Spread{
		Seed: o.Seed, Distribution: o.Distribution, Varied: p.varied(), Parts: t.Unsolved,
		Trials: []Range{{o.First, o.First + uint64(o.Trials) - 1}},
	}
	n := newTrials(ctx, t, s)
	if o.Begin != nil {
		if err := o.Begin(s); err != nil {
			return nil, err
		}
	}
	reasons := make([]string, o.Trials)
	beyond := make([][]int, o.Trials)
	s.Values = make([][]float64, o.Trials)
	inParallel(o.Trials, o.Jobs, func(k int) {
		if ctx.Err() != nil {
			return
		}
		s.Values[k], beyond[k], reasons[k] = n.solve(ctx, o.First+uint64(k))
		if o.Done != nil {
			o.Done()
		}
	})
	for k, why := range reasons {
		for _, column := range beyond[k] {
			s.Stresses[column].Beyond = append(s.Stresses[column].Beyond, o.First+uint64(k))
		}
		if why != "" {
			s.Unsolved = append(s.Unsolved, UnsolvedTrial{o.First + uint64(k), why})
		}
	}
	return s, ctx.Err()
}

// keptDigits is to how many significant digits a value is kept: as many as a file holds.
const keptDigits = 10

// kept rounds a value to what a file holds of it.
func kept(v float64) float64 {
	rounded, err := strconv.ParseFloat(strconv.FormatFloat(v, 'g', keptDigits, 64), 64)
	switch {
	case err != nil || math.IsInf(v, 0):
		return math.NaN()
	case rounded == 0:
		return 0 // a negative zero too
	}
	return rounded
}
