package study

import (
	"fmt"
	"math"

	"railproof/checks/solver"
	"railproof/netlist"
)

// maxCycles is how many cycles of the fastest source a common period may hold before the steady state is
// not affordable.
const maxCycles = 400

// finalLevel is the constant value at which a waveform that does not repeat ends: the last point of a piecewise
// line, the end of an exponential or of a single pulse, the offset of a damped sine. ok is false for the others.
func finalLevel(w netlist.Waveform) (level float64, ok bool) {
	switch w := w.(type) {
	case netlist.Piecewise:
		if n := len(w.Levels); n > 0 {
			return w.Levels[n-1], true
		}
		return 0, true
	case netlist.Exponential:
		return w.Low, true
	case netlist.Pulse:
		return w.Low, w.Period <= 0
	case netlist.Sine:
		return w.Offset, w.Damping > 0
	}
	return 0, false
}

// commonPeriod returns the shortest time in which every periodic source repeats, 0 if none does. Waveforms that do
// not repeat count with the value at which they end; one that never settles is an error that names the element.
func commonPeriod(c *netlist.Circuit) (float64, error) {
	var frequencies []float64
	for k := range c.Elements {
		e := &c.Elements[k]
		var w netlist.Waveform
		switch d := e.Device.(type) {
		case netlist.VoltageSource:
			w = d.Wave
		case netlist.CurrentSource:
			w = d.Wave
		}
		switch w := w.(type) {
		case netlist.Sine:
			if w.Amplitude != 0 && w.Frequency > 0 {
				if w.Damping > 0 {
					continue // dies out
				}
				if w.Damping < 0 {
					return 0, fmt.Errorf("%s is a sine that grows without end, which has no steady state", e.Name)
				}
				frequencies = append(frequencies, w.Frequency)
			}
		case netlist.Pulse:
			if w.Period > 0 && w.Low != w.High {
				frequencies = append(frequencies, 1/w.Period)
			}
		}
	}
	if len(frequencies) == 0 {
		return 0, nil
	}
	fastest := frequencies[0]
	for _, f := range frequencies {
		fastest = math.Max(fastest, f)
	}
	for cycles := 1; cycles <= maxCycles; cycles++ {
		base := fastest / float64(cycles)
		fits := true
		for _, f := range frequencies {
			if r := f / base; math.Abs(r-math.Round(r)) > 1e-6*r || math.Round(r) < 1 {
				fits = false
				break
			}
		}
		if fits {
			return 1 / base, nil
		}
	}
	return 0, fmt.Errorf("the sources have no common period within %d cycles", maxCycles)
}

// wave turns a waveform into a solver source, scaled by a factor. In the periodic steady state a start delay
// only shifts the phase; from a cold start it is honoured.
// The line frequency is a toleranced parameter: the time of every waveform runs faster or slower with it.
func (p *Plan) wave(w netlist.Waveform, factor float64, set *Setting) solver.Wave {
	pace := p.factor(set, supplyWide, symbolFrequency)
	if pace == 1 {
		return p.drawnWave(w, factor, set)
	}
	if sine, ok := w.(netlist.Sine); ok {
		sine.Frequency *= pace
		sine.Delay /= pace
		return p.drawnWave(sine, factor, set)
	}
	drawn := p.drawnWave(w, factor, set)
	if _, constant := drawn.(solver.Level); constant {
		return drawn
	}
	return solver.Func(func(t float64) float64 { return drawn.At(t * pace) })
}

func (p *Plan) drawnWave(w netlist.Waveform, factor float64, set *Setting) solver.Wave {
	if level, ends := finalLevel(w); ends && !set.Cold {
		return solver.Level(level * factor)
	}
	switch w := w.(type) {
	case netlist.Constant:
		return solver.Level(w.Level * factor)
	case netlist.Sine:
		phase := w.PhaseDegrees*math.Pi/180 - 2*math.Pi*w.Frequency*w.Delay
		sine := solver.Sinusoid{
			Offset: w.Offset * factor, Amplitude: w.Amplitude * factor, Frequency: w.Frequency,
			Phase: phase + 2*math.Pi*w.Frequency*set.Phase*p.period/p.factor(set, supplyWide, symbolFrequency),
		}
		if set.Cold && (w.Delay > 0 || w.Damping != 0) && set.Nominal {
			rest := sine.Offset + sine.Amplitude*math.Sin(w.PhaseDegrees*math.Pi/180)
			return solver.Func(func(t float64) float64 {
				if t < w.Delay {
					return rest
				}
				return sine.Offset + (sine.At(t)-sine.Offset)*math.Exp(-(t-w.Delay)*w.Damping)
			})
		}
		return sine
	case netlist.Pulse:
		return solver.Func(pulse(w, factor, !set.Cold))
	case netlist.Piecewise:
		return solver.Func(piecewise(w, factor))
	case netlist.Exponential:
		return solver.Func(exponential(w, factor))
	}
	return solver.Level(0)
}

func pulse(w netlist.Pulse, factor float64, steady bool) func(t float64) float64 {
	return func(t float64) float64 {
		t -= w.Delay
		if t < 0 && !steady || w.Period <= 0 && t < 0 {
			return w.Low * factor
		}
		if w.Period > 0 {
			t = math.Mod(t, w.Period)
			if t < 0 {
				t += w.Period
			}
		}
		switch {
		case t < w.Rise:
			return factor * (w.Low + (w.High-w.Low)*t/w.Rise)
		case t < w.Rise+w.Width:
			return factor * w.High
		case t < w.Rise+w.Width+w.Fall:
			return factor * (w.High + (w.Low-w.High)*(t-w.Rise-w.Width)/w.Fall)
		}
		return factor * w.Low
	}
}

func piecewise(w netlist.Piecewise, factor float64) func(t float64) float64 {
	return func(t float64) float64 {
		n := len(w.Times)
		if n == 0 {
			return 0
		}
		if t <= w.Times[0] {
			return factor * w.Levels[0]
		}
		for k := 1; k < n; k++ {
			if t <= w.Times[k] {
				span := w.Times[k] - w.Times[k-1]
				if span <= 0 {
					continue
				}
				return factor * (w.Levels[k-1] + (w.Levels[k]-w.Levels[k-1])*(t-w.Times[k-1])/span)
			}
		}
		return factor * w.Levels[n-1]
	}
}

func exponential(w netlist.Exponential, factor float64) func(t float64) float64 {
	return func(t float64) float64 {
		v := w.Low
		if t >= w.RiseDelay {
			v += (w.High - w.Low) * (1 - math.Exp(-(t-w.RiseDelay)/w.RiseTau))
		}
		if t >= w.FallDelay {
			v += (w.Low - w.High) * (1 - math.Exp(-(t-w.FallDelay)/w.FallTau))
		}
		return factor * v
	}
}
