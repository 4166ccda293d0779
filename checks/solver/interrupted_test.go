package solver

import (
	"context"
	"errors"
	"testing"
)

// ending is a context that ends after it was asked a number of times.
type ending struct {
	context.Context
	left int
}

func (e *ending) Err() error {
	if e.left--; e.left < 0 {
		return context.Canceled
	}
	return nil
}

// A refinement that is interrupted gives what its last two grids say, as inaccurate; before there are two, nothing.
func TestInterruptedRefinement(t *testing.T) {
	x := bridge(0.5, 2200e-6, 100, silicon)
	never := Tolerances{Voltage: 1e-15, Current: 1e-15, Power: 1e-15, Balance: 1e-15}
	for asked, two := range map[int]bool{2: false, 60: true} {
		s, err := SteadyState(context.Background(), x.net, Options{MaxSteps: 256, Tolerances: never})
		if !errors.Is(err, ErrInaccurate) || s == nil {
			t.Fatalf("uninterrupted: %v", err)
		}
		s, err = SteadyState(&ending{context.Background(), asked}, x.net, Options{Tolerances: never})
		if !errors.Is(err, context.Canceled) || errors.Is(err, ErrInaccurate) != two || (s != nil) != two {
			t.Fatalf("after %d: %v, a solution %v", asked, err, s != nil)
		}
		if two && (s.Fine == s.Coarse || s.Fine.Samples() != 2*s.Coarse.Samples()-1) {
			t.Errorf("grids of %d and %d samples", s.Fine.Samples(), s.Coarse.Samples())
		}
	}
}
