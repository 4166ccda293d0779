package study

import (
	"math"

	"railproof/netlist"
)

// LineEnd says where in its range the supply line is.
type LineEnd uint8

// Line ends.
const (
	LineAsWritten LineEnd = iota
	LineLow
	LineNominal
	LineHigh
	LineBetween // at Setting.LineAt
)

// String is the word of the machine interface.
func (l LineEnd) String() string {
	return [...]string{"as-written", "low", "nominal", "high", "between"}[l]
}

// Setting is everything that distinguishes one condition from another.
type Setting struct {
	Line LineEnd
	// LineAt is, with LineBetween, the position of the line from 0 (low) to 1 (high).
	LineAt float64
	// Loads holds for each load of the supply a position from 0 (light) to 1 (full); nil: as written.
	Loads []float64
	// Held keeps regulators at their set voltage so that missing headroom shows (solver.Regulator.Held).
	Held bool
	// Shift holds for each toleranced parameter a position from -1 (low end) to 1 (high end); nil: all nominal.
	Shift []float64
	// Phase shifts the start of a cold start by this fraction of the period.
	Phase float64
	// Cold starts from empty instead of looking for the steady state.
	Cold bool
	// LineOff opens every source that the line feeds; Charge is the voltage each capacitor then has, and with
	// NoBleed regulators draw no current of their own.
	LineOff bool
	NoBleed bool
	Charge  map[netlist.ElementID]float64
	// Short is the load whose output is shorted; nil: none.
	Short *netlist.ElementID
	// Nominal solves the netlist exactly as written.
	Nominal bool
}

// lineAt is the position of the line from 0 (low) to 1 (high).
func (s *Setting) lineAt() float64 {
	switch s.Line {
	case LineLow:
		return 0
	case LineHigh:
		return 1
	case LineBetween:
		return s.LineAt
	}
	return 0.5
}

// distance is how far two settings lie apart along the line and the loads.
func (s *Setting) distance(o *Setting) float64 {
	sum := math.Abs(s.lineAt() - o.lineAt())
	for k := range min(len(s.Loads), len(o.Loads)) {
		sum += math.Abs(s.Loads[k] - o.Loads[k])
	}
	return sum
}
