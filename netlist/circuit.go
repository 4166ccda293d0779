// Package netlist reads SPICE-style netlists and their duty sheets into a circuit graph.
//
// The way of the data: text -> syntax.File -> Circuit (elements with terminals on nodes)
// and Duty (what the supply must endure, resolved against the elements).
package netlist

import (
	"railproof/netlist/syntax"
)

// Position is a place in an input file.
type Position = syntax.Position

// Diagnostic is an input error with its position.
type Diagnostic = syntax.Diagnostic

// NodeID indexes Circuit.Nodes; Ground is node 0.
type NodeID int

// ElementID indexes Circuit.Elements.
type ElementID int

// Ground is the reference node, written 0 or gnd.
const Ground NodeID = 0

// Circuit is the flattened netlist: subcircuits expanded, expressions evaluated.
type Circuit struct {
	File        string
	Title       string
	Nodes       []Node    // Nodes[Ground] always exists
	Elements    []Element // in order of appearance, subcircuits expanded in place
	Temperature float64   // degC of the .temp card; 27 (300.15 K) unless stated
	HasGround   bool      // some element touches node 0 or gnd
	Remarks     []Remark  // what was assumed, skipped or found doubtful while reading
	Library     Library   // what type names mean; nil: none is recognised

	zeners map[ElementID]bool // what the duty sheet says of diodes
	shunts map[ElementID]bool // diodes that stand as shunt zeners; nil: not yet looked for
}

// Node is an electrical node and the terminals that meet there.
type Node struct {
	Name      string // as first written; subcircuit nodes by full path ("X1.mid")
	Terminals []Terminal
}

// Terminal is one pin of one element.
type Terminal struct {
	Element ElementID
	Pin     int // index into Element.Nodes
}

// Element is one part of the flattened circuit.
type Element struct {
	Name     string // full path as written: "D1", "X1.D3"
	At       Position
	Nodes    []NodeID // in the order the Device documents
	Device   Device
	TypeName string  // model or type name as written ("1N4007", "LM7812CT"); empty if none
	Fields   []Field // trailing KEY=VALUE fields and ratings written into the value ("470uF/50V")
}

// Field is a KEY=VALUE pair written on the element's own card.
type Field struct {
	Key   string // as written, e.g. "UR", "V", "pwr"; value suffix ratings are given the key they mean
	Value string // as written, unquoted
	At    Position
}

// Remark is something the reader must be told about how the netlist was read.
type Remark struct {
	Kind    RemarkKind
	At      Position
	Element string // full path, or empty
	Text    string // one sentence
}

// RemarkKind sorts remarks by what becomes of them.
type RemarkKind uint8

// The kinds of remark. Each but RemarkAssumption becomes a finding of the check named.
const (
	RemarkAssumption     RemarkKind = iota // listed among the assumptions
	RemarkNotRead                          // a card skipped; listed once under "not read"
	RemarkLibraryNotRead                   // check library-not-read, minor
	RemarkAfterEnd                         // check after-end, minor: elements behind .end
	RemarkDuplicateName                    // check duplicate-name
	RemarkValueSuffix                      // check value-suffix
	RemarkModel                            // check model-note, minor: duplicate model, diode stack by N
)
