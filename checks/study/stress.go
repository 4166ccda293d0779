// Package study decides which conditions of a supply to solve and gathers the worst stress of every
// part over them into the table that the checks read.
package study

import "railproof/netlist/quantity"

// Quantity names a stress; the values below are part of the stable machine interface.
type Quantity string

// The stress quantities.
const (
	PeakReverseVoltage Quantity = "peak-reverse-voltage"
	MeanCurrent        Quantity = "mean-current"
	RMSCurrent         Quantity = "rms-current"
	PeakCurrent        Quantity = "peak-current"
	MinCurrent         Quantity = "min-current"
	MeanPower          Quantity = "mean-power"
	SurgeCurrent       Quantity = "surge-current"
	SurgeI2t           Quantity = "surge-i2t"
	MaxVoltage         Quantity = "max-voltage"
	MinVoltage         Quantity = "min-voltage"
	MeanVoltage        Quantity = "mean-voltage"
	PeakVoltage        Quantity = "peak-voltage"
	RippleCurrentRMS   Quantity = "ripple-current-rms"
	RippleRMS          Quantity = "ripple-rms"
	RipplePeakToPeak   Quantity = "ripple-peak-to-peak"
	RippleFactor       Quantity = "ripple-factor"
	MinDifferential    Quantity = "min-differential"
	MinHeadroom        Quantity = "min-headroom"
	MaxInputVoltage    Quantity = "max-input-voltage"
	MaxOutputCurrent   Quantity = "max-output-current"
	MaxVCE             Quantity = "max-vce"
	MaxVDS             Quantity = "max-vds"
)

// Stresses that single checks ask for beyond those of every element of a kind. Of the quantities marked
// "smallest" the smaller value is the worse.
const (
	RippleCurrentEquivalent Quantity = "ripple-current-equivalent" // capacitor: sqrt(sum (In/kn)^2), A rms at 100 Hz, the reference of the multipliers
	RMSVoltage              Quantity = "rms-voltage"               // capacitor
	SteadyMaxVoltage        Quantity = "steady-max-voltage"        // capacitor: max-voltage without the switch-on
	MeanReverseCurrent      Quantity = "mean-reverse-current"      // zener: largest mean of its working current
	MaxDifferential         Quantity = "max-differential"          // regulator: largest Vin - Vout, steady and switch-on
	MinOutputCurrent        Quantity = "min-output-current"        // regulator, smallest
	MaxBackflow             Quantity = "max-backflow"              // regulator: largest Vout - Vin after the line is removed
	MaxVEB                  Quantity = "max-veb"                   // transistor: largest reverse emitter-base voltage
	MaxVGS                  Quantity = "max-vgs"                   // field-effect transistor: largest magnitude
	PeakPower               Quantity = "peak-power"                // transistor: largest instantaneous power
	DCCurrent               Quantity = "dc-current"                // winding: magnitude of the mean current
	LeastCurrent            Quantity = "least-current"             // choke: smallest current in the direction of its mean
	DischargeTime           Quantity = "discharge-time"            // capacitor: from line off until it is down to the voltage of the profile, s
	ShortPower              Quantity = "short-power"               // mean power with an output shorted
	ShortCurrent            Quantity = "short-current"             // rms current with an output shorted; of a diode its mean
)

// Stresses that the checks derive from others.
const (
	JunctionTemperature Quantity = "junction-temperature" // degC
	ReverseVoltage      Quantity = "reverse-voltage"      // polarised capacitor, V, not below zero
	ExpectedLife        Quantity = "expected-life"        // electrolytic, h
	InputCapacitance    Quantity = "input-capacitance"    // of a regulator, F
	OutputCapacitance   Quantity = "output-capacitance"   // of a regulator, F
	CoreTemperature     Quantity = "core-temperature"     // electrolytic, degC
	SeriesResistance    Quantity = "series-resistance"    // of a capacitor beside a regulator, ohm
)

// Condition is one solved combination of circumstances.
type Condition struct {
	Name  string // in words: "high line, light load"
	Line  string // low, nominal, high, as-written
	Load  string // light, full, as-written, or the combination in words
	Start string // steady or cold
	// Also lists further circumstances in words: "C1 at -20 %", "ambient 45 degC".
	Also []string

	setting *Setting // what was solved, so that it can be solved again; nil for a condition that is only words
}

// Stress is what one element is subjected to in its worst condition.
type Stress struct {
	Element   string // full path, or "node:NAME"
	Quantity  Quantity
	Value     float64 // SI
	Unit      quantity.Unit
	Error     float64 // numerical error estimate, same unit, >= 0
	Phase     float64 // s into the period (or from switch-on) at which an extremum occurs; NaN if none
	Condition Condition
	// Unproven says why the value proves nothing (no convergence, unknown element in the island,
	// source impedance unknown); empty when it is good.
	Unproven string
	// Missing is the duty statement that would settle it, empty if none would.
	Missing string

	base int // index of the base condition the value was found in, while the table is made
}
