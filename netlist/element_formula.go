package netlist

import (
	"fmt"
	"strings"

	"railproof/netlist/syntax"
)

// behaviouralCard reads `B name n n V=formula` and `I=formula`.
func (x *expander) behaviouralCard(lv *level, c *elementCard) {
	nodes := []NodeID{x.node(lv, c.words[0].Text()), x.node(lv, c.words[1].Text())}
	for _, a := range c.assigns {
		if a.name != "v" && a.name != "i" {
			continue
		}
		out := OutVoltage
		if a.name == "i" {
			out = OutCurrent
		}
		if a.value.Atom != nil && a.value.Atom.IsExpression() {
			if why := x.besideFormula(lv, c, a.name, c.words[2:]); why != "" {
				x.add(lv, c, nodes, Unknown{Letter: 'B', Why: why}, "")
				return
			}
			x.formulaSource(lv, c, nodes, out, a.value.Atom.Text())
			return
		}
		// The formula may stand without braces: it is everything behind the equals sign.
		_, text, _ := strings.Cut(c.line.Text, "=")
		x.formulaSource(lv, c, nodes, out, strings.TrimSpace(text))
		return
	}
	x.add(lv, c, nodes, Unknown{Letter: 'B', Why: "it has no V= or I= formula"}, "")
}

// harmless are keys on a source by formula that do not change what it gives at its nominal temperature.
var harmless = words("tc tc1 tc2 temp dtemp tnom mfg pn mpn type desc noise")

// besideFormula goes through what stands on a card beside its formula, whose key is given. What changes the
// source's law is the reason why the law is not known; the rest is named as not read.
func (x *expander) besideFormula(lv *level, c *elementCard, key string, rest []*syntax.Atom) (why string) {
	for _, w := range rest {
		if w.IsExpression() {
			return "a second formula stands on its card"
		}
	}
	for _, a := range c.assigns {
		switch {
		case a.name == key:
			key = "" // a second one of the same key is another formula
		case !harmless[a.name]:
			return "what " + a.name + "= adds to its formula is not modelled"
		}
	}
	for _, w := range rest {
		x.leftOver(lv, c, w.Text())
	}
	for _, a := range c.assigns {
		if harmless[a.name] {
			x.leftOver(lv, c, a.name+"=")
		}
	}
	return ""
}

// formulaLine reads `B name n n V=formula` where the formula stands without braces: it is then everything behind
// the equals sign. It reports whether the line is of that form.
func (x *expander) formulaLine(lv *level, line *syntax.Line) bool {
	at := strings.IndexByte(line.Text, '=')
	if at < 0 {
		return false
	}
	left := strings.Fields(line.Text[:at])
	body := strings.TrimLeft(line.Text[at+1:], " \t")
	if len(left) != 4 || body == "" || body[0] == '{' || body[0] == '\'' || strings.ContainsAny(line.Text[:at], "(){}'\",") {
		return false
	}
	out := OutVoltage
	switch strings.ToLower(left[3]) {
	case "v":
	case "i":
		out = OutCurrent
	default:
		return false
	}
	c := &elementCard{line: line, letter: 'B', name: left[0], shown: left[0]}
	nodes := []NodeID{x.node(lv, left[1]), x.node(lv, left[2])}
	body, more := cutFields(body)
	for _, key := range more {
		c.assigns = append(c.assigns, assignment{name: strings.ToLower(key)})
	}
	if why := x.besideFormula(lv, c, "", nil); why != "" {
		x.add(lv, c, nodes, Unknown{Letter: 'B', Why: why}, "")
		return true
	}
	x.formulaSource(lv, c, nodes, out, body)
	return true
}

// cutFields takes KEY=value from the end of a formula that stands without braces, and returns their keys.
func cutFields(body string) (formula string, keys []string) {
	signs := assignmentSigns(body, 1)
	end := len(body)
	for k, sign := range signs {
		at := nameBefore(body, 0, sign)
		if k == 0 {
			end = at
		}
		keys = append(keys, strings.TrimSpace(body[at:sign]))
	}
	return strings.TrimSpace(body[:end]), keys
}

// formulaSource adds a behavioural source whose formula is compiled when every element it may refer to is known.
func (x *expander) formulaSource(lv *level, c *elementCard, nodes []NodeID, out Quantity, text string) {
	id := x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: "its formula is not read"}, "")
	x.formulas = append(x.formulas, func() { x.circuit.Elements[id].Device = x.behavioural(lv, c, out, text) })
}

// behavioural compiles a formula into a behavioural source. A formula that cannot be read leaves the element
// unknown: macromodels carry functions of their own.
func (x *expander) behavioural(lv *level, c *elementCard, out Quantity, text string) Device {
	f, err := syntax.ParseFormula(text)
	if err != nil {
		return Unknown{Letter: c.letter, Why: err.Error()}
	}
	e := &formulaExpression{text: f.String()}
	r := &resolver{value: lv.env.value, function: lv.env.function}
	r.probe = func(probe string) (int, error) {
		inside := probe[2 : len(probe)-1]
		if upper(probe[0]) == 'I' {
			id, ok := x.byName[strings.ToLower(lv.prefix+strings.TrimSpace(inside))]
			if !ok {
				return 0, fmt.Errorf("it refers to the current of %s, which is not there", strings.TrimSpace(inside))
			}
			switch x.circuit.Elements[id].Device.(type) {
			case VoltageSource, VoltageControlled, Inductor:
			default:
				return 0, fmt.Errorf("it refers to the current of %s, which is no voltage source", strings.TrimSpace(inside))
			}
			e.probes = append(e.probes, Probe{Current: true, Element: id})
			return len(e.probes) - 1, nil
		}
		plus, minus, two := strings.Cut(inside, ",")
		p := Probe{Minus: Ground}
		for _, end := range []struct {
			name string
			node *NodeID
			used bool
		}{{plus, &p.Plus, true}, {minus, &p.Minus, two}} {
			if name := strings.TrimSpace(end.name); end.used {
				id, _, _, found := x.nodeKey(lv, name)
				if *end.node = id; !found {
					return 0, fmt.Errorf("it refers to the voltage of node %s, which is not there", name)
				}
			}
		}
		for k, old := range e.probes {
			if old == p {
				return k, nil
			}
		}
		e.probes = append(e.probes, p)
		return len(e.probes) - 1, nil
	}
	compiled, err := r.formula(f)
	if err != nil {
		return Unknown{Letter: c.letter, Why: err.Error()}
	}
	e.f = compiled
	return Behavioural{Output: out, Expression: e}
}

// formulaExpression is a compiled formula as an Expression.
type formulaExpression struct {
	f      compiled
	probes []Probe
	text   string
}

func (e *formulaExpression) Probes() []Probe { return e.probes }

func (e *formulaExpression) Evaluate(probes []float64, t float64, gradient []float64) float64 {
	value, _ := e.f(probes, t, -1)
	for k := range gradient {
		_, gradient[k] = e.f(probes, t, k)
	}
	return value
}

func (e *formulaExpression) String() string { return e.text }
