package study

import (
	"math"

	"railproof/checks/solver"
)

// The energy gap and the exponent of the saturation current's temperature law: of a silicon junction, the defaults
// of a D card, and of a metal-silicon barrier (both from memory).
const (
	siliconGap, siliconExponent = 1.11, 3.0 // eV
	barrierGap, barrierExponent = 0.69, 2.0
	// barrierBelow is the forward voltage at 1 A, V, below which a junction is no silicon one.
	barrierBelow = 0.5
)

// saturation moves a saturation current from the temperature it is stated for to another, both in degC:
// IS (T/T0)^(XTI/N) exp((T/T0 - 1) EG/(N VT)), the temperature law of the D card.
func saturation(is, n, from, to float64) float64 {
	if from == to || is <= 0 || n <= 0 {
		return is
	}
	gap, exponent := siliconGap, siliconExponent
	if n*solver.ThermalVoltage(from)*math.Log(1/is) < barrierBelow {
		gap, exponent = barrierGap, barrierExponent
	}
	ratio := solver.ThermalVoltage(to) / solver.ThermalVoltage(from)
	return is * math.Pow(ratio, exponent/n) * math.Exp((ratio-1)*gap/(n*solver.ThermalVoltage(to)))
}
