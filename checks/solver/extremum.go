package solver

import "math"

// Extreme is a largest or smallest value and when it occurs. Doubt is how much further the signal may have gone between
// two samples.
type Extreme struct{ Value, At, Doubt float64 }

// refine looks for an extremum around sample k, which holds the largest or smallest value. At a smooth crest it is the
// vertex of the parabola through the three samples there. At a kink, where a diode starts or stops to conduct, it is
// the sample, in doubt by as much as the curves before and after it go on until they meet.
func (tr *Trajectory) refine(value func(k int) float64, k int) Extreme {
	e := Extreme{Value: value(k), At: tr.Start + float64(k)*tr.Step}
	last := tr.Samples() - 1
	if last < 8 || !tr.Periodic && (k < 3 || k > last-3) {
		return e
	}
	var s [7]float64 // the samples around k, s[3] being sample k itself
	for j := range s {
		s[j] = value((k + j - 3 + last) % last)
	}
	s[3] = e.Value
	a, b, c := s[2], s[3], s[4]
	curve := a - 2*b + c
	before, after := s[1]-2*a+b, b-2*c+s[5]
	if curve == 0 {
		return e
	}
	if before/curve < 0.3 || before/curve > 3 || after/curve < 0.3 || after/curve > 3 {
		e.Doubt = kink(s)
		return e
	}
	shift := 0.5 * (a - c) / curve
	if math.Abs(shift) > 1 {
		return e
	}
	return Extreme{Value: b - 0.25*(a-c)*shift, At: e.At + shift*tr.Step}
}

// kink is how far beyond the extreme sample s[3] the parabolas through three samples on either side meet, in the
// interval before it or after it; 0 where they do not, or leave what the neighbouring samples span.
func kink(s [7]float64) float64 {
	beyond := 0.0
	reach := math.Max(math.Abs(s[3]-s[2]), math.Abs(s[3]-s[4]))
	outward := math.Copysign(1, s[3]-0.5*(s[2]+s[4]))
	for _, from := range []int{2, 3} { // the interval from sample s[from] to s[from+1]
		left := parabola{s[from-2], s[from-1], s[from]}
		right := parabola{s[from+3], s[from+2], s[from+1]} // seen backwards
		if v, met := meet(left, right); met && math.Abs(v-s[3]) <= reach {
			beyond = math.Max(beyond, outward*(v-s[3]))
		}
	}
	return beyond
}

// meet finds the value at which a curve from 0 on and another one seen backwards from 1 cross between the two, by
// bisection.
func meet(left, right parabola) (v float64, ok bool) {
	gap := func(x float64) float64 { return left.at(x) - right.at(1-x) }
	low, high := 0.0, 1.0
	rising := gap(high) > 0
	if (gap(low) > 0) == rising {
		return 0, false
	}
	for range 40 {
		if mid := 0.5 * (low + high); (gap(mid) > 0) == rising {
			high = mid
		} else {
			low = mid
		}
	}
	return left.at(low), true
}

// parabola runs through three samples, the last of them at 0.
type parabola [3]float64

// at is its value x steps beyond the last sample.
func (p parabola) at(x float64) float64 {
	slope, curve := 0.5*(3*p[2]-4*p[1]+p[0]), p[2]-2*p[1]+p[0]
	return p[2] + slope*x + 0.5*curve*x*x
}
