package netlist

import (
	"fmt"
	"strings"

	"railproof/netlist/syntax"
)

// modelCard is a .model card with its parameters evaluated.
type modelCard struct {
	name   string
	kind   string // lower case: d, npn, pnp, nmos, pmos, sw, r, c, l ...
	values map[string]float64
	fields []Field // parameters that are no numbers of the model: Vpk=, Iave=, mfg=
	at     Position
	// unknown says why a parameter of the law has no value.
	unknown string
}

// lawParameters are those that the laws of diodes and transistors take: one without a number is an error.
var lawParameters = words("is n rs bv vb ibv nbv bf br nf nr vaf va rb rc re vto kp gamma phi lambda rd level ron roff vt vh von voff")

// impossible says which parameter of a junction's law cannot be, empty if none.
func (m *modelCard) impossible() string {
	if m.unknown != "" {
		return m.unknown
	}
	for _, key := range []string{"is", "n", "nf", "nr", "bf", "nbv", "ibv"} {
		if v, ok := m.values[key]; ok && v <= 0 {
			return fmt.Sprintf("%s=%g of model %s is not above 0", strings.ToUpper(key), v, m.name)
		}
	}
	for _, key := range []string{"rs", "rb", "rc", "re", "br"} {
		if v, ok := m.values[key]; ok && v < 0 {
			return fmt.Sprintf("%s=%g of model %s is below 0", strings.ToUpper(key), v, m.name)
		}
	}
	for _, key := range []string{"vfwd", "ron", "roff", "vrev"} {
		if _, ok := m.values[key]; ok {
			return fmt.Sprintf("model %s is made of straight lines (%s=), which is not modelled", m.name, key)
		}
	}
	return ""
}

// wrongKind is an element whose model is of another kind.
func wrongKind(c *elementCard, m *modelCard) Unknown {
	if m.kind == "" {
		return Unknown{Letter: c.letter, Why: "model " + m.name + " names no kind"}
	}
	return Unknown{Letter: c.letter, Why: "model " + m.name + " is of kind " + strings.ToUpper(m.kind)}
}

// ratingLike are parameters of a model card that state a rating and not a law.
var ratingLike = words("vpk iave ipk irms mfg type icrating vceo pwr diss")

// modelCardNamed parses and evaluates the model of a name, nil if the netlist has none.
func (x *expander) modelCardNamed(s *scope, name string) *modelCard { return x.modelCardAt(s, name, 0) }

func (x *expander) modelCardAt(s *scope, name string, depth int) *modelCard {
	line, home, ok := s.model(strings.ToLower(name))
	if !ok {
		return nil
	}
	if m, ok := x.models[line]; ok {
		return m
	}
	x.models[line] = nil
	card, fault := syntax.ParseDirective(line)
	if fault != nil { // public libraries close some brackets twice
		once := *line
		for fault != nil && strings.HasSuffix(once.Text, ")") && strings.Count(once.Text, ")") > strings.Count(once.Text, "(") {
			once.Text = strings.TrimRight(once.Text[:len(once.Text)-1], " \t")
			card, fault = syntax.ParseDirective(&once)
		}
	}
	if fault != nil {
		x.faults = append(x.faults, *fault)
		return nil
	}
	m := &modelCard{name: name, values: map[string]float64{}, at: line.Start()}
	if x.doubtful[line] {
		m.unknown = "model " + name + " is not known: " + errDoubtful.Error()
	}
	env := x.environmentOf(home)
	words := 0
	var base string
	based := false // the next word is the base
	var read func(items []*syntax.Item)
	read = func(items []*syntax.Item) {
		for _, i := range items {
			switch {
			case i.Group != nil:
				read(i.Group.Items)
			case i.Assign != nil && i.Assign.Value == nil:
				text := i.Assign.Key.Text()
				switch words++; {
				case based:
					base, based = text, false
				case words == 1:
					m.name = text
				case strings.HasPrefix(strings.ToLower(text), "ako:"):
					base, based = text[4:], len(text) == 4
				case m.kind == "":
					m.kind = strings.ToLower(text)
				}
			case i.Assign != nil:
				key := strings.ToLower(i.Assign.Key.Text())
				if i.Assign.Value.Atom != nil && (ratingLike[key] || i.Assign.Value.Atom.Quoted != "") {
					m.fields = append(m.fields, Field{Key: i.Assign.Key.Text(), Value: i.Assign.Value.Atom.Text(), At: line.Start()})
					continue
				}
				v, err := env.evaluate(i.Assign.Value, 0)
				switch plain := i.Assign.Value.Atom != nil && !i.Assign.Value.Atom.IsExpression(); {
				case err == nil:
					m.values[key] = v
				case plain && !lawParameters[key]:
					m.fields = append(m.fields, Field{Key: i.Assign.Key.Text(), Value: i.Assign.Value.Atom.Text(), At: line.Start()})
				case x.unknowable(err):
					m.unknown = fmt.Sprintf("%s of model %s is not known: %v", key, m.name, err)
				default:
					x.fault(line.Position(i.Assign.Key.Pos.Offset), fmt.Sprintf("model %s: %s: %v", m.name, key, err), "a number")
				}
			}
		}
	}
	read(card.Items)
	if base != "" && depth < maxIncludeDepth {
		if b := x.modelCardAt(s, base, depth+1); b != nil {
			for k, v := range b.values {
				if _, own := m.values[k]; !own {
					m.values[k] = v
				}
			}
			if m.kind == "" {
				m.kind = b.kind
			}
			if m.unknown == "" {
				m.unknown = b.unknown
			}
		} else {
			x.remark(RemarkModel, line.Start(), "", "model "+m.name+" is based on "+base+", which is not defined")
		}
	}
	x.models[line] = m
	return m
}

// or is a parameter of the card or its default.
func (m *modelCard) or(key string, fallback float64) float64 {
	if v, ok := m.values[key]; ok {
		return v
	}
	return fallback
}

func (m *modelCard) diode() *DiodeModel {
	d := &DiodeModel{
		Name: m.name, IS: m.or("is", 1e-14), N: m.or("n", 1), RS: m.or("rs", 0),
		BV: m.or("bv", m.or("vb", 0)), IBV: m.or("ibv", 1e-3), NBV: m.or("nbv", 1),
		Bare: len(m.values) == 0, Ratings: m.fields,
	}
	if d.BV < 0 {
		d.BV = -d.BV
	}
	return d
}

func (m *modelCard) transistor() *TransistorModel {
	t := &TransistorModel{
		Name: m.name, Polarity: Positive, IS: m.or("is", 1e-16), BF: m.or("bf", 100), BR: m.or("br", 1),
		NF: m.or("nf", 1), NR: m.or("nr", 1), VAF: m.or("vaf", m.or("va", 0)),
		RB: m.or("rb", 0), RC: m.or("rc", 0), RE: m.or("re", 0), Bare: len(m.values) == 0, Ratings: m.fields,
	}
	if m.kind == "pnp" || m.kind == "lpnp" {
		t.Polarity = Negative
	}
	return t
}

func (m *modelCard) fet() *FetModel {
	f := &FetModel{
		Name: m.name, Polarity: Positive, VTO: m.or("vto", 0), KP: m.or("kp", 2e-5), Gamma: m.or("gamma", 0),
		Phi: m.or("phi", 0.6), Lambda: m.or("lambda", 0), RD: m.or("rd", 0), RS: m.or("rs", 0),
		Bare: len(m.values) == 0, Ratings: m.fields,
	}
	if m.kind == "pmos" {
		f.Polarity = Negative
	}
	return f
}

func (m *modelCard) switchModel() *SwitchModel {
	s := &SwitchModel{Name: m.name, VT: m.or("vt", 0), VH: m.or("vh", 0), RON: m.or("ron", 1), ROFF: m.or("roff", 1e12)}
	if on, ok := m.values["von"]; ok {
		off := m.or("voff", 0)
		s.VT, s.VH = (on+off)/2, (on-off)/2
	}
	return s
}
