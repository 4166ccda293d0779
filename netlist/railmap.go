package netlist

import (
	"strings"

	"railproof/netlist/quantity"
)

// StageRole is what a stage of a rail does.
type StageRole string

// The roles, in the order in which power passes through them.
const (
	StageSource      StageRole = "source"
	StageTransformer StageRole = "transformer"
	StageRectifier   StageRole = "rectifier"
	StageReservoir   StageRole = "reservoir"
	StageFilter      StageRole = "filter"
	StageRegulator   StageRole = "regulator"
	StageSeries      StageRole = "series" // a blocking diode or a switch in the way
	StageLoad        StageRole = "load"
)

// Arrangement is how the parts of a stage are connected.
type Arrangement string

// The arrangements that are recognised.
const (
	HalfWave          Arrangement = "half-wave"
	CentreTap         Arrangement = "centre-tap"
	Bridge            Arrangement = "bridge"
	DualRailBridge    Arrangement = "dual-rail bridge"
	FullWaveDoubler   Arrangement = "full-wave voltage doubler"
	HalfWaveDoubler   Arrangement = "half-wave voltage doubler"
	Multiplier        Arrangement = "voltage multiplier"
	ThreePhaseBridge  Arrangement = "three-phase bridge"
	ThreePhaseStar    Arrangement = "three-phase half-wave"
	ChokeInput        Arrangement = "choke-input filter"
	PiFilter          Arrangement = "pi filter"
	RCFilter          Arrangement = "RC filter"
	SeriesChoke       Arrangement = "series choke"
	ZenerShunt        Arrangement = "zener shunt"
	ReferenceShunt    Arrangement = "shunt reference"
	SeriesPass        Arrangement = "series-pass regulator"
	ThreeTerminal     Arrangement = "three-terminal regulator"
	DirectSource      Arrangement = "direct voltage"
	AlternatingSource Arrangement = "alternating voltage"
)

// RailStage is one stage of a rail.
type RailStage struct {
	Role        StageRole   `json:"role"`
	Arrangement Arrangement `json:"arrangement,omitempty"` // empty where the role says it all
	Elements    []ElementID `json:"-"`
	Names       []string    `json:"elements"`          // of the elements, full paths
	Node        NodeID      `json:"-"`                 // where the stage delivers; for a source, its first node
	NodeName    string      `json:"node"`              //
	Cascade     bool        `json:"cascade,omitempty"` // a regulator behind another one
	Note        string      `json:"note,omitempty"`    // values of the parts, for people
}

// RailChain is one rail of a supply: the chain from its source to its load as a person would draw it.
type RailChain struct {
	Stages   []RailStage `json:"stages"`
	Output   NodeID      `json:"-"`                  // the last node
	Return   NodeID      `json:"-"`                  //
	Negative bool        `json:"negative,omitempty"` // the rail is below its return
}

// RailMap recognises the rails of the circuit: source -> (transformer) -> rectifier -> reservoir ->
// (filter) -> regulator -> load, one chain for each way to a last node, in the order of the netlist. Where
// nothing is recognised it is empty; no check depends on it. d may be nil.
func (c *Circuit) RailMap(d *Duty) []RailChain {
	f := newRailFinder(c, d)
	f.rectifiers()
	f.direct()
	return f.chains
}

// Rectifier is the rectifier arrangement of the chain, empty if it has none.
func (r RailChain) Rectifier() Arrangement {
	for _, s := range r.Stages {
		if s.Role == StageRectifier {
			return s.Arrangement
		}
	}
	return ""
}

// Stage returns the first stage of a role.
func (r RailChain) Stage(role StageRole) (RailStage, bool) {
	for _, s := range r.Stages {
		if s.Role == role {
			return s, true
		}
	}
	return RailStage{}, false
}

// String draws the rail as one line: "V1 12 V rms 50 Hz -> bridge D1..D4 -> C1 2200 uF at VRAW -> ...".
func (r RailChain) String() string {
	var words []string
	for _, s := range r.Stages {
		words = append(words, s.String())
	}
	return strings.Join(words, " -> ")
}

// String names the stage, its parts, and where it delivers.
func (s RailStage) String() string {
	parts := strings.Join(foldNames(s.Names), " ")
	var words []string
	switch s.Role {
	case StageSource, StageReservoir, StageSeries:
		words = append(words, parts)
	case StageLoad:
		if parts == "" {
			parts = "no load drawn"
		}
		return parts
	case StageTransformer:
		words = append(words, "transformer", parts)
	default:
		words = append(words, string(s.Arrangement))
		if s.Cascade {
			words = append(words, "in cascade")
		}
		words = append(words, parts)
	}
	if s.Note != "" {
		words = append(words, s.Note)
	}
	switch s.Role {
	case StageRegulator, StageFilter, StageRectifier:
		words = append(words, "at "+s.NodeName)
	}
	return strings.Join(words, " ")
}

// foldNames shortens runs of numbered names: D1 D2 D3 D4 become D1..D4.
func foldNames(names []string) []string {
	var folded []string
	for i := 0; i < len(names); {
		j := i
		prefix, first, ok := numbered(names[i])
		for ok && j+1 < len(names) {
			p, n, numeric := numbered(names[j+1])
			if !numeric || p != prefix || n != first+j+1-i {
				break
			}
			j++
		}
		if j-i >= 2 {
			folded = append(folded, names[i]+".."+names[j])
		} else {
			folded = append(folded, names[i:j+1]...)
		}
		i = j + 1
	}
	return folded
}

// describe says what a part is in a few words: the value of a passive part, the type of another.
func (c *Circuit) describe(id ElementID) string {
	e := &c.Elements[id]
	switch d := e.Device.(type) {
	case Resistor:
		return quantity.Format(d.Ohms, quantity.Ohm, 3)
	case Capacitor:
		return quantity.Format(d.Farads, quantity.Farad, 3)
	case Inductor:
		return quantity.Format(d.Henries, quantity.Henry, 3)
	case VoltageSource:
		switch w := d.Wave.(type) {
		case Sine:
			return quantity.Format(w.Amplitude, quantity.Volt, 4) + " peak " + quantity.Format(w.Frequency, quantity.Hertz, 4)
		case Constant:
			return quantity.Format(w.Level, quantity.Volt, 4)
		}
	case CurrentSource:
		if w, ok := d.Wave.(Constant); ok {
			return quantity.Format(w.Level, quantity.Ampere, 3)
		}
	case Regulator:
		return e.TypeName
	}
	return ""
}
