package solver

import (
	"context"
	"math"
)

// Trajectory is a solution sampled at uniform times.
type Trajectory struct {
	Start, Step float64     // s
	Periodic    bool        // the last sample is the first of the next period
	Nodes       [][]float64 // Nodes[n][k]: potential of node n at Start + k Step, V
	Currents    [][]float64 // Currents[c][k]: current of a branch, A; see Network.Branch
	branches    []Branch
	offset      []int                // device -> first branch
	inner       []Branch             // the branches themselves, without what MeasureAcross adds
	flux        map[Device][]float64 // flux linkage of each inductor, V s
	samples     int
	jumps       []jump
}

// Samples returns the number of samples, both ends of the interval included.
func (tr *Trajectory) Samples() int { return tr.samples }

// jump is a step inside which a junction cut a current off, so that voltages may jump. column is where the
// signals just before it are kept, behind the samples; share is the part of the step that passed before it.
type jump struct {
	sample, column int
	share          float64
}

// maxJumps is how many jumps a trajectory keeps.
const maxJumps = 64

// forget drops the jumps of an earlier recording.
func (tr *Trajectory) forget() {
	tr.jumps = tr.jumps[:0]
	for k := range tr.Nodes {
		tr.Nodes[k] = tr.Nodes[k][:tr.samples]
	}
	for k := range tr.Currents {
		tr.Currents[k] = tr.Currents[k][:tr.samples]
	}
	for d := range tr.flux {
		tr.flux[d] = tr.flux[d][:tr.samples]
	}
}

// close makes the first sample the last one, as they are in the periodic steady state.
func (tr *Trajectory) close() {
	last := tr.samples - 1
	for k := range tr.Nodes {
		tr.Nodes[k][0] = tr.Nodes[k][last]
	}
	for k := range tr.Currents {
		tr.Currents[k][0] = tr.Currents[k][last]
	}
	for d := range tr.flux {
		tr.flux[d][0] = tr.flux[d][last]
	}
}

// extend makes room for one more column behind the samples and returns its number, -1 if there is none left.
func (tr *Trajectory) extend() int {
	column := len(tr.Nodes[0])
	if column-tr.samples >= maxJumps {
		return -1
	}
	for k := range tr.Nodes {
		tr.Nodes[k] = append(tr.Nodes[k], 0)
	}
	for k := range tr.Currents {
		tr.Currents[k] = append(tr.Currents[k], 0)
	}
	for d := range tr.flux {
		tr.flux[d] = append(tr.flux[d], 0)
	}
	return column
}

// Voltage returns the voltage of b at sample k.
func (tr *Trajectory) Voltage(b Branch, k int) float64 { return tr.Nodes[b.A][k] - tr.Nodes[b.B][k] }

// BranchOf returns the branch and the current samples of branch k of device d.
func (tr *Trajectory) BranchOf(d Device, k int) (Branch, []float64) {
	c := tr.offset[d] + k
	return tr.branches[c], tr.Currents[c]
}

func newTrajectory(n *Network, start, step float64, samples int) *Trajectory {
	tr := &Trajectory{Start: start, Step: step, offset: make([]int, len(n.devices)), flux: map[Device][]float64{}, samples: samples}
	for k := range n.devices {
		tr.offset[k] = len(tr.branches)
		tr.branches = append(tr.branches, n.devices[k].branches...)
		tr.inner = append(tr.inner, n.devices[k].branches...)
		if n.devices[k].kind == inductor {
			tr.flux[Device(k)] = make([]float64, samples)
		}
		if m := n.devices[k].measured; m != nil {
			tr.branches[tr.offset[k]] = *m
		}
	}
	signals := n.nodes + len(tr.branches)
	block := make([]float64, signals*samples)
	cut := func() []float64 {
		s := block[:samples:samples]
		block = block[samples:]
		return s
	}
	for range n.nodes {
		tr.Nodes = append(tr.Nodes, cut())
	}
	for range tr.branches {
		tr.Currents = append(tr.Currents, cut())
	}
	return tr
}

// record integrates steps steps from state a.x at time start, with every unknown sampled at each step.
// The first sample is the state at start as seen by the last stage before it, so a.stage must stand at start
// (after a period that ended there); for a cold start it is taken from the first step instead.
func (a *march) record(ctx context.Context, start float64, steps int, cold bool) (*Trajectory, error) {
	tr := newTrajectory(a.sys.net, start, a.step, steps+1)
	z := make([]float64, a.sys.unknowns)
	if !cold {
		a.sample(tr, 0, z)
	}
	a.onJump = a.keepJump(tr, z)
	defer func() { a.onJump = nil }()
	for k := range steps {
		a.sampleNumber = k + 1
		if k&63 == 0 && ctx.Err() != nil {
			return nil, ctx.Err()
		}
		if err := a.advance(start+float64(k)*a.step, false); err != nil {
			return nil, err
		}
		a.sample(tr, k+1, z)
	}
	return tr, nil
}

// keepJump returns what a march calls just before a junction cuts off: it keeps the signals there.
func (a *march) keepJump(tr *Trajectory, z []float64) func(share float64) {
	return func(share float64) {
		if len(tr.jumps) > 0 && tr.jumps[len(tr.jumps)-1].sample == a.sampleNumber {
			return
		}
		if column := tr.extend(); column >= 0 {
			a.sample(tr, column, z)
			tr.jumps = append(tr.jumps, jump{a.sampleNumber, column, share})
		}
	}
}

// sample writes the solution of the last stage into column k.
func (a *march) sample(tr *Trajectory, k int, z []float64) {
	st, s := a.last, a.sys
	st.unknowns(z, a.pred, a.u)
	for n := 1; n < s.net.nodes; n++ {
		tr.Nodes[n][k] = z[n-1]
	}
	capacitorIndex, sourceIndex, portIndex := 0, 0, 0
	for j, d := range s.inductors {
		tr.flux[d][k] = s.stateOf(len(s.capacitors)+j, z)
	}
	for d := range s.net.devices {
		dev := &s.net.devices[d]
		c := tr.offset[d]
		switch dev.kind {
		case resistor:
			if dev.value != 0 {
				b := dev.branches[0]
				tr.Currents[c][k] = (at(z, b.A) - at(z, b.B)) / dev.value
			} else {
				tr.Currents[c][k] = z[s.current[d]]
			}
		case capacitor:
			b := dev.branches[0]
			tr.Currents[c][k] = dev.value / st.r.sigma * (at(z, b.A) - at(z, b.B) - a.pred[capacitorIndex])
			capacitorIndex++
		case currentSource:
			tr.Currents[c][k] = a.u[sourceIndex]
			sourceIndex++
		case voltageSource:
			tr.Currents[c][k] = z[s.current[d]]
			sourceIndex++
		case inductor, voltageControlledVoltage, currentControlledVoltage:
			tr.Currents[c][k] = z[s.current[d]]
		case voltageControlledCurrent:
			tr.Currents[c][k] = dev.value * (at(z, dev.control.A) - at(z, dev.control.B))
		case currentControlledCurrent:
			tr.Currents[c][k] = dev.value * z[s.current[dev.partner]]
		case nonlinear:
			for p := range dev.branches {
				port := &dev.ports[p]
				switch port.output {
				case outVoltage:
					tr.Currents[c+p][k] = z[s.current[d]]
				case outCurrent:
					j := portIndex + p
					tr.Currents[c+p][k] = st.w[j] + port.guess*st.v[j]
				}
			}
			portIndex += len(dev.ports)
		}
	}
}

// Stats summarises a sampled signal over its interval.
type Stats struct {
	Max, Min  Extreme
	Mean, RMS float64
}

// Ripple is the RMS value of the signal less its mean.
func (s Stats) Ripple() float64 { return math.Sqrt(math.Max(0, s.RMS*s.RMS-s.Mean*s.Mean)) }

// tie is the relative difference below which two extrema count as equal and the earlier one is shown: the half
// cycles of a bridge differ by rounding only.
const tie = 1e-7

// Summary computes the statistics of a signal; value(k) is its sample k. Means are by the trapezoidal rule,
// which for a periodic signal is also the most accurate; extrema are looked
// for between the samples too, see refine.
func (tr *Trajectory) Summary(value func(k int) float64) Stats {
	n := tr.Samples()
	st := Stats{Max: Extreme{Value: math.Inf(-1)}, Min: Extreme{Value: math.Inf(1)}}
	maxAt, minAt := 0, 0
	for k := range n {
		v := value(k)
		if k == 0 || v > st.Max.Value+tie*math.Abs(st.Max.Value) {
			st.Max.Value, maxAt = v, k
		}
		if k == 0 || v < st.Min.Value-tie*math.Abs(st.Min.Value) {
			st.Min.Value, minAt = v, k
		}
	}
	st.Mean, st.RMS = tr.integrate(value)
	st.RMS = math.Sqrt(st.RMS)
	st.Max = tr.refine(value, maxAt)
	st.Min = tr.refine(value, minAt)
	for _, j := range tr.jumps {
		at := tr.Start + (float64(j.sample-1)+j.share)*tr.Step
		if v := value(j.column); v > st.Max.Value {
			st.Max = Extreme{Value: v, At: at}
		} else if v < st.Min.Value {
			st.Min = Extreme{Value: v, At: at}
		}
	}
	return st
}

// integrate returns the mean of a signal and of its square, by the trapezoidal rule on both sides of a jump.
func (tr *Trajectory) integrate(value func(k int) float64) (mean, square float64) {
	n := tr.Samples()
	if n < 2 {
		v := value(0)
		return v, v * v
	}
	last, next := value(0), 0
	for k := 1; k < n; k++ {
		v := value(k)
		if next < len(tr.jumps) && tr.jumps[next].sample == k {
			j := tr.jumps[next]
			next++
			before := value(j.column)
			mean += j.share*0.5*(last+before) + (1-j.share)*v
			square += j.share*0.5*(last*last+before*before) + (1-j.share)*v*v
		} else {
			mean += 0.5 * (last + v)
			square += 0.5 * (last*last + v*v)
		}
		last = v
	}
	return mean / float64(n-1), square / float64(n-1)
}

// Mean returns the mean of a signal over the interval.
func (tr *Trajectory) Mean(value func(k int) float64) float64 {
	mean, _ := tr.integrate(value)
	return mean
}

// MeanPower returns the mean power that branch k of device d takes in. For an inductor it is the mean of
// i d(flux)/dt, summed exactly over the samples, so that a lossless one takes none in the steady state.
func (tr *Trajectory) MeanPower(d Device, k int) float64 {
	b, current := tr.BranchOf(d, k)
	flux, isInductor := tr.flux[d]
	if !isInductor {
		return tr.Mean(func(n int) float64 { return tr.Voltage(b, n) * current[n] })
	}
	own := tr.inner[tr.offset[d]+k]
	power := tr.Mean(func(n int) float64 { return (tr.Voltage(b, n) - tr.Voltage(own, n)) * current[n] })
	work := 0.0
	for n := 1; n < tr.samples; n++ {
		work += 0.5 * (current[n] + current[n-1]) * (flux[n] - flux[n-1])
	}
	if last := tr.samples - 1; tr.Periodic {
		// What the energy at both ends still differs by is the error of periodicity, not power.
		work -= 0.5 * (flux[last]*current[last] - flux[0]*current[0])
	}
	return power + work/(tr.Step*float64(tr.samples-1))
}

// Sum returns a trajectory of one device whose voltage is that of the first of the given devices and whose
// current is the sum of theirs: a source that several islands share. Grids may differ by whole factors.
func Sum(list []*Trajectory, devices []Device) (*Trajectory, Device) {
	coarsest := list[0]
	for _, tr := range list {
		if tr.Samples() < coarsest.Samples() {
			coarsest = tr
		}
	}
	n := New(3)
	d := n.AddResistor(1, 2, 1)
	sum := newTrajectory(n, coarsest.Start, coarsest.Step, coarsest.Samples())
	sum.Periodic = coarsest.Periodic
	for k := range coarsest.Samples() {
		for j, tr := range list {
			stride := (tr.Samples() - 1) / (coarsest.Samples() - 1)
			b, current := tr.BranchOf(devices[j], 0)
			sum.Currents[0][k] += current[k*stride]
			if j == 0 {
				sum.Nodes[1][k], sum.Nodes[2][k] = tr.Nodes[b.A][k*stride], tr.Nodes[b.B][k*stride]
			}
		}
	}
	return sum, d
}
