package netlist

import (
	"errors"
	"fmt"
	"math"
	"strings"

	"railproof/netlist/quantity"
	"railproof/netlist/syntax"
)

// compiled evaluates a formula and its partial derivative by probe number wrt (none if negative).
type compiled func(probes []float64, t float64, wrt int) (value, slope float64)

// resolver gives the names in a formula a meaning.
type resolver struct {
	value    func(name string) (float64, error)  // a parameter
	function func(name string) (*function, bool) // a .func of the netlist
	probe    func(text string) (int, error)      // the number of a probe; nil where none may stand
	local    map[string]argument                 // arguments of a .func under expansion
	depth    int
	budget   *int // operands compiled so far
}

// argument is what a .func was called with, and of how many operands it is: each use costs as many again.
type argument struct {
	compiled
	operands int
}

// function is a .func of the netlist.
type function struct {
	args  []string
	body  *syntax.Formula
	doubt bool // an .if whose condition is not known may leave it out
}

var errNoProbe = errors.New("a voltage or current cannot stand in a parameter")

func constant(v float64) compiled {
	return func([]float64, float64, int) (float64, float64) { return v, 0 }
}

func (r *resolver) formula(f *syntax.Formula) (compiled, error) {
	condition, err := r.disjunction(f.Condition)
	if err != nil || f.Then == nil {
		return condition, err
	}
	yes, err := r.formula(f.Then)
	if err != nil {
		return nil, err
	}
	no, err := r.formula(f.Else)
	if err != nil {
		return nil, err
	}
	return choice(condition, yes, no), nil
}

func choice(condition, yes, no compiled) compiled {
	return func(p []float64, t float64, wrt int) (float64, float64) {
		if c, _ := condition(p, t, -1); c != 0 {
			return yes(p, t, wrt)
		}
		return no(p, t, wrt)
	}
}

func truth(b bool) float64 {
	if b {
		return 1
	}
	return 0
}

func (r *resolver) disjunction(d *syntax.Disjunction) (compiled, error) {
	first, err := r.conjunction(d.Terms[0])
	if err != nil || len(d.Terms) == 1 {
		return first, err
	}
	terms := []compiled{first}
	for _, t := range d.Terms[1:] {
		c, err := r.conjunction(t)
		if err != nil {
			return nil, err
		}
		terms = append(terms, c)
	}
	return func(p []float64, t float64, _ int) (float64, float64) {
		for _, c := range terms {
			if v, _ := c(p, t, -1); v != 0 {
				return 1, 0
			}
		}
		return 0, 0
	}, nil
}

func (r *resolver) conjunction(d *syntax.Conjunction) (compiled, error) {
	first, err := r.comparison(d.Terms[0])
	if err != nil || len(d.Terms) == 1 {
		return first, err
	}
	terms := []compiled{first}
	for _, t := range d.Terms[1:] {
		c, err := r.comparison(t)
		if err != nil {
			return nil, err
		}
		terms = append(terms, c)
	}
	return func(p []float64, t float64, _ int) (float64, float64) {
		for _, c := range terms {
			if v, _ := c(p, t, -1); v == 0 {
				return 0, 0
			}
		}
		return 1, 0
	}, nil
}

func (r *resolver) comparison(c *syntax.Comparison) (compiled, error) {
	left, err := r.sum(c.Left)
	if err != nil || c.Right == nil {
		return left, err
	}
	right, err := r.sum(c.Right)
	if err != nil {
		return nil, err
	}
	op := c.Op
	return func(p []float64, t float64, _ int) (float64, float64) {
		a, _ := left(p, t, -1)
		b, _ := right(p, t, -1)
		switch op {
		case "<":
			return truth(a < b), 0
		case "<=":
			return truth(a <= b), 0
		case ">":
			return truth(a > b), 0
		case ">=":
			return truth(a >= b), 0
		case "==":
			return truth(a == b), 0
		}
		return truth(a != b), 0
	}, nil
}

func (r *resolver) sum(s *syntax.Sum) (compiled, error) {
	total, err := r.product(s.First)
	if err != nil {
		return nil, err
	}
	for _, term := range s.Rest {
		next, err := r.product(term.Term)
		if err != nil {
			return nil, err
		}
		left, sign := total, 1.0
		if term.Op == "-" {
			sign = -1
		}
		total = func(p []float64, t float64, wrt int) (float64, float64) {
			a, da := left(p, t, wrt)
			b, db := next(p, t, wrt)
			return a + sign*b, da + sign*db
		}
	}
	return total, nil
}

func (r *resolver) product(s *syntax.Product) (compiled, error) {
	total, err := r.unary(s.First)
	if err != nil {
		return nil, err
	}
	for _, term := range s.Rest {
		next, err := r.unary(term.Term)
		if err != nil {
			return nil, err
		}
		left, op := total, term.Op
		total = func(p []float64, t float64, wrt int) (float64, float64) {
			a, da := left(p, t, wrt)
			b, db := next(p, t, wrt)
			switch op {
			case "*":
				return a * b, da*b + a*db
			case "/":
				return a / b, (da*b - a*db) / (b * b)
			}
			return math.Mod(a, b), da
		}
	}
	return total, nil
}

func (r *resolver) unary(u *syntax.Unary) (compiled, error) {
	if u.Power != nil {
		return r.power(u.Power)
	}
	of, err := r.unary(u.Of)
	if err != nil {
		return nil, err
	}
	switch u.Op {
	case "-":
		return func(p []float64, t float64, wrt int) (float64, float64) {
			v, d := of(p, t, wrt)
			return -v, -d
		}, nil
	case "!":
		return func(p []float64, t float64, _ int) (float64, float64) {
			v, _ := of(p, t, -1)
			return truth(v == 0), 0
		}, nil
	}
	return of, nil
}

func (r *resolver) power(w *syntax.Power) (compiled, error) {
	base, err := r.operand(w.Base)
	if err != nil || w.Exponent == nil {
		return base, err
	}
	exponent, err := r.unary(w.Exponent)
	if err != nil {
		return nil, err
	}
	return raise(base, exponent), nil
}

// raise is base^exponent; a negative base needs a whole exponent.
func raise(base, exponent compiled) compiled {
	return func(p []float64, t float64, wrt int) (float64, float64) {
		a, da := base(p, t, wrt)
		b, db := exponent(p, t, wrt)
		v := math.Pow(a, b)
		slope := 0.0
		if da != 0 {
			slope += b * math.Pow(a, b-1) * da
		}
		if db != 0 && a > 0 {
			slope += v * math.Log(a) * db
		}
		return v, slope
	}
}

// constants of formulas.
var namedConstants = map[string]float64{"pi": math.Pi, "e": math.E}

func (r *resolver) operand(o *syntax.Operand) (compiled, error) {
	if r.budget == nil {
		r.budget = new(int)
	}
	if *r.budget++; *r.budget > maxOperands {
		return nil, errTooManyOperands
	}
	switch {
	case o.Number != "":
		n, ok := quantity.ParseSpice(o.Number)
		if !ok {
			return nil, fmt.Errorf("%s is no number", o.Number)
		}
		return constant(n.Value), nil
	case o.Probe != "":
		if r.probe == nil {
			return nil, errNoProbe
		}
		k, err := r.probe(o.Probe)
		if err != nil {
			return nil, err
		}
		return func(p []float64, _ float64, wrt int) (float64, float64) { return p[k], truth(wrt == k) }, nil
	case o.Sub != nil:
		return r.formula(o.Sub)
	}
	name := strings.ToLower(o.Call.Name)
	if o.Call.Open {
		return r.call(name, o.Call.Args)
	}
	if a, ok := r.local[name]; ok {
		if *r.budget += a.operands; *r.budget > maxOperands {
			return nil, errTooManyOperands
		}
		return a.compiled, nil
	}
	if name == "time" {
		if r.probe == nil {
			return nil, errors.New("time cannot stand in a parameter")
		}
		return func(_ []float64, t float64, _ int) (float64, float64) { return t, 0 }, nil
	}
	v, err := r.value(name)
	if err != nil {
		if c, ok := namedConstants[name]; ok {
			return constant(c), nil
		}
		return nil, err
	}
	return constant(v), nil
}

// maxOperands bounds a formula after its .func calls are expanded.
const maxOperands = 20000

var errTooManyOperands = fmt.Errorf("a formula with its functions has more than %d operands", maxOperands)

// maxCalls is how deep .func definitions may call one another.
const maxCalls = 50

func (r *resolver) call(name string, list []*syntax.Formula) (compiled, error) {
	if r.budget == nil {
		r.budget = new(int)
	}
	args, operands := make([]compiled, len(list)), make([]int, len(list))
	outer := *r
	for k, a := range list {
		if name == "table" && k == 1 {
			outer.probe = nil // the pairs of a table are constants
		}
		before := *r.budget
		c, err := outer.formula(a)
		if err != nil {
			return nil, err
		}
		args[k], operands[k] = c, *r.budget-before
	}
	if r.function != nil {
		if f, ok := r.function(name); ok {
			if f.doubt {
				return nil, fmt.Errorf("%s is not known: %w", name, errDoubtful)
			}
			if len(f.args) != len(args) {
				return nil, fmt.Errorf("%s takes %d arguments, not %d", name, len(f.args), len(args))
			}
			if r.depth >= maxCalls {
				return nil, fmt.Errorf("functions call one another more than %d deep", maxCalls)
			}
			inner := *r
			inner.depth++
			inner.local = map[string]argument{}
			for k, a := range f.args {
				inner.local[a] = argument{args[k], operands[k]}
			}
			return inner.formula(f.body)
		}
	}
	return builtin(name, args)
}
