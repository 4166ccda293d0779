package netlist

import (
	"strings"

	"railproof/netlist/quantity"
)

// PartKind says what an element is for the purpose of ratings. It is a set, so that a symbol can
// apply to several kinds.
type PartKind uint16

// The kinds of part.
const (
	KindRectifier  PartKind = 1 << iota // a diode that is not a zener
	KindZener                           // a diode used in breakdown
	KindCapacitor                       //
	KindResistor                        // also what a resistor stands for: a fuse, an inrush limiter
	KindInductor                        // also a transformer winding
	KindSource                          // an independent or controlled voltage source: a winding or the line
	KindRegulator                       // fixed or adjustable, three terminals
	KindShunt                           // adjustable shunt reference
	KindTransistor                      //
	KindFet                             //
	KindLoad                            // a current source

	KindNone  PartKind = 0
	KindDiode          = KindRectifier | KindZener
)

// kindNames are for messages, in the order of the constants.
var kindNames = []string{"diode", "zener", "capacitor", "resistor", "inductor", "voltage source", "regulator",
	"shunt reference", "transistor", "field-effect transistor", "current source"}

// String names the kinds of the set: "diode, zener".
func (k PartKind) String() string {
	var names []string
	for i, name := range kindNames {
		if k&(1<<i) != 0 {
			names = append(names, name)
		}
	}
	if names == nil {
		return "part without ratings"
	}
	return strings.Join(names, ", ")
}

// KindOf is the kind of an element, a single bit; KindNone for elements that carry no rating.
func (c *Circuit) KindOf(id ElementID) PartKind {
	switch d := c.Elements[id].Device.(type) {
	case Diode:
		if c.IsZener(id) {
			return KindZener
		}
		return KindRectifier
	case Capacitor:
		return KindCapacitor
	case Resistor:
		return KindResistor
	case Inductor:
		return KindInductor
	case VoltageSource:
		return KindSource
	case CurrentSource:
		return KindLoad
	case VoltageControlled:
		if d.Output == OutVoltage {
			return KindSource
		}
	case CurrentControlled:
		if d.Output == OutVoltage {
			return KindSource
		}
	case Regulator:
		if d.Shunt {
			return KindShunt
		}
		return KindRegulator
	case Transistor:
		return KindTransistor
	case Fet:
		return KindFet
	}
	return KindNone
}

// Meaning is what a rating symbol means on some kinds of part.
type Meaning struct {
	Symbol      Symbol
	Unit        quantity.Unit
	Kinds       PartKind
	Words       []string // the words it takes instead of a number
	FreeWord    bool     // it takes any word
	Range       bool     // it may be a range LOW..HIGH
	Description string   // what the value is, one line
}

// TakesWord reports whether the symbol takes a word instead of a number.
func (m Meaning) TakesWord() bool { return m.FreeWord || len(m.Words) > 0 }

// Expectation says what its value looks like: "a voltage in V, such as 25V", "yes or no".
func (m Meaning) Expectation() string {
	switch {
	case m.FreeWord:
		return "a word"
	case len(m.Words) > 0:
		return "one of " + strings.Join(m.Words, ", ")
	case m.Range:
		return m.Unit.Expectation() + ", or a range of two"
	}
	return m.Unit.Expectation()
}

// FindSymbol brings a symbol into its canonical spelling, upper and lower case and other names of the
// trade ("PIV", "IF(AV)", "Ptot") aside. ok is false for an unknown one.
func FindSymbol(text string) (symbol Symbol, ok bool) {
	symbol, ok = symbolByFold[strings.ToLower(text)]
	return symbol, ok
}

// MeaningOf tells what a symbol means on a part of a kind; with several kinds, on the first of them it
// applies to. ok is false when it means nothing there.
func MeaningOf(symbol Symbol, kind PartKind) (meaning Meaning, ok bool) {
	for _, m := range meanings {
		if m.Symbol == symbol && m.Kinds&kind != 0 {
			return m, true
		}
	}
	return Meaning{}, false
}

// Meanings lists what every symbol means on the given kinds, in the order of the reference.
func Meanings(kind PartKind) []Meaning {
	var list []Meaning
	for _, m := range meanings {
		if m.Kinds&kind != 0 {
			list = append(list, m)
		}
	}
	return list
}

// kindsOf is the set of kinds on which a symbol means something.
func kindsOf(symbol Symbol) PartKind {
	kinds := KindNone
	for _, m := range meanings {
		if m.Symbol == symbol {
			kinds |= m.Kinds
		}
	}
	return kinds
}

// symbolByFold maps lower-case spellings to symbols.
var symbolByFold = func() map[string]Symbol {
	index := make(map[string]Symbol)
	for _, m := range meanings {
		index[strings.ToLower(string(m.Symbol))] = m.Symbol
	}
	for _, a := range symbolAliases {
		index[strings.ToLower(a.spelling)] = a.symbol
	}
	return index
}()

// symbolNames lists the canonical symbols once each, in the order of the reference.
func symbolNames() []string {
	var names []string
	seen := make(map[Symbol]bool)
	for _, m := range meanings {
		if !seen[m.Symbol] {
			seen[m.Symbol] = true
			names = append(names, string(m.Symbol))
		}
	}
	return names
}
