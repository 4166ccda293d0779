package netlist

import "railproof/netlist/quantity"

// Duty is what a supply must endure and what its parts are rated for, resolved against a circuit:
// patterns are expanded to elements, and each entry keeps where it was written.
type Duty struct {
	Lines       []Line
	Windings    []Winding
	Ambient     *AmbientRange // nil: not stated
	Loads       []Load
	Parts       []PartName
	Ratings     []Rating
	Coolings    []Cooling
	Rails       []Rail
	Policy      string // empty: not stated
	PolicyAt    Position
	Life        *quantity.Value // hours; nil: not stated
	Profile     *Profile        // how fast stored charge must be gone; nil: not stated
	Concessions []Concession
	Remarks     []Remark // contradictions between sheet and inline, unused statements

	SharedSheet string      // path of the shared sheet that was read; empty: none
	Stated      []Statement // each thing stated that is in force, in the order of reading
	Idle        []Statement // statements of the shared sheet without an effect on this netlist
}

// Line states the supply line. With Source < 0 it scales every sinusoidal source as drawn; otherwise
// the named source is the line itself.
type Line struct {
	Source    ElementID         // -1: every source
	Nominal   float64           // V rms
	Range     quantity.Interval // V rms, absolute
	Frequency float64           // Hz; 0: not stated
	At        Position

	shared bool // stated in the shared sheet
}

// Winding says what a drawn source stands for.
type Winding struct {
	Source     ElementID
	AsDrawn    bool    // amplitude is the off-load emf, series resistance as drawn
	Voltage    float64 // rated V rms at rated current, if not AsDrawn
	Current    float64 // rated A rms
	Regulation float64 // (V no load - V full load) / V full load
	At         Position
}

// AmbientRange is the air around the parts in degC.
type AmbientRange struct {
	Low, High float64
	At        Position
}

// Load gives an element a range: amperes for a current source, ohms (High may be +Inf) for a resistor.
type Load struct {
	Element ElementID
	Range   quantity.Interval
	At      Position
}

// PartName says which row of the parts table an element is.
type PartName struct {
	Element ElementID
	Type    string
	Pins    []string // as stated by pins=, lower case; empty: not stated
	At      Position
}

// Rating is one stated property of one element.
type Rating struct {
	Element ElementID
	Symbol  Symbol
	// Value holds a single value as Low == High. Tolerances are relative (-0.2..0.2).
	Value quantity.Interval
	Text  string // for symbols that take a word: family, polarised, class
	At    Position
	// Written is how it reads in the source, for the report: "rate C1 UR=25V" or "UR=25 on the card".
	Written string
	// Shared: stated in the shared sheet, and so less than what the element's own card says.
	Shared bool
}

// Cooling is a thermal resistance from case or sink to ambient.
type Cooling struct {
	Element ElementID
	KPerW   float64
	At      Position
}

// Rail is what the supply must deliver at a node.
type Rail struct {
	Node   NodeID
	Range  quantity.Interval // V
	Ripple *float64          // V peak to peak; nil: not stated
	At     Position
}

// Profile says to which voltage a stored charge must have fallen, and how long after the line is off.
type Profile struct {
	Name    string  // empty: stated in figures
	Voltage float64 // V dc
	Within  float64 // s
	Source  string  // where the figures come from
	At      Position
}

// Concession permits a stated excess of one check on one element up to a ceiling until a date.
type Concession struct {
	Check   string
	Element ElementID // -1: a node
	Target  string    // as findings name it: the element's full path, or "node:NAME"
	Ceiling quantity.Value
	Until   string // YYYY-MM-DD, last day it holds
	Reason  string
	At      Position
	Shared  bool // stated in the shared sheet, for many netlists
}

// Symbol is the trade's letter symbol of a rating or property, in its canonical spelling ("VRRM", "UR").
type Symbol string
