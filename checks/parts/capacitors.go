package parts

import (
	"fmt"
	"math"
	"sort"
	"sync"

	"railproof/checks/parts/records"
	"railproof/netlist/quantity"
	"railproof/netlist/syntax"
)

// Figure names a published property of aluminium electrolytic capacitors as a class.
type Figure string

// Figures that may depend on the rated voltage.
const (
	TanDelta          Figure = "tan-delta"            // highest loss factor at 120 Hz, 20 degC
	TanDeltaPer1000uF Figure = "tan-delta-per-1000uF" // added for each 1000 uF above 1000 uF
	TanDeltaAged      Figure = "tan-delta-aged"       // factor at the end of the endurance test
	SurgeFactor       Figure = "surge-factor"         // short-time voltage over rated voltage
	ReverseVoltage    Figure = "reverse-voltage"      // V, continuous
	CapTolerance      Figure = "tolerance"            // ratio, plus and minus
	LifeDoublingStep  Figure = "life-doubling-step"   // K
	LeakagePerUFV     Figure = "leakage-uA-per-uFV"   // uA per uF and V
	Endurance         Figure = "endurance"            // h at the category temperature
	ESL               Figure = "ESL"                  // H
	Ripple100Of120    Figure = "ripple-100-of-120"    // factor on a 120 Hz rating used at 100 Hz
)

var figureUnits = map[Figure]quantity.Unit{
	ReverseVoltage: quantity.Volt, LifeDoublingStep: quantity.Kelvin, Endurance: quantity.Hour, ESL: quantity.Henry,
}

// The two published families of ripple multipliers.
const (
	rippleByVoltage     Figure = "ripple-multiplier"
	rippleByCapacitance Figure = "ripple-multiplier-by-capacitance"
)

// classFigure is one line of capacitors.csv: it holds for rated voltages above overV up to uptoV, and
// capacitances above overF up to uptoF; absent ends are open.
type classFigure struct {
	figure                     Figure
	overV, uptoV, overF, uptoF float64
	hertz                      float64 // 0: not at a frequency
	value                      Value
}

// covers tells whether the line holds for a rated voltage. A line for one voltage holds for it alone.
func (c classFigure) covers(rated float64) bool {
	if c.overV == c.uptoV {
		return math.Abs(rated-c.overV) <= slack*rated
	}
	return rated > c.overV && rated <= c.uptoV
}

var capacitorFigures = sync.OnceValue(func() []classFigure {
	list, problems := readCapacitors()
	if err := records.Join(problems); err != nil {
		panic("built-in capacitor figures: " + err.Error())
	}
	return list
})

func readCapacitors() ([]classFigure, []syntax.Diagnostic) {
	titles, problems := readTitles()
	table, found := records.Read("capacitors.csv", embedded("capacitors.csv"), "figure", "value", columnSource, columnConfidence)
	problems = append(problems, found...)
	var list []classFigure
	for _, record := range table.Records {
		number := func(column string, absent float64) float64 {
			value, ok, err := record.Number(column)
			if err != nil {
				problems = append(problems, syntax.Diagnostic{At: record.Place(column), What: err.Error()})
			}
			if !ok {
				return absent
			}
			return value
		}
		c := classFigure{
			figure: Figure(record.Text("figure")),
			overV:  number("over_V", math.Inf(-1)), uptoV: number("upto_V", math.Inf(1)),
			overF: number("over_F", math.Inf(-1)), uptoF: number("upto_F", math.Inf(1)),
			hertz: number("Hz", 0),
		}
		c.value = Value{
			Number: number("value", math.NaN()), Unit: figureUnits[c.figure], Source: titles[record.Text(columnSource)],
			Confidence: record.Text(columnConfidence), Condition: join(record.Text("condition"), record.Text(columnNote)),
		}
		if c.value.Confidence == Memory {
			c.value.Source = fromMemory
		}
		if c.value.Source == "" {
			problems = append(problems, syntax.Diagnostic{At: record.Place(columnSource), What: "source key without title"})
		}
		list = append(list, c)
	}
	return list, problems
}

// Electrolytic is a figure of aluminium electrolytics of a rated voltage. ok is false where none is
// known for that voltage.
func Electrolytic(figure Figure, rated float64) (Value, bool) {
	for _, c := range capacitorFigures() {
		if c.figure == figure && c.covers(rated) {
			return c.value, true
		}
	}
	return Value{}, false
}

// ElectrolyticESR is the highest series resistance at 120 Hz and 20 degC of a new general-purpose
// electrolytic of a capacitance in farads and a rated voltage in volts: tan delta / (2 pi f C), with
// 0.02 added to tan delta for each 1000 uF above 1000 uF. A rated voltage between two of the table
// takes the larger loss factor of the two; below or above the table ok is false.
func ElectrolyticESR(farads, rated float64) (Value, bool) {
	if !(farads > 0) || math.IsInf(farads, 0) {
		return Value{}, false
	}
	loss, ok := Electrolytic(TanDelta, rated)
	if !ok {
		var below, above *classFigure
		for _, c := range capacitorFigures() {
			if c.figure != TanDelta {
				continue
			}
			if c.overV < rated {
				below = &c
			} else if above == nil {
				above = &c
			}
		}
		if below == nil || above == nil {
			return Value{}, false
		}
		loss = below.value
		if above.value.Number > loss.Number {
			loss = above.value
		}
	}
	per, ok := Electrolytic(TanDeltaPer1000uF, rated)
	if !ok {
		return Value{}, false
	}
	tan := loss.Number + per.Number*math.Max(0, farads/1000e-6-1)
	const hertz = 120
	return Value{
		Number: tan / (2 * math.Pi * hertz * farads), Unit: quantity.Ohm,
		Source: "calculated tan delta/(2 pi f C); " + loss.Source, Confidence: loss.Confidence,
		Condition: fmt.Sprintf("highest of a new general-purpose part, tan delta %.3g at 120 Hz", tan),
	}, true
}

// RippleCurve is the factor k(f) by which the permitted ripple current of an electrolytic at a
// frequency exceeds that at the reference frequency, where it is 1. The equivalent current of a
// spectrum I_n is sqrt(sum (I_n/k(f_n))^2).
type RippleCurve struct {
	Reference  float64 // Hz
	Hertz      []float64
	Factor     []float64
	Source     string
	Confidence string
	Class      string // what it was chosen for
}

// K is the factor at a frequency in Hz, interpolated in its logarithm; it is held beyond both ends.
func (c RippleCurve) K(hertz float64) float64 {
	n := len(c.Hertz)
	if n == 0 {
		return 1
	}
	i := sort.SearchFloat64s(c.Hertz, hertz)
	switch {
	case i == 0:
		return c.Factor[0]
	case i == n:
		return c.Factor[n-1]
	}
	part := math.Log(hertz/c.Hertz[i-1]) / math.Log(c.Hertz[i]/c.Hertz[i-1])
	return c.Factor[i-1] + part*(c.Factor[i]-c.Factor[i-1])
}

// RippleCurveByVoltage is the curve for a rated voltage, its reference at 100 Hz.
func RippleCurveByVoltage(rated float64) RippleCurve {
	return rippleCurve(rippleByVoltage, func(c classFigure) bool { return rated > c.overV && rated <= c.uptoV },
		fmt.Sprintf("rated voltage %g V", rated))
}

// RippleCurveByCapacitance is the curve of another maker, for a capacitance in farads, its reference
// at 100 Hz.
func RippleCurveByCapacitance(farads float64) RippleCurve {
	return rippleCurve(rippleByCapacitance, func(c classFigure) bool { return farads > c.overF && farads <= c.uptoF },
		fmt.Sprintf("capacitance %g F", farads))
}

func rippleCurve(figure Figure, holds func(classFigure) bool, class string) RippleCurve {
	curve := RippleCurve{Reference: 100, Class: class}
	for _, c := range capacitorFigures() {
		if c.figure == figure && holds(c) {
			curve.Hertz = append(curve.Hertz, c.hertz)
			curve.Factor = append(curve.Factor, c.value.Number)
			curve.Source, curve.Confidence = c.value.Source, c.value.Confidence
		}
	}
	return curve
}

// ReferredTo is the curve of a part whose rating is stated at 120 Hz: the permitted current at 100 Hz is
// 0.92 of that at 120 Hz (the lower end of what is published), so every factor is that much smaller
// and the factor at 120 Hz is held to 1. At a reference of 100 Hz the curve is unchanged; any other
// reference divides by the factor there.
func (c RippleCurve) ReferredTo(hertz float64) RippleCurve {
	if hertz == c.Reference {
		return c
	}
	scale := 1 / c.K(hertz)
	if hertz == 120 {
		if v, ok := Electrolytic(Ripple100Of120, 1); ok {
			scale = v.Number
		}
	}
	moved := c
	moved.Reference = hertz
	moved.Factor = make([]float64, len(c.Factor))
	for i, k := range c.Factor {
		moved.Factor[i] = k * scale
	}
	return moved
}
