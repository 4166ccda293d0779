package netlist

// Device is what an element is. The concrete types below are the only ones.
// Each documents its node order.
type Device interface{ device() }

// Resistor has nodes a, b.
type Resistor struct{ Ohms float64 }

// Capacitor has nodes plus, minus.
type Capacitor struct {
	Farads  float64
	Initial *float64 // IC= in volts
}

// Inductor has nodes plus, minus; current flows from plus to minus inside.
type Inductor struct {
	Henries float64
	Initial *float64 // IC= in amperes
}

// Coupling couples two or more inductors pairwise with factor K in (0, 1]. It has no nodes.
type Coupling struct {
	Inductors []ElementID
	Factor    float64
}

// Diode has nodes anode, cathode. Model is nil when the netlist defines none for the type name.
type Diode struct {
	Model *DiodeModel
	Area  float64 // 1 unless stated
	Off   bool
}

// Transistor has nodes collector, base, emitter (and ignored substrate).
// Model is nil when the netlist defines none for the type name.
type Transistor struct {
	Model *TransistorModel
	Area  float64
}

// Fet has nodes drain, gate, source, bulk. Model is nil when none is defined.
type Fet struct {
	Model         *FetModel
	Width, Length float64 // metres
}

// Switch has nodes a, b, control plus, control minus.
type Switch struct {
	Model *SwitchModel
	On    bool // initial state
}

// VoltageSource has nodes plus, minus.
type VoltageSource struct {
	Wave         Waveform
	SeriesOhms   float64 // trailing Rser=
	ValueMissing bool    // no value written: 0 V
}

// CurrentSource has nodes plus, minus; positive current flows from plus through the source to minus.
type CurrentSource struct{ Wave Waveform }

// VoltageControlled is E or G: nodes plus, minus, control plus, control minus.
type VoltageControlled struct {
	Output Quantity // OutVoltage for E, OutCurrent for G
	Gain   float64
}

// CurrentControlled is H or F: nodes plus, minus; controlled by the current through element Control,
// which is a two-terminal voltage source or an E source (from its plus to its minus).
type CurrentControlled struct {
	Output  Quantity // OutVoltage for H, OutCurrent for F
	Control ElementID
	Gain    float64
}

// Behavioural is a B source or an E/G with an expression: nodes plus, minus.
type Behavioural struct {
	Output     Quantity
	Expression Expression
}

// Quantity says what a controlled source puts out.
type Quantity uint8

// What a controlled source puts out.
const (
	OutVoltage Quantity = iota
	OutCurrent
)

// Regulator is a three-terminal regulator or adjustable shunt reference recognised by its type name.
// Nodes are in, reference (ground or adjust), out; for a shunt reference: cathode, reference, anode.
type Regulator struct {
	Polarity    Polarity
	Adjustable  bool // regulates out-to-adjust
	Shunt       bool // adjustable shunt reference
	PinsAssumed bool // pin order was inferred, not stated
	Macromodel  bool // the netlist carries a subcircuit for it that was not expanded
	// Written is the nodes in the order of the card, from which pins= may put them otherwise.
	Written []NodeID
}

// Polarity of a regulator.
type Polarity int8

// Polarities.
const (
	Positive Polarity = 1
	Negative Polarity = -1
)

// Unknown is an element the engine cannot model; its island stays unproven.
type Unknown struct {
	Letter byte
	Why    string // one clause: "no definition of subcircuit LM2595"
}

func (Resistor) device()          {}
func (Capacitor) device()         {}
func (Inductor) device()          {}
func (Coupling) device()          {}
func (Diode) device()             {}
func (Transistor) device()        {}
func (Fet) device()               {}
func (Switch) device()            {}
func (VoltageSource) device()     {}
func (CurrentSource) device()     {}
func (VoltageControlled) device() {}
func (CurrentControlled) device() {}
func (Behavioural) device()       {}
func (Regulator) device()         {}
func (Unknown) device()           {}

// DiodeModel holds the parameters of a D model card, SPICE defaults filled in.
type DiodeModel struct {
	Name    string
	IS      float64 // A, default 1e-14
	N       float64 // default 1
	RS      float64 // ohm, default 0
	BV      float64 // V, 0 = no breakdown
	IBV     float64 // A, default 1e-3 at BV
	NBV     float64 // default 1
	Bare    bool    // the card states no parameter: a placeholder
	Ratings []Field // rating-like parameters (Vpk=, Iave=), and mfg
}

// TransistorModel holds NPN or PNP parameters, SPICE defaults filled in.
type TransistorModel struct {
	Name       string
	Polarity   Polarity // Positive for NPN
	IS, BF, BR float64
	NF, NR     float64
	VAF        float64 // V, 0 = infinite
	RB, RC, RE float64
	Bare       bool
	Ratings    []Field
}

// FetModel holds NMOS or PMOS level 1 parameters, SPICE defaults filled in.
type FetModel struct {
	Name                string
	Polarity            Polarity // Positive for NMOS
	VTO, KP, Gamma, Phi float64
	Lambda, RD, RS      float64
	Bare                bool
	Ratings             []Field
}

// SwitchModel holds a voltage-controlled switch: closed above VT+VH, open below VT-VH.
type SwitchModel struct {
	Name              string
	VT, VH, RON, ROFF float64
}
