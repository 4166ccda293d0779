package netlist

// Expression is a function of circuit quantities and time, as B sources and expression-valued E and G
// elements carry it, with exact partial derivatives.
type Expression interface {
	// Probes lists the quantities the function depends on, in a fixed order.
	Probes() []Probe
	// Evaluate returns the value for the given probe values (V, A) at time t (s) and writes the
	// partial derivative by each probe into gradient, which has the length of Probes.
	Evaluate(probes []float64, t float64, gradient []float64) float64
	// String prints the expression as it would be read again.
	String() string
}

// Probe is a quantity an expression refers to: the voltage from Plus to Minus, or, when
// Current is set, the current through Element from its first node to its second.
type Probe struct {
	Plus, Minus NodeID
	Current     bool
	Element     ElementID
}
