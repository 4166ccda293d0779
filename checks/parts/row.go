// Package parts holds the built-in ratings of generic numbered parts, the recognition of their type
// numbers in the spellings that netlists use, and the standard steps in which ratings are made.
//
// Every value keeps its source and how sure it is: "seen" was read in the source named, "memory" was
// not. A row without a value for a symbol says nothing about it: the caller must not guess one.
package parts

import (
	"fmt"
	"math"
	"strings"

	"railproof/netlist"
	"railproof/netlist/quantity"
)

// How sure a value is.
const (
	Seen   = "seen"   // read in the source named
	Memory = "memory" // from memory, not re-read
	Stated = "stated" // from a user's table that does not say
)

// Value is one rating with where it is known from.
type Value struct {
	Number     float64 // in Unit
	Unit       quantity.Unit
	Source     string // publication, or "from memory"
	Confidence string // Seen, Memory or Stated
	Condition  string // under which it holds; may be empty
}

// CaseValue is a rating that depends on the case.
type CaseValue struct {
	Case string // "TO-220"
	Value
}

// Row is one part of the table.
type Row struct {
	Type     string // canonical: "7812", "1N4734A", "317"
	Kind     string // rectifier, fast, signal, schottky, zener, bridge, fixed, adjustable, shunt, transistor or darlington
	Role     netlist.Role
	Polarity netlist.Polarity // of a regulator; of a bipolar transistor Positive for NPN; ratings are magnitudes
	// Pins is the customary order of terminals on a netlist line.
	Pins []netlist.Pin
	// PinsDoubtful is set where netlists do not agree on that order: diodes and zeners drawn as a
	// subcircuit call, and shunt references.
	PinsDoubtful bool
	// Model is a forward law through the published maximum of VF; nil where none is published.
	// Of a bridge it is the law of one element.
	Model      *DiodeLaw
	Source     string // all publications of the row
	Confidence string // "seen", "memory", or "partly memory"
	Note       string
	Origin     string // "parts table", or the name of the user's file

	values []entry // in the order of the vocabulary
}

type entry struct {
	symbol netlist.Symbol
	cases  []CaseValue // at least one; Case is empty unless the value depends on the case
}

// Value is the rating of a symbol. Where it depends on the case, it is that of the customary case,
// which the condition names.
func (r *Row) Value(symbol netlist.Symbol) (Value, bool) {
	for _, e := range r.values {
		if e.symbol == symbol {
			return e.cases[0].Value, true
		}
	}
	return Value{}, false
}

// Cases lists a rating for each case it is known for, the customary case first. A rating that does
// not depend on the case has one entry without a case.
func (r *Row) Cases(symbol netlist.Symbol) []CaseValue {
	for _, e := range r.values {
		if e.symbol == symbol {
			return append([]CaseValue(nil), e.cases...)
		}
	}
	return nil
}

// Symbols lists the symbols the row has a value for, in a fixed order.
func (r *Row) Symbols() []netlist.Symbol {
	list := make([]netlist.Symbol, len(r.values))
	for i, e := range r.values {
		list[i] = e.symbol
	}
	return list
}

// Known is what the reader of a netlist must know of the part.
func (r *Row) Known() netlist.KnownPart {
	return netlist.KnownPart{Type: r.Type, Role: r.Role, Polarity: r.Polarity, Pins: append([]netlist.Pin(nil), r.Pins...)}
}

// Leg is the rating of one diode of a bridge: it carries the mean of half the output current.
// Thermal resistances of the whole case are left out, since the four share it. Of any other part
// Leg is the part itself.
func (r *Row) Leg() *Row {
	if r.Role != netlist.RoleBridge {
		return r
	}
	leg := *r
	leg.Role, leg.Pins, leg.values = netlist.RoleRectifier, pinsOf("rectifier"), nil
	for _, e := range r.values {
		switch e.symbol {
		case RthJA, RthJL, RthJC:
			continue
		case IFAV, IFRM:
			e.cases = append([]CaseValue(nil), e.cases...)
			for i := range e.cases {
				e.cases[i].Number /= 2
				e.cases[i].Condition = join("half the output current of the bridge", e.cases[i].Condition)
			}
		}
		leg.values = append(leg.values, e)
	}
	return &leg
}

// set puts a value in its place, replacing one that is there.
func (r *Row) set(symbol netlist.Symbol, cases ...CaseValue) {
	at := len(r.values)
	for i, e := range r.values {
		if e.symbol == symbol {
			r.values[i].cases = cases
			return
		}
		if rank[e.symbol] > rank[symbol] {
			at = i
			break
		}
	}
	r.values = append(r.values, entry{})
	copy(r.values[at+1:], r.values[at:])
	r.values[at] = entry{symbol, cases}
}

// kinds of parts, and what they are to the reader of a netlist.
var kinds = []struct {
	kind string
	role netlist.Role
	pins []netlist.Pin
}{
	{"rectifier", netlist.RoleRectifier, []netlist.Pin{netlist.PinAnode, netlist.PinCathode}},
	{"fast", netlist.RoleRectifier, []netlist.Pin{netlist.PinAnode, netlist.PinCathode}},
	{"signal", netlist.RoleRectifier, []netlist.Pin{netlist.PinAnode, netlist.PinCathode}},
	{"schottky", netlist.RoleRectifier, []netlist.Pin{netlist.PinAnode, netlist.PinCathode}},
	{"zener", netlist.RoleZener, []netlist.Pin{netlist.PinAnode, netlist.PinCathode}},
	{"bridge", netlist.RoleBridge, []netlist.Pin{netlist.PinAC1, netlist.PinAC2, netlist.PinPlus, netlist.PinMinus}},
	{"fixed", netlist.RoleRegulator, []netlist.Pin{netlist.PinIn, netlist.PinReference, netlist.PinOut}},
	{"adjustable", netlist.RoleAdjustable, []netlist.Pin{netlist.PinIn, netlist.PinReference, netlist.PinOut}},
	{"shunt", netlist.RoleShunt, []netlist.Pin{netlist.PinReference, netlist.PinAnode, netlist.PinCathode}},
	{"transistor", netlist.RoleTransistor, []netlist.Pin{netlist.PinCollector, netlist.PinBase, netlist.PinEmitter}},
	{"darlington", netlist.RoleTransistor, []netlist.Pin{netlist.PinCollector, netlist.PinBase, netlist.PinEmitter}},
}

func roleOf(kind string) (netlist.Role, bool) {
	for _, k := range kinds {
		if k.kind == kind {
			return k.role, true
		}
	}
	return 0, false
}

func pinsOf(kind string) []netlist.Pin {
	for _, k := range kinds {
		if k.kind == kind {
			return append([]netlist.Pin(nil), k.pins...)
		}
	}
	return nil
}

func kindNames() string {
	var names []string
	for _, k := range kinds {
		names = append(names, k.kind)
	}
	return strings.Join(names, ", ")
}

// complete adds what follows from the values of the row.
func (r *Row) complete() {
	if _, known := r.Value(I2t); !known {
		crest, ok1 := r.Value(IFSM)
		length, ok2 := r.Value(TIFSM)
		if ok1 && ok2 {
			// A half sine of crest I and length t has the integral I^2 t / 2.
			r.set(I2t, CaseValue{Value: Value{
				Number: crest.Number * crest.Number * length.Number / 2, Unit: quantity.AmpereSquaredSecond,
				Source: "calculated IFSM^2 t/2; " + crest.Source, Confidence: crest.Confidence,
			}})
		}
	}
	if _, known := r.Value(IZM); !known {
		power, ok1 := r.Value(PD)
		volts, ok2 := r.Value(VZmax)
		if ok1 && ok2 {
			r.set(IZM, CaseValue{Value: Value{
				Number: power.Number / volts.Number, Unit: quantity.Ampere,
				Source: "calculated PD/VZmax; " + power.Source, Confidence: power.Confidence, Condition: power.Condition,
			}})
		}
	}
	if _, known := r.Value(HFE); !known {
		least, ok1 := r.Value(HFEmin)
		most, ok2 := r.Value(HFEmax)
		if ok1 && ok2 {
			// Gains spread by factors, so the middle is the geometric mean.
			r.set(HFE, CaseValue{Value: Value{
				Number: math.Sqrt(least.Number * most.Number), Unit: quantity.One,
				Source: "calculated sqrt(hFEmin hFEmax); " + least.Source, Confidence: least.Confidence, Condition: least.Condition,
			}})
		}
	}
	r.Model = lawOf(r)
	r.summarise()
}

// summarise fills Source and Confidence of the row from its values.
func (r *Row) summarise() {
	var sources []string
	memory, other := 0, ""
	for _, e := range r.values {
		v := e.cases[0].Value
		if v.Confidence == Memory {
			memory++
			continue
		}
		other = v.Confidence
		for _, s := range strings.Split(v.Source, "; ") {
			if !strings.HasPrefix(s, "calculated ") && !containsText(sources, s) {
				sources = append(sources, s)
			}
		}
	}
	r.Source = strings.Join(sources, "; ")
	switch {
	case memory == len(r.values):
		r.Confidence, r.Source = Memory, fromMemory
	case memory > 0:
		r.Confidence = "partly memory"
	default:
		r.Confidence = other
	}
}

const fromMemory = "from memory"

func containsText(list []string, text string) bool {
	for _, each := range list {
		if each == text {
			return true
		}
	}
	return false
}

func join(first, second string) string {
	if first == "" || second == "" {
		return first + second
	}
	return first + "; " + second
}

// String names the row and its origin: "parts table 1N4001".
func (r *Row) String() string { return fmt.Sprintf("%s %s", r.Origin, r.Type) }
