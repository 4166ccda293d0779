// Package quantity holds engineering numbers: a value in SI, its unit, and the two ways
// people write them (SI prefixes with a unit, and SPICE scale factors).
package quantity

// Unit is the physical unit of a Value. Values are always stored in the coherent SI unit
// named here, except Celsius, which is a temperature on the Celsius scale.
type Unit uint8

// The units that netlists, duty sheets and reports speak of.
const (
	One Unit = iota // a pure ratio; percentages are stored as ratios
	Volt
	Ampere
	Ohm
	Farad
	Henry
	Watt
	Hertz
	Second
	Hour // stored in hours, the unit lifetimes are stated in
	Celsius
	Kelvin
	KelvinPerWatt
	WattPerKelvin
	AmpereSquaredSecond
	Joule
	VoltAmpere
	Degree // electrical angle
	Coulomb
)

// Value is a number with its unit.
type Value struct {
	Number float64
	Unit   Unit
}

// Interval is a closed range of values of one unit, Low <= High.
// An end may be infinite: `open` is an infinite resistance.
type Interval struct {
	Low, High float64
	Unit      Unit
}
