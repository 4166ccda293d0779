package netlist

import (
	"fmt"
	"regexp"
	"strings"

	"railproof/netlist/quantity"
	"railproof/netlist/syntax"
)

// stackFactor is the emission coefficient from which one diode symbol stands for a string of diodes.
const stackFactor = 8

func (x *expander) diode(lv *level, c *elementCard) {
	nodes := []NodeID{x.node(lv, c.words[0].Text()), x.node(lv, c.words[1].Text())}
	typeName := c.words[2].Text()
	d := Diode{Area: 1}
	if m := x.modelCardNamed(lv.scope, typeName); m != nil {
		if m.kind != "d" {
			x.add(lv, c, nodes, wrongKind(c, m), typeName)
			return
		}
		if why := m.impossible(); why != "" {
			x.add(lv, c, nodes, Unknown{Letter: 'D', Why: why}, typeName)
			return
		}
		d.Model = m.diode()
		if d.Model.N >= stackFactor {
			x.remark(RemarkModel, c.line.Start(), lv.prefix+c.shown,
				fmt.Sprintf("N=%g makes one symbol stand for a string of diodes: ratings hold for one diode, stresses for the string", d.Model.N))
		}
	}
	for _, w := range c.words[3:] {
		if strings.EqualFold(w.Text(), "off") {
			d.Off = true
		} else if v, ok := x.areaOf(lv, c, w); ok {
			d.Area = v
		}
	}
	if v, ok := c.assigned("area"); ok {
		if a, err := lv.env.evaluate(v, 0); err == nil && a > 0 {
			d.Area = a
		}
	}
	d.Area *= x.copies(lv, c)
	typeName = x.typeOf(typeName, c)
	if voltageName.MatchString(typeName) && x.recognised("ZENER_"+typeName) && (d.Model == nil || d.Model.BV == 0) {
		x.remark(RemarkAssumption, c.line.Start(), lv.prefix+c.shown, "a diode named "+typeName+" is taken as a zener of that voltage")
		typeName = "ZENER_" + typeName
	}
	x.add(lv, c, nodes, d, typeName)
}

// voltageName is the name of a diode that is nothing but a voltage: 5V1, 12V, 5.1V.
var voltageName = regexp.MustCompile(`^\d{1,3}(?:[vV]\d{0,2}|\.\d{1,2}[vV])$`)

// typeOf is the name by which ratings are looked up: the element's own type field if the model is a
// catch-all, else the model name.
func (x *expander) typeOf(model string, c *elementCard) string {
	for _, f := range c.fields {
		switch strings.ToLower(f.Key) {
		case "pn", "mpn", "part", "partno":
			if x.library != nil {
				if _, ok := x.library.Recognise(model); !ok {
					if _, ok := x.library.Recognise(f.Value); ok {
						return f.Value
					}
				}
			}
		}
	}
	return model
}

// modelAt finds which of the words from position first on is the model: a defined one, else the first that is
// no plain node number.
func (x *expander) modelAt(lv *level, c *elementCard, first, last int) int {
	for k := first; k <= last && k < len(c.words); k++ {
		if _, _, ok := lv.scope.model(strings.ToLower(c.words[k].Text())); ok {
			return k
		}
	}
	for k := first; k <= last && k < len(c.words); k++ {
		text := c.words[k].Text()
		if x.library != nil {
			if _, ok := x.library.Recognise(text); ok {
				return k
			}
		}
	}
	// A substrate node stands between: the model is the last word that is neither a number nor a keyword.
	for k := min(last, len(c.words)-1); k >= first; k-- {
		text := c.words[k].Text()
		n, number := quantity.ParseSpice(text)
		if number = number && !n.Coded; !number && !isGroundName(text) && !strings.EqualFold(text, "off") {
			return k
		}
	}
	return min(first, len(c.words)-1)
}

func (x *expander) transistor(lv *level, c *elementCard) {
	at := x.modelAt(lv, c, 3, 4)
	var nodes []NodeID
	for _, w := range c.words[:min(at, 4)] {
		nodes = append(nodes, x.node(lv, w.Text()))
	}
	typeName := c.words[at].Text()
	t := Transistor{Area: 1}
	if m := x.modelCardNamed(lv.scope, typeName); m != nil {
		if m.kind != "npn" && m.kind != "pnp" && m.kind != "lpnp" {
			x.add(lv, c, nodes, wrongKind(c, m), typeName)
			return
		}
		if why := m.impossible(); why != "" {
			x.add(lv, c, nodes, Unknown{Letter: 'Q', Why: why}, typeName)
			return
		}
		t.Model = m.transistor()
	}
	for _, w := range c.words[at+1:] {
		if strings.EqualFold(w.Text(), "off") {
			continue
		}
		if v, ok := x.areaOf(lv, c, w); ok {
			t.Area = v
		}
	}
	if v, ok := c.assigned("area"); ok {
		if a, err := lv.env.evaluate(v, 0); err == nil && a > 0 {
			t.Area = a
		}
	}
	t.Area *= x.copies(lv, c)
	x.add(lv, c, nodes, t, x.typeOf(typeName, c))
}

func (x *expander) fet(lv *level, c *elementCard) {
	at := x.modelAt(lv, c, 3, 4)
	var nodes []NodeID
	for _, w := range c.words[:min(at, 4)] {
		nodes = append(nodes, x.node(lv, w.Text()))
	}
	if len(nodes) == 3 {
		nodes = append(nodes, nodes[2])
	}
	typeName := c.words[at].Text()
	f := Fet{}
	if m := x.modelCardNamed(lv.scope, typeName); m != nil {
		if m.unknown != "" {
			x.add(lv, c, nodes, Unknown{Letter: 'M', Why: m.unknown}, typeName)
			return
		}
		if level := m.or("level", 1); level != 1 || m.kind != "nmos" && m.kind != "pmos" {
			x.add(lv, c, nodes, Unknown{Letter: 'M', Why: fmt.Sprintf("model %s of kind %s level %g is not modelled", typeName, m.kind, level)}, typeName)
			return
		}
		f.Model = m.fet()
		f.Width, f.Length = m.or("w", 0), m.or("l", 0)
	}
	for _, key := range []string{"w", "l"} {
		if v, ok := c.assigned(key); ok {
			if n, err := lv.env.evaluate(v, 0); err == nil {
				if key == "w" {
					f.Width = n
				} else {
					f.Length = n
				}
			}
		}
	}
	if copies := x.copies(lv, c); copies != 1 && f.Width > 0 {
		f.Width *= copies
	} else if copies != 1 {
		x.add(lv, c, nodes, Unknown{Letter: 'M', Why: "m= needs a stated width"}, typeName)
		return
	}
	x.add(lv, c, nodes, f, typeName)
}

func (x *expander) switchCard(lv *level, c *elementCard) {
	var nodes []NodeID
	for _, w := range c.words[:4] {
		nodes = append(nodes, x.node(lv, w.Text()))
	}
	typeName := c.words[4].Text()
	s := Switch{}
	if m := x.modelCardNamed(lv.scope, typeName); m != nil {
		if !strings.HasSuffix(m.kind, "sw") && m.kind != "vswitch" {
			x.add(lv, c, nodes, wrongKind(c, m), typeName)
			return
		}
		if m.unknown != "" {
			x.add(lv, c, nodes, Unknown{Letter: 'S', Why: m.unknown}, typeName)
			return
		}
		s.Model = m.switchModel()
		if s.Model.VH < 0 {
			x.add(lv, c, nodes, Unknown{Letter: 'S', Why: "model " + m.name + " has a hysteresis below 0, which programs read differently"}, typeName)
			return
		}
		if s.Model.RON <= 0 || s.Model.ROFF <= 0 {
			x.add(lv, c, nodes, Unknown{Letter: 'S', Why: "model " + m.name + " has a resistance that is not above 0"}, typeName)
			return
		}
	}
	for _, w := range c.words[5:] {
		s.On = s.On || strings.EqualFold(w.Text(), "on")
	}
	x.add(lv, c, nodes, s, typeName)
}

// reserve adds a place for an element that refers to others; finish fills it.
func (x *expander) reserve(lv *level, c *elementCard) ElementID {
	var nodes []NodeID
	if c.letter != 'K' {
		nodes = []NodeID{x.node(lv, c.words[0].Text()), x.node(lv, c.words[1].Text())}
	}
	return x.add(lv, c, nodes, Unknown{Letter: c.letter, Why: "what it refers to is not there"}, "")
}

// finish resolves the elements that refer to others by name.
func (x *expander) finish() {
	for _, l := range x.late {
		c, e := l.card, &x.circuit.Elements[l.id]
		find := func(w *syntax.Atom) (ElementID, bool) {
			id, ok := x.byName[strings.ToLower(l.level.prefix+w.Text())]
			return id, ok
		}
		if c.letter == 'K' {
			e.Device = x.coupling(l.level, c, find)
			continue
		}
		if m := x.copies(l.level, c); m != 1 {
			e.Device = Unknown{Letter: c.letter, Why: "copies in parallel (m=) are not modelled here"}
			continue
		}
		if len(c.words) < 4 {
			e.Device = Unknown{Letter: c.letter, Why: "its controlling source or its gain is missing"}
			continue
		}
		if strings.EqualFold(c.words[2].Text(), "poly") {
			e.Device = Unknown{Letter: c.letter, Why: "a polynomial of currents is not modelled"}
			continue
		}
		control, ok := find(c.words[2])
		if !ok && x.unread {
			e.Device = Unknown{Letter: c.letter, Why: "it is controlled by " + c.words[2].Text() + ", which is not in what was read"}
			continue
		}
		if !ok {
			x.fault(c.line.Position(c.words[2].Pos.Offset), fmt.Sprintf("%s is controlled by %s, which is not there", c.shown, c.words[2].Text()), "the name of a voltage source")
			continue
		}
		switch x.circuit.Elements[control].Device.(type) {
		case VoltageSource, VoltageControlled, CurrentControlled, Inductor, Behavioural, Unknown:
		case CurrentSource:
			e.Device = Unknown{Letter: c.letter, Why: "it is controlled by a current source, whose current is not looked at here"}
			continue
		default:
			x.fault(c.line.Position(c.words[2].Pos.Offset), fmt.Sprintf("%s is controlled by %s, which is no source", c.shown, c.words[2].Text()), "the name of a voltage source")
			continue
		}
		gain, err := l.level.env.atom(c.words[3])
		if err != nil && x.unknowable(err) {
			e.Device = Unknown{Letter: c.letter, Why: "its gain is not known: " + err.Error()}
			continue
		}
		if err != nil {
			x.fault(c.line.Position(c.words[3].Pos.Offset), err.Error(), "a gain")
			continue
		}
		out := OutCurrent
		if c.letter == 'H' {
			out = OutVoltage
		}
		e.Device = CurrentControlled{Output: out, Control: control, Gain: gain}
	}
	for _, compile := range x.formulas {
		compile()
	}
}

func (x *expander) coupling(lv *level, c *elementCard, find func(*syntax.Atom) (ElementID, bool)) Device {
	k := Coupling{Factor: 1}
	words := c.words
	last := words[len(words)-1]
	stated, ok := c.assigned("k")
	if !ok {
		stated, ok = c.assigned("coupling")
	}
	_, named := find(last)
	if !named && len(words) > 3 && !ok {
		if _, err := lv.env.atom(last); err != nil {
			if _, err := lv.env.atom(words[len(words)-2]); err == nil {
				return Unknown{Letter: 'K', Why: "its core model " + last.Text() + " is not modelled"}
			}
		}
	}
	switch {
	case ok:
		v, err := lv.env.evaluate(stated, 0)
		if err != nil && x.unknowable(err) {
			return Unknown{Letter: 'K', Why: "its factor is not known: " + err.Error()}
		}
		if err != nil {
			x.fault(c.line.Start(), err.Error(), "a coupling factor")
			return Unknown{Letter: 'K', Why: "its factor is missing"}
		}
		k.Factor = v
	case !named:
		v, err := lv.env.atom(last)
		if err != nil && x.unknowable(err) {
			return Unknown{Letter: 'K', Why: "its factor is not known: " + err.Error()}
		}
		if err != nil {
			x.fault(c.line.Position(last.Pos.Offset), err.Error(), "a coupling factor")
			return Unknown{Letter: 'K', Why: "its factor is missing"}
		}
		k.Factor = v
		words = words[:len(words)-1]
	}
	if named && !ok {
		x.remark(RemarkAssumption, c.line.Start(), lv.prefix+c.shown, "states no coupling factor and is taken as 1")
	}
	if k.Factor == 0 {
		return Unknown{Letter: 'K', Why: "its factor is 0"}
	}
	if k.Factor < -1 || k.Factor > 1 {
		x.fault(c.line.Start(), fmt.Sprintf("a coupling factor of %g", k.Factor), "a number above 0 and up to 1")
		return Unknown{Letter: 'K', Why: "its factor is impossible"}
	}
	for _, w := range words {
		id, ok := find(w)
		if !ok && x.unread {
			return Unknown{Letter: 'K', Why: "it couples " + w.Text() + ", which is not in what was read"}
		}
		if !ok {
			x.fault(c.line.Position(w.Pos.Offset), fmt.Sprintf("%s couples %s, which is not there", c.shown, w.Text()), "the name of an inductor")
			return Unknown{Letter: 'K', Why: "an inductor is missing"}
		}
		if _, inductor := x.circuit.Elements[id].Device.(Inductor); !inductor {
			return Unknown{Letter: 'K', Why: w.Text() + " is no inductor"}
		}
		k.Inductors = append(k.Inductors, id)
	}
	if len(k.Inductors) < 2 {
		x.fault(c.line.Start(), c.shown+" couples fewer than two inductors", expectedCard['K'])
		return Unknown{Letter: 'K', Why: "an inductor is missing"}
	}
	return k
}

// areaOf reads an area factor behind a model: a bare number. Another word is named as not read.
func (x *expander) areaOf(lv *level, c *elementCard, w *syntax.Atom) (float64, bool) {
	n, number := quantity.ParseSpice(w.Text())
	plain := !w.IsExpression() && number && n.Unit == "" && n.Rest == "" && !n.Coded
	if v, err := lv.env.atom(w); err == nil && v > 0 && (plain || !number) {
		return v, true
	}
	x.remark(RemarkModel, c.line.Start(), lv.prefix+c.shown, "`"+shorten(w.Text())+"` behind the model is not read")
	return 0, false
}
