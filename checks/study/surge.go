package study

import (
	"math"

	"railproof/checks/solver"
	"railproof/netlist"
)

// watched is a part whose surge is followed through a start.
type watched struct {
	device solver.Device
	id     netlist.ElementID
	diode  bool
	reads  func(s *surge) []reached
}

// reached is a stress of a start.
type reached struct {
	quantity  Quantity
	value, at float64
}

// surge follows the current and the voltage of one part through a start.
type surge struct {
	peak, at float64
	integral float64 // largest of one conduction pulse, at most a period long, A^2 s
	running  float64
	since    float64
	last     float64        // peak of the last period
	highest  solver.Extreme // of the voltage
	lowest   solver.Extreme
}

// bursts are the stresses of a start that diodes alone have.
func bursts(s *surge) []reached {
	return []reached{{SurgeCurrent, s.peak, s.at}, {SurgeI2t, s.integral, math.NaN()}}
}

func diodeStart(s *surge) []reached {
	return append(bursts(s), reached{PeakReverseVoltage, math.Max(0, -s.lowest.Value), s.lowest.At})
}

func capacitorStart(s *surge) []reached {
	return []reached{{MaxVoltage, s.highest.Value, s.highest.At}, {MinVoltage, s.lowest.Value, s.lowest.At}}
}

func positiveInputStart(s *surge) []reached {
	return []reached{{MaxInputVoltage, s.highest.Value, s.highest.At}}
}

func negativeInputStart(s *surge) []reached {
	return []reached{{MaxInputVoltage, -s.lowest.Value, s.lowest.At}}
}

// follow takes a period into account. A pulse is conduction above a thousandth of the largest current so far.
func (s *surge) follow(tr *solver.Trajectory, d solver.Device, branch int, period float64) {
	b, i := tr.BranchOf(d, branch)
	s.last = 0
	for k := range tr.Samples() {
		t := tr.Start + float64(k)*tr.Step
		if v := tr.Voltage(b, k); v > s.highest.Value {
			s.highest = solver.Extreme{Value: v, At: t}
		} else if v < s.lowest.Value {
			s.lowest = solver.Extreme{Value: v, At: t}
		}
		if i[k] > s.peak {
			s.peak, s.at = i[k], t
		}
		s.last = math.Max(s.last, i[k])
		if k == 0 {
			continue
		}
		if i[k] > 1e-3*s.peak && t-s.since < period {
			s.running += 0.5 * tr.Step * (i[k]*i[k] + i[k-1]*i[k-1])
			s.integral = math.Max(s.integral, s.running)
		} else {
			s.running, s.since = 0, t
		}
	}
	st := tr.Summary(func(k int) float64 { return i[k] })
	if st.Max.Value > s.peak {
		s.peak, s.at = st.Max.Value, st.Max.At
	}
}
