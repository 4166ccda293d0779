package netlist

// Waveform is what an independent source puts out over time. The concrete types below are the only ones.
type Waveform interface{ waveform() }

// Constant is a DC value.
type Constant struct{ Level float64 }

// Sine is SIN(offset amplitude frequency delay damping phase). Amplitude is the peak.
type Sine struct {
	Offset, Amplitude float64
	Frequency         float64 // Hz
	Delay             float64 // s
	Damping           float64 // 1/s
	PhaseDegrees      float64
}

// Pulse is PULSE(v1 v2 td tr tf pw per).
type Pulse struct {
	Low, High                        float64
	Delay, Rise, Fall, Width, Period float64
}

// Exponential is EXP(v1 v2 td1 tau1 td2 tau2).
type Exponential struct {
	Low, High                              float64
	RiseDelay, RiseTau, FallDelay, FallTau float64
}

// Piecewise is PWL(t1 v1 t2 v2 ...).
type Piecewise struct{ Times, Levels []float64 }

func (Constant) waveform()    {}
func (Sine) waveform()        {}
func (Pulse) waveform()       {}
func (Exponential) waveform() {}
func (Piecewise) waveform()   {}
