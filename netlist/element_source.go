package netlist

import (
	"fmt"
	"strconv"
	"strings"

	"railproof/netlist/quantity"
	"railproof/netlist/syntax"
)

// source reads V and I: a DC value, DC v, AC m p and a waveform, in any order, with or without brackets.
func (x *expander) source(lv *level, c *elementCard) {
	nodes := []NodeID{x.node(lv, c.words[0].Text()), x.node(lv, c.words[1].Text())}
	rest := x.joinUnits(lv, c, c.words[2:])
	var wave Waveform
	dc, stated := 0.0, false
	fail := func(w *syntax.Atom, err error) {
		x.noValue(lv, c, nodes, w, err, "a number, DC, AC or a waveform")
	}
	if why := unreadWave(c, rest); why != "" {
		x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: why}, "")
		return
	}
	if n := len(rest); c.letter == 'I' && n > 1 && (strings.EqualFold(rest[n-1].Text(), "load") || strings.EqualFold(rest[n-1].Text(), "step")) {
		rest = rest[:n-1]
	}
	numbers := func(k int) ([]float64, int, bool) {
		var list []float64
		for k < len(rest) {
			if !rest[k].IsExpression() && keyword(rest[k].Text()) {
				break
			}
			v, err := lv.env.atom(rest[k])
			if err != nil {
				fail(rest[k], err)
				return nil, k, false
			}
			if alternating(rest[k].Word) {
				x.remark(RemarkValueSuffix, c.line.Start(), lv.prefix+c.shown, "`"+rest[k].Word+"` in a waveform is a peak, not an RMS value")
			}
			list = append(list, v)
			k++
		}
		return list, k, true
	}
	for k := 0; k < len(rest); {
		text := strings.ToLower(rest[k].Text())
		switch {
		case rest[k].IsExpression():
			v, err := lv.env.atom(rest[k])
			if err != nil {
				fail(rest[k], err)
				return
			}
			dc, stated = v, true
			k++
		case text == "dc":
			k++
			if k < len(rest) && !keyword(rest[k].Text()) {
				v, err := lv.env.atom(rest[k])
				if err != nil {
					fail(rest[k], err)
					return
				}
				dc, stated = v, true
				k++
			}
		case text == "ac", text == "distof1", text == "distof2":
			k++
			for k < len(rest) && !keyword(rest[k].Text()) {
				if _, err := lv.env.atom(rest[k]); err != nil {
					break
				}
				k++
			}
		case text == "sin" || text == "sine" || text == "pulse" || text == "exp" || text == "pwl" || text == "sffm" || text == "am":
			if text == "pwl" && k+1 < len(rest) && isFileWord(rest[k+1].Text()) || text == "pwl" && hasKey(c, "file") {
				x.remark(RemarkLibraryNotRead, c.line.Start(), lv.prefix+c.shown, "its waveform stands in a file")
				x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: "its waveform stands in a file that is not read"}, "")
				return
			}
			list, next, ok := numbers(k + 1)
			if !ok {
				return
			}
			w, why := waveform(text, list)
			if why != "" {
				x.fault(c.line.Position(rest[k].Pos.Offset), why, waveForms[text])
				return
			}
			if w == nil {
				x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: "a waveform of kind " + text + " is not modelled"}, "")
				return
			}
			if s := strings.TrimSuffix(text, "e"); s == "sin" && len(list) > 6 || text == "pulse" && len(list) > 7 {
				x.remark(RemarkAssumption, c.line.Start(), lv.prefix+c.shown, "its waveform goes on without end; the number of cycles on the card is not read")
			}
			wave, k = w, next
		default:
			v, err := lv.env.atom(rest[k])
			if err != nil {
				if k == 0 && len(rest) == 1 {
					x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: "its value is missing"}, rest[k].Text())
					return
				}
				fail(rest[k], err)
				return
			}
			if stated {
				x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: "it has two values"}, "")
				return
			}
			if alternating(text) {
				x.remark(RemarkValueSuffix, c.line.Start(), lv.prefix+c.shown, "`"+text+"` is a constant level in a netlist, not an alternating voltage")
			}
			dc, stated = v, true
			k++
		}
	}
	for _, key := range []string{"dc", "value"} {
		if v, ok := c.assigned(key); ok && !stated {
			n, err := lv.env.evaluate(v, 0)
			if err != nil {
				x.noValue(lv, c, nodes, v.Atom, err, "a number")
				return
			}
			dc, stated = n, true
		}
	}
	if wave == nil && !stated && len(rest) > 0 {
		x.remark(RemarkAssumption, c.line.Start(), lv.prefix+c.shown, "states no level over time (an AC magnitude concerns small signals only) and gives 0")
	}
	if wave == nil {
		wave = Constant{Level: dc}
	}
	x.parasitics(lv, c)
	if c.letter == 'I' {
		if v, ok := c.assigned("r"); ok && !stated && len(rest) == 0 { // a current source used as a resistance
			if n, err := lv.env.evaluate(v, 0); err == nil {
				x.add(lv, c, nodes, Resistor{Ohms: n}, "")
				return
			}
		}
		x.add(lv, c, nodes, CurrentSource{Wave: wave}, "")
		return
	}
	s := VoltageSource{Wave: wave, ValueMissing: !stated && len(rest) == 0}
	if v, ok := c.assigned("rser"); ok {
		if n, err := lv.env.evaluate(v, 0); err == nil && n >= 0 {
			s.SeriesOhms = n
		}
	}
	x.add(lv, c, nodes, s, "")
}

// alternating reports a number whose unit says that an RMS value is meant.
func alternating(text string) bool {
	n, ok := quantity.ParseSpice(text)
	unit := strings.ToLower(n.Unit)
	return ok && (strings.Contains(unit, "rms") || strings.Contains(unit, "eff") || unit == "vac" || unit == "aac")
}

// joinUnits joins a unit that stands behind a blank to its number: `12 V`, `50 Hz`.
func (x *expander) joinUnits(lv *level, c *elementCard, words []*syntax.Atom) []*syntax.Atom {
	var list []*syntax.Atom
	for _, w := range words {
		if n := len(list); n > 0 && sourceUnits[strings.ToLower(w.Word)] {
			before := list[n-1]
			_, err := lv.env.value(strings.ToLower(w.Word))
			if number, ok := quantity.ParseSpice(before.Word); err != nil && ok && number.Factor+number.Unit+number.Rest == "" {
				x.remark(RemarkAssumption, c.line.Start(), lv.prefix+c.shown, "read `"+before.Word+" "+w.Word+"` as "+before.Word+w.Word)
				list[n-1] = &syntax.Atom{Pos: before.Pos, Word: before.Word + w.Word}
				continue
			}
		}
		list = append(list, w)
	}
	return list
}

// sourceUnits are the units that may stand behind a blank on the card of a source.
var sourceUnits = words("v mv kv vdc vac vrms vpk a ma ua µa hz khz s ms us µs ns")

// voltageControlled reads E and G: linear, polynomial of one voltage, or a formula.
func (x *expander) voltageControlled(lv *level, c *elementCard) {
	nodes := []NodeID{x.node(lv, c.words[0].Text()), x.node(lv, c.words[1].Text())}
	out := OutVoltage
	if c.letter == 'G' {
		out = OutCurrent
	}
	for _, key := range []string{"value", "vol", "cur"} {
		if v, ok := c.assigned(key); ok && v.Atom != nil {
			x.valueSource(lv, c, nodes, out, key, v.Atom, c.words[2:])
			return
		}
	}
	rest := c.words[2:]
	if len(rest) > 0 {
		switch strings.ToLower(rest[0].Text()) {
		case "value", "vol", "cur":
			if len(rest) > 1 {
				x.valueSource(lv, c, nodes, out, "", rest[1], rest[2:])
				return
			}
		case "poly":
			x.polynomial(lv, c, nodes, out, rest[1:])
			return
		case "table":
			x.table(lv, c, nodes, out, rest[1:])
			return
		case "laplace", "freq", "chebyshev", "opamp", "delay", "transformer":
			x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: "a source of kind " + strings.ToLower(rest[0].Text()) + " is not modelled"}, "")
			return
		}
		if rest[0].IsExpression() {
			x.valueSource(lv, c, nodes, out, "", rest[0], rest[1:])
			return
		}
	}
	if len(rest) < 3 && len(c.assigns) > 0 {
		x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: "what it gives by " + c.assigns[0].name + "= is not modelled"}, "")
		return
	}
	if len(rest) < 3 {
		x.fault(c.line.Start(), fmt.Sprintf("%s has %s behind its name", c.shown, counted(len(c.words), "word")), expectedCard[c.letter])
		return
	}
	if x.behindControl(lv, c, nodes, out, rest) {
		return
	}
	nodes = append(nodes, x.node(lv, rest[0].Text()), x.node(lv, rest[1].Text()))
	for _, key := range []string{"max", "min", "table", "scale", "abs", "delta"} {
		if hasKey(c, key) {
			x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: "what it gives by " + key + "= is not modelled"}, "")
			return
		}
	}
	if x.copies(lv, c) != 1 {
		x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: "copies in parallel (m=) are not modelled here"}, "")
		return
	}
	gain, err := lv.env.atom(rest[2])
	if err != nil {
		x.noValue(lv, c, nodes, rest[2], err, "a gain")
		return
	}
	x.add(lv, c, nodes, VoltageControlled{Output: out, Gain: gain}, "")
}

// valueSource reads a formula behind VALUE or alone; key is that of VALUE=, rest what stands on the card beside it.
func (x *expander) valueSource(lv *level, c *elementCard, nodes []NodeID, out Quantity, key string, formula *syntax.Atom, rest []*syntax.Atom) {
	if why := x.besideFormula(lv, c, key, rest); why != "" {
		x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: why}, "")
		return
	}
	x.formulaSource(lv, c, nodes, out, formula.Text())
}

// behindControl reads a form that stands behind the control nodes, `E1 a 0 c d TABLE (x,y) ...`: a table is one of
// the voltage between them, another form is kept as unknown. It reports whether the card is of this kind.
func (x *expander) behindControl(lv *level, c *elementCard, nodes []NodeID, out Quantity, rest []*syntax.Atom) bool {
	form := strings.ToLower(rest[2].Text())
	switch form {
	case "table":
		points := rest[3:]
		if len(points) > 0 && !points[0].IsExpression() {
			of := &syntax.Atom{Pos: rest[0].Pos, Braced: "{V(" + rest[0].Text() + "," + rest[1].Text() + ")}"}
			points = append([]*syntax.Atom{of}, points...)
		}
		x.table(lv, c, nodes, out, points)
	case "value", "vol", "cur", "poly", "laplace", "freq", "chebyshev", "opamp", "delay", "transformer":
		nodes = append(nodes, x.node(lv, rest[0].Text()), x.node(lv, rest[1].Text()))
		x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: form + " behind its control nodes is not modelled"}, "")
	default:
		return false
	}
	return true
}

// polynomial reads POLY(n) n+ n- ... p0 p1 ...: constant, linear and quadratic terms of n voltages, and for one
// voltage every power. Higher terms of several voltages are not modelled.
func (x *expander) polynomial(lv *level, c *elementCard, nodes []NodeID, out Quantity, rest []*syntax.Atom) {
	unknown := func(why string) {
		x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: why}, "")
	}
	if len(rest) == 0 {
		unknown("a polynomial without its number of voltages")
		return
	}
	n, ok := spice(rest[0].Text())
	count := int(n)
	if !ok || n != float64(count) || count < 1 || count > 20 || len(rest) < 2+2*count {
		unknown("a polynomial whose voltages or coefficients are missing")
		return
	}
	terms := make([]string, 0, count)
	for k := range count {
		terms = append(terms, "V("+rest[1+2*k].Text()+","+rest[2+2*k].Text()+")")
	}
	coefficients := rest[1+2*count:]
	products := []string{"1"}
	products = append(products, terms...)
	for i := range terms {
		for j := i; j < count; j++ {
			products = append(products, terms[i]+"*"+terms[j])
		}
	}
	for power := 3; count == 1 && power < len(coefficients); power++ {
		products = append(products, terms[0]+"^"+strconv.Itoa(power))
	}
	if len(coefficients) > len(products) {
		unknown("cubic terms of several voltages are not modelled")
		return
	}
	if len(coefficients) == 1 && count == 1 { // one coefficient is the linear one
		products = products[1:]
	}
	var parts []string
	for k, w := range coefficients {
		v, err := lv.env.atom(w)
		if err != nil {
			x.noValue(lv, c, nodes, w, err, "a coefficient")
			return
		}
		if v != 0 {
			parts = append(parts, "("+strconv.FormatFloat(v, 'e', -1, 64)+")*"+products[k])
		}
	}
	if len(parts) == 0 {
		parts = []string{"0"}
	}
	x.formulaSource(lv, c, nodes, out, strings.Join(parts, " + "))
}

// table reads TABLE {formula} = (x,y) (x,y) ...: linear between the points, flat beyond them.
func (x *expander) table(lv *level, c *elementCard, nodes []NodeID, out Quantity, rest []*syntax.Atom) {
	if len(rest) < 3 || len(rest)%2 == 0 {
		x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: "a table whose points are missing"}, "")
		return
	}
	list := []string{rest[0].Text()}
	for _, w := range rest[1:] {
		v, err := lv.env.atom(w)
		if err != nil {
			x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: "a point of its table: " + err.Error()}, "")
			return
		}
		list = append(list, strconv.FormatFloat(v, 'e', -1, 64))
	}
	x.formulaSource(lv, c, nodes, out, "table("+strings.Join(list, ", ")+")")
}
