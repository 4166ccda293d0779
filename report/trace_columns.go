package report

import (
	"math"
	"strconv"

	"railproof/checks/study"
)

// thin leaves of a curve what can be seen in a number of columns: of each column the first, the lowest, the highest
// and the last point, in order of time, so that no peak is lost.
func thin(times, values []float64, columns int) []study.Instant {
	n := len(times)
	if n == 0 || columns < 1 {
		return nil
	}
	start, span := times[0], times[n-1]-times[0]
	column := func(k int) int {
		if span <= 0 {
			return 0
		}
		return min(columns-1, int(float64(columns)*(times[k]-start)/span))
	}
	var kept []study.Instant
	for first := 0; first < n; {
		last, lowest, highest := first, first, first
		for k := first; k < n && column(k) == column(first); k++ {
			last = k
			if values[k] < values[lowest] {
				lowest = k
			}
			if values[k] > values[highest] {
				highest = k
			}
		}
		at := -1
		for _, k := range [4]int{first, min(lowest, highest), max(lowest, highest), last} {
			if k > at {
				kept = append(kept, study.Instant{Time: times[k], Value: values[k]})
				at = k
			}
		}
		first = last + 1
	}
	return kept
}

// spanOf is the smallest and the largest value of curves.
func spanOf(curves ...[]study.Instant) (low, high float64) {
	low, high = math.Inf(1), math.Inf(-1)
	for _, curve := range curves {
		for _, p := range curve {
			low, high = math.Min(low, p.Value), math.Max(high, p.Value)
		}
	}
	return low, high
}

// flat is the part of its magnitude that the range of an axis is at least, so that rounding does not fill a drawing.
const flat = 0.01

// roomFor widens the range of an axis by a margin on both sides.
func roomFor(low, high float64) (float64, float64) {
	least := flat * math.Max(math.Abs(low), math.Abs(high))
	if least == 0 {
		least = 1
	}
	if high-low < least {
		middle := low + (high-low)/2
		low, high = middle-least/2, middle+least/2
	}
	margin := 0.06 * (high - low)
	return low - margin, high + margin
}

// roundMark is a round number on an axis.
type roundMark struct {
	value float64
	label string
}

// roundMarks are the multiples of 1, 2 or 5 times a power of ten between two values, about so many.
func roundMarks(low, high float64, about int) []roundMark {
	span := high - low
	if !(span > 0) || math.IsInf(span, 0) {
		return nil
	}
	power := math.Floor(math.Log10(span / float64(about)))
	step := math.Pow(10, power)
	for _, by := range []float64{2, 2.5, 2} {
		if span/step <= float64(about)+1 {
			break
		}
		step *= by
	}
	decimals := max(0, int(math.Ceil(-math.Log10(step)-1e-9)))
	var list []roundMark
	for n := math.Ceil(low/step - 1e-9); n <= high/step+1e-9; n++ {
		v := n * step
		if n == 0 {
			v = 0
		}
		list = append(list, roundMark{v, strconv.FormatFloat(v, 'f', decimals, 64)})
	}
	return list
}
