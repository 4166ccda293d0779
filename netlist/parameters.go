package netlist

import (
	"fmt"
	"math"
	"strings"

	"railproof/netlist/quantity"
	"railproof/netlist/syntax"
)

// environment holds the parameters visible at one level of the expanded netlist. They are evaluated when
// first asked for, so that they may refer forward.
type environment struct {
	parent  *environment
	scope   *scope
	given   map[string]float64 // from the calling card, already evaluated
	texts   map[string]assignment
	known   map[string]float64
	working map[string]bool

	formulas map[string]*syntax.Formula // parsed so far; shared by all environments of a netlist
}

func newEnvironment(parent *environment, s *scope, given map[string]float64) *environment {
	e := &environment{
		parent: parent, scope: s, given: given,
		texts: map[string]assignment{}, known: map[string]float64{}, working: map[string]bool{},
	}
	if e.formulas = map[string]*syntax.Formula{}; parent != nil {
		e.formulas = parent.formulas
	}
	for _, a := range s.defaults {
		e.texts[a.name] = a
	}
	for _, a := range s.params {
		e.texts[a.name] = a
	}
	return e
}

// maxParameterDepth is how deep parameters may refer to one another.
const maxParameterDepth = 200

// value evaluates a parameter.
func (e *environment) value(name string) (float64, error) { return e.lookup(name, 0) }

func (e *environment) lookup(name string, depth int) (float64, error) {
	if depth > maxParameterDepth {
		return 0, fmt.Errorf("parameters refer to one another more than %d deep", maxParameterDepth)
	}
	for at := e; at != nil; at = at.parent {
		if v, ok := at.given[name]; ok {
			return v, nil
		}
		if v, ok := at.known[name]; ok {
			return v, nil
		}
		a, ok := at.texts[name]
		if !ok {
			continue
		}
		if a.doubt {
			return 0, fmt.Errorf("%s is not known: %w", name, errDoubtful)
		}
		if at.working[name] {
			return 0, fmt.Errorf("parameter %s is defined by itself", name)
		}
		at.working[name] = true
		v, err := at.evaluate(a.value, depth+1)
		delete(at.working, name)
		if err != nil {
			return 0, err
		}
		at.known[name] = v
		return v, nil
	}
	return 0, fmt.Errorf("%s is neither a number nor a parameter", name)
}

func (e *environment) function(name string) (*function, bool) {
	for s := e.scope; s != nil; s = s.parent {
		if f, ok := s.funcs[name]; ok {
			return f, true
		}
	}
	return nil, false
}

// evaluate computes what stands behind an equals sign.
func (e *environment) evaluate(v *syntax.Value, depth int) (float64, error) {
	if v.Atom == nil {
		list := atoms(v.Group.Items)
		if len(list) != 1 {
			return 0, fmt.Errorf("a list where one value was expected")
		}
		return e.atomAt(list[0], depth)
	}
	return e.atomAt(v.Atom, depth)
}

// atom computes a number, a braced formula or a parameter name.
func (e *environment) atom(a *syntax.Atom) (float64, error) { return e.atomAt(a, 0) }

func (e *environment) atomAt(a *syntax.Atom, depth int) (float64, error) {
	if !a.IsExpression() {
		if v, ok := spice(a.Text()); ok {
			return v, nil
		}
	}
	f, err := e.parse(a.Text())
	if err != nil {
		return 0, err
	}
	r := &resolver{value: func(name string) (float64, error) { return e.lookup(name, depth+1) }, function: e.function}
	c, err := r.formula(f)
	if err != nil {
		return 0, err
	}
	v, _ := c(nil, 0, -1)
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return 0, fmt.Errorf("`%s` has no finite value", shorten(a.Text()))
	}
	return v, nil
}

// parse is ParseFormula, once for each text: the cards of a subcircuit are evaluated at each call.
func (e *environment) parse(text string) (*syntax.Formula, error) {
	if f, ok := e.formulas[text]; ok {
		return f, nil
	}
	f, err := syntax.ParseFormula(text)
	if err == nil && e.formulas != nil {
		e.formulas[text] = f
	}
	return f, err
}

// spice reads a number of the netlist.
func spice(text string) (float64, bool) {
	n, ok := quantity.ParseSpice(text)
	return n.Value, ok
}

func shorten(s string) string {
	if len(s) > 60 {
		s = s[:57] + "..."
	}
	return strings.ToValidUTF8(s, "?")
}
