package netlist

// Library tells the reader which type names it knows, so that a call of a known part is kept whole
// instead of being expanded. The parts tables implement it.
type Library interface {
	// Recognise looks a type name up, after the trade's habits of prefix and suffix
	// ("DI_1N4734A", "LM7812CT", "1N4004G"). ok is false for an unknown name.
	Recognise(typeName string) (part KnownPart, ok bool)
	// Named is Recognise for a name that a `part` statement gives: a bare row name such as "317" counts too.
	Named(typeName string) (part KnownPart, ok bool)
}

// KnownPart is what the reader must know of a part to place it in the graph.
type KnownPart struct {
	Type string // canonical row name: "7812", "1N4734A"
	Role Role
	// Polarity of a regulator.
	Polarity Polarity
	// Pins is the customary order of terminals on a netlist line.
	Pins []Pin
}

// Role is what kind of part a type name means.
type Role uint8

// Roles a type name may have.
const (
	RoleRectifier  Role = iota + 1 // a diode
	RoleZener                      // a diode used in breakdown
	RoleBridge                     // four rectifiers in one case: AC AC + -
	RoleRegulator                  // fixed three-terminal
	RoleAdjustable                 // adjustable three-terminal
	RoleShunt                      // adjustable shunt reference
	RoleTransistor
)

// Pin names a terminal of a known part.
type Pin uint8

// Pins of known parts.
const (
	PinIn        Pin = iota + 1
	PinReference     // ground of a fixed regulator, adjust of an adjustable one, REF of a shunt reference
	PinOut
	PinAnode
	PinCathode
	PinAC1
	PinAC2
	PinPlus
	PinMinus
	PinCollector
	PinBase
	PinEmitter
)
