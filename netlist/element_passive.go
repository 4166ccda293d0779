package netlist

import (
	"errors"
	"fmt"
	"math"
	"strings"

	"railproof/netlist/quantity"
	"railproof/netlist/syntax"
)

// passive reads R, C and L.
func (x *expander) passive(lv *level, c *elementCard) {
	nodes := []NodeID{x.node(lv, c.words[0].Text()), x.node(lv, c.words[1].Text())}
	if c.looseFormula() {
		x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: "its value is a formula without braces"}, "")
		return
	}
	rest := joinRatings(unquoted(c.words[2:]))
	typeName := ""
	value, found := 0.0, false
	var number quantity.Spice
	for k := 0; k < len(rest); k++ {
		w := rest[k]
		text := w.Text()
		if !w.IsExpression() {
			if n, ok := quantity.ParseSpice(text); ok {
				if n.Coded && strings.Contains(n.Unit, "%") {
					x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: "`" + text + "` may be a value or a value and its tolerance"}, "")
					return
				}
				if !found && c.ratingAlone(n) && c.addValueRatings(text) == "" {
					continue
				}
				if !found {
					value, found, number = n.Value, true, n
					if unit, ok := unitAlone(rest, k+1); ok && n.Factor == "" {
						if joined, ok := quantity.ParseSpice(text + unit); ok {
							value, number = joined.Value, joined
							x.remark(RemarkAssumption, c.line.Start(), lv.prefix+c.shown, "read `"+text+" "+unit+"` as "+text+unit)
							k++
						}
					}
					x.leftOver(lv, c, c.addValueRatings(n.Rest))
				} else {
					x.leftOver(lv, c, c.addValueRatings(text))
				}
				continue
			}
		}
		if !found && w.IsExpression() {
			v, err := lv.env.atom(w)
			if err != nil {
				x.noValue(lv, c, nodes, w, err, "a value")
				return
			}
			value, found = v, true
			continue
		}
		if !found && k == 0 {
			if v, err := lv.env.value(strings.ToLower(text)); err == nil {
				value, found = v, true
				continue
			}
			typeName = text
			continue
		}
		switch _, _, model := lv.scope.model(strings.ToLower(text)); {
		case strings.EqualFold(text, "tc") || strings.EqualFold(text, "tc1") || strings.EqualFold(text, "tc2"):
			for k+1 < len(rest) && isValue(rest[k+1]) {
				k++
			}
		case model && typeName == "":
			typeName = text
		default:
			x.leftOver(lv, c, c.addValueRatings(text))
		}
	}
	key := map[byte]string{'R': "r", 'C': "c", 'L': "l"}[c.letter]
	for _, k := range []string{key, "value", "val"} {
		if v, ok := c.assigned(k); ok && !found {
			n, err := lv.env.evaluate(v, 0)
			if err != nil {
				x.noValue(lv, c, nodes, v.Atom, err, "a value")
				return
			}
			value, found = n, true
		}
	}
	if typeName != "" {
		if m := x.modelCardNamed(lv.scope, typeName); m != nil {
			v, stated := m.values[key]
			ours := m.kind != "" && strings.HasPrefix(m.kind, key)
			switch {
			case !ours:
				x.add(lv, c, nodes, wrongKind(c, m), typeName)
				return
			case m.unknown != "":
				x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: m.unknown}, typeName)
				return
			case stated && !found:
				value, found = v, true
			case stated && v != 1:
				x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: fmt.Sprintf("its card and its model %s both state a value", typeName)}, typeName)
				return
			}
		}
	}
	if !found {
		x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: "its value is missing"}, typeName)
		return
	}
	name := lv.prefix + c.shown
	if value < 0 {
		x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: fmt.Sprintf("its value %g is negative", value)}, typeName)
		return
	}
	x.doubtfulValue(c, name, value, number)
	one := value
	switch copies := x.copies(lv, c); c.letter {
	case 'C':
		value *= copies
	default:
		value /= copies
	}
	if math.IsInf(value, 0) || value == 0 && one != 0 {
		x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: "its value with m= is beyond all numbers"}, typeName)
		return
	}
	x.parasitics(lv, c)
	var initial *float64
	if v, ok := c.assigned("ic"); ok {
		if n, err := lv.env.evaluate(v, 0); err == nil {
			initial = &n
		}
	}
	switch c.letter {
	case 'R':
		x.add(lv, c, nodes, Resistor{Ohms: value}, typeName)
	case 'C':
		x.add(lv, c, nodes, Capacitor{Farads: value, Initial: initial}, typeName)
	case 'L':
		x.add(lv, c, nodes, Inductor{Henries: value, Initial: initial}, typeName)
	}
}

// leftOver says that a word behind the value was not understood; none if it is empty.
func (x *expander) leftOver(lv *level, c *elementCard, text string) {
	if text == "" {
		return
	}
	x.remark(RemarkAssumption, c.line.Start(), lv.prefix+c.shown, "`"+shorten(text)+"` behind the value is not read")
}

// parasitics names the small parts that some programs put around an element by its card: they are not modelled.
func (x *expander) parasitics(lv *level, c *elementCard) {
	for _, f := range c.fields {
		switch strings.ToLower(f.Key) {
		case "rpar", "cpar", "lser", "rlshunt":
			x.leftOver(lv, c, f.Key+"=")
		}
	}
}

// unquoted takes quoted text apart at its blanks: "4.7mF 63V".
func unquoted(words []*syntax.Atom) []*syntax.Atom {
	var list []*syntax.Atom
	for _, w := range words {
		if w.Quoted == "" {
			list = append(list, w)
			continue
		}
		for _, part := range strings.Fields(w.Text()) {
			list = append(list, &syntax.Atom{Pos: w.Pos, Word: part})
		}
	}
	return list
}

// joinRatings joins a tolerance or rating whose sign stands behind a blank to its number: `5 %`, `25 V`, `1/4 W`.
func joinRatings(words []*syntax.Atom) []*syntax.Atom {
	var list []*syntax.Atom
	for _, w := range words {
		if n := len(list); n > 0 && ratingUnits[strings.ToLower(w.Word)] {
			if number, ok := quantity.ParseSpice(list[n-1].Word); ok && number.Factor+number.Unit == "" {
				list[n-1] = &syntax.Atom{Pos: list[n-1].Pos, Word: list[n-1].Word + w.Word}
				continue
			}
		}
		list = append(list, w)
	}
	return list
}

var ratingUnits = words("% v vdc w watt watts")

// looseFormula reports R=, C= or L= with a formula that stands without marks: it goes on behind its first word.
func (c *elementCard) looseFormula() bool {
	v, ok := c.assigned(strings.ToLower(string(c.letter)))
	if !ok || v.Atom == nil || v.Atom.Word == "" {
		return false
	}
	more := strings.TrimLeft(c.line.Text[v.Atom.Pos.Offset+len(v.Atom.Word):], " \t")
	return more != "" && strings.ContainsRune("(*/+-^?", rune(more[0]))
}

// noValue is an element whose value cannot be computed: an error, unless the name may be defined in what was
// not read.
func (x *expander) noValue(lv *level, c *elementCard, nodes []NodeID, w *syntax.Atom, err error, expected string) {
	if x.unknowable(err) {
		x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: "its value is not known: " + err.Error()}, "")
		return
	}
	at := c.line.Start()
	if w != nil {
		at = c.line.Position(w.Pos.Offset)
	}
	x.fault(at, err.Error(), expected)
}

// unknowable reports that a value cannot be computed for no fault of the netlist: what defines it was not read, it
// depends on the solution, or it takes a function that is not known here.
func (x *expander) unknowable(err error) bool {
	var f unknownFunction
	return x.unread || errors.Is(err, errNoProbe) || errors.Is(err, errDoubtful) || errors.As(err, &f)
}

// copies is m= of a card: how many equal parts in parallel one symbol stands for.
func (x *expander) copies(lv *level, c *elementCard) float64 {
	v, ok := c.assigned("m")
	if !ok {
		return 1
	}
	m, err := lv.env.evaluate(v, 0)
	if err != nil || m <= 0 {
		return 1
	}
	if m != 1 {
		x.remark(RemarkModel, c.line.Start(), lv.prefix+c.shown,
			fmt.Sprintf("m=%g makes one symbol stand for %g in parallel: ratings hold for one part, stresses for all of them", m, m))
	}
	return m
}

// unitAlone reports whether the word after a number is its unit: `10 uF`.
func unitAlone(words []*syntax.Atom, k int) (string, bool) {
	if k >= len(words) || words[k].Word == "" {
		return "", false
	}
	switch text := words[k].Word; strings.ToLower(strings.NewReplacer("µ", "u", "μ", "u", "Ω", "ohm").Replace(text)) {
	case "f", "uf", "nf", "pf", "mf", "h", "uh", "mh", "nh", "ohm", "ohms", "kohm", "mohm", "k", "m", "u", "n", "p", "meg", "megohm", "kohms":
		return text, true
	}
	return "", false
}

// doubtfulValue remarks on numbers that SPICE reads otherwise than their writer may have meant.
func (x *expander) doubtfulValue(c *elementCard, name string, value float64, n quantity.Spice) {
	say := func(text string) { x.remark(RemarkValueSuffix, c.line.Start(), name, text) }
	switch c.letter {
	case 'C':
		switch {
		case value >= 1:
			say(fmt.Sprintf("a capacitance of %g F: was a scale factor (u, n, p) left out?", value))
		case strings.EqualFold(n.Factor, "f"):
			say(fmt.Sprintf("`%s` is femto: the capacitance is %g F", n.Factor, value))
		case n.Factor == "M":
			say(fmt.Sprintf("`M` is milli: the capacitance is %g F", value))
		}
	case 'R':
		switch {
		case n.Factor == "M" && !n.Coded:
			say(fmt.Sprintf("`M` is milli in a netlist, MEG is mega: the resistance is %g ohm", value))
		case value >= 1e9 && n.Factor != "":
			say(fmt.Sprintf("a resistance of %g ohm", value))
		}
	case 'L':
		switch {
		case value >= 1000:
			say(fmt.Sprintf("an inductance of %g H: was a scale factor (m, u) left out?", value))
		case n.Factor == "M":
			say(fmt.Sprintf("`M` is milli: the inductance is %g H", value))
		}
	}
}
