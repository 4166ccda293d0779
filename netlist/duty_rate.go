package netlist

import (
	"slices"
	"strconv"
	"strings"

	"railproof/netlist/syntax"
)

// declareKinds applies what statements say of the kind of an element, before any pattern is narrowed by it:
// `part` names its type, and a zener's symbol on a diode stated by name makes it one.
func (in *interpreter) declareKinds(statements []dutyStatement) {
	own := in.ownParts(statements)
	for _, s := range statements {
		in.current = s
		switch s := s.statement.(type) {
		case *syntax.PartStatement:
			m, fault := in.circuit.findElements(s.Elements.Text(), s.Elements.At(), in.shared())
			pins, _, ok := readPins(s.Settings)
			if fault != nil || !ok {
				continue // reported when the statement is read
			}
			for _, id := range m.elements {
				if pins != nil && len(pins) != len(in.circuit.Elements[id].Nodes) || in.shared() && (own[id] || in.leavesType(id, m)) {
					continue
				}
				if why := in.circuit.adoptPart(id, s.Type.Text(), pins); why != "" {
					in.unfit(s.Type.At(), in.name(id)+" cannot be a "+s.Type.Text()+": "+why, "a type that fits its nodes")
				}
			}
		case *syntax.RateStatement:
			if m, fault := in.circuit.findElements(s.Elements.Text(), s.Elements.At(), in.shared()); fault == nil && m.exact {
				for _, id := range m.elements {
					in.declareKind(id, s.Settings)
				}
			}
		}
	}
}

// ownParts are the elements whose type is stated by the netlist or its own sheet.
func (in *interpreter) ownParts(statements []dutyStatement) map[ElementID]bool {
	own := map[ElementID]bool{}
	for _, s := range statements {
		part, ok := s.statement.(*syntax.PartStatement)
		if !ok || s.origin == FromSharedSheet {
			continue
		}
		if m, fault := in.circuit.findElements(part.Elements.Text(), part.Elements.At(), false); fault == nil {
			for _, id := range m.elements {
				own[id] = true
			}
		}
	}
	return own
}

// leavesType reports that a pattern of the shared sheet is not to take an element for another type than the one
// its own card names.
func (in *interpreter) leavesType(id ElementID, m match) bool {
	if m.exact || in.circuit.Library == nil {
		return false
	}
	_, known := in.circuit.Library.Recognise(in.circuit.Elements[id].TypeName)
	return known
}

// declareKind takes a diode for a zener or a rectifier by the symbols stated for it, and a call of an
// undefined three-terminal type for a regulator by its output voltage.
func (in *interpreter) declareKind(id ElementID, settings []syntax.Setting) {
	for _, s := range settings {
		symbol, ok := FindSymbol(s.Key)
		if !ok {
			continue
		}
		switch in.circuit.Elements[id].Device.(type) {
		case Diode:
			switch kindsOf(symbol) & KindDiode {
			case KindZener:
				in.circuit.setZener(id, true)
			case KindRectifier:
				in.circuit.setZener(id, false)
			}
		case Unknown, Regulator:
			if symbol == "VOUT" || symbol == "VREF" {
				in.circuit.adoptRegulator(id, symbol == "VREF", strings.HasPrefix(s.Value.Text(), "-"))
			}
		}
	}
}

func (c *Circuit) setZener(id ElementID, zener bool) {
	if c.zeners == nil {
		c.zeners = make(map[ElementID]bool)
	}
	c.zeners[id] = zener
}

// readPins reads pins=in,gnd,out; bad is the setting that is not understood.
func readPins(settings []syntax.Setting) (pins []string, bad string, ok bool) {
	for _, s := range settings {
		if !strings.EqualFold(s.Key, "pins") {
			continue
		}
		for _, pin := range strings.Split(strings.ToLower(s.Value.Text()), ",") {
			pin = strings.TrimSpace(pin)
			if !slices.Contains(dutyPinWords(), pin) || slices.Contains(pins, pin) {
				return nil, pin, false
			}
			pins = append(pins, pin)
		}
	}
	return pins, "", true
}

func (in *interpreter) part(s *syntax.PartStatement) {
	settings, ok := in.onlySettings(s.Settings, "pins")
	if !ok {
		return
	}
	pins, bad, ok := readPins(s.Settings)
	if !ok {
		in.fault(settings["pins"].At(), "pin "+strconv.Quote(bad)+" is unknown or named twice",
			suggest(bad, dutyPinWords(), "pins in the order of the netlist line, such as pins=in,gnd,out"))
		return
	}
	m, ok := in.elements(s.Elements)
	if !ok {
		return
	}
	typeName := s.Type.Text()
	value := typeName
	if pins != nil {
		value += " pins=" + strings.Join(pins, ",")
	}
	for _, id := range m.elements {
		if in.shared() && in.leavesType(id, m) {
			continue
		}
		if nodes := len(in.circuit.Elements[id].Nodes); pins != nil && nodes != len(pins) {
			in.unfit(settings["pins"].At(), strconv.Itoa(len(pins))+" pins for "+in.name(id), strconv.Itoa(nodes)+", as many as it has nodes")
			return
		}
		in.state("part "+in.name(id), value, m.exact, func(d *Duty) {
			d.Parts = append(d.Parts, PartName{Element: id, Type: typeName, Pins: pins, At: s.Place()})
		})
	}
	if in.circuit.Library != nil && len(m.elements) > 0 {
		if _, known := in.circuit.Library.Named(typeName); !known {
			in.remark(s.Type.At(), "type "+typeName+" names no rectifier, zener or regulator of the parts table")
		}
	}
}

func (in *interpreter) rate(s *syntax.RateStatement) {
	m, ok := in.elements(s.Elements)
	if !ok {
		return
	}
	for i, setting := range s.Settings {
		symbol, ok := FindSymbol(setting.Key)
		if !ok {
			in.fault(setting.At(), "no rating symbol "+strconv.Quote(setting.Key), suggest(setting.Key, in.symbolsFor(m), in.symbolHint(m)))
			continue
		}
		twice := slices.ContainsFunc(s.Settings[:i], func(other syntax.Setting) bool {
			earlier, _ := FindSymbol(other.Key)
			return earlier == symbol
		})
		if twice {
			in.fault(setting.At(), string(symbol)+" is stated twice", "it once")
			continue
		}
		in.rateOne(s, m, symbol, setting)
	}
}

// rateOne applies one SYMBOL=VALUE to the elements for which the symbol has a meaning.
func (in *interpreter) rateOne(s *syntax.RateStatement, m match, symbol Symbol, setting syntax.Setting) {
	some := false
	for _, id := range m.elements {
		kind := in.circuit.KindOf(id)
		meaning, ok := MeaningOf(symbol, kind)
		if !ok {
			if m.exact {
				in.unfit(setting.At(), string(symbol)+" has no meaning for "+in.name(id)+", a "+in.kindName(id), in.symbolHint(match{[]ElementID{id}, true}))
				return
			}
			continue
		}
		value, word, err := readRating(meaning, setting.Value.Text())
		if err != nil {
			in.quantityFault(err, setting.Value.Raw, setting.Value.At())
			return
		}
		some = true
		rating := Rating{Element: id, Symbol: symbol, Value: value, Text: word, At: s.Place(), Shared: in.shared(),
			Written: "rate " + s.Elements.Text() + " " + string(symbol) + "=" + setting.Value.Text()}
		if rating.Shared {
			rating.Written += " of the shared sheet"
		}
		in.state("rate "+in.name(id)+" "+string(symbol), setting.Value.Text(), m.exact, func(d *Duty) {
			d.Ratings = append(d.Ratings, rating)
		})
	}
	if !some && in.verifyRating(symbol, setting) && !in.shared() {
		in.remark(setting.At(), "unused: "+string(symbol)+" has no meaning for anything that "+s.Elements.Raw+" selects")
	}
}

func (in *interpreter) kindName(id ElementID) string {
	if u, ok := in.circuit.Elements[id].Device.(Unknown); ok {
		return "part that is not known (" + u.Why + ")"
	}
	return in.circuit.KindOf(id).String()
}

// symbolsFor lists the symbols that mean something on what a pattern selects.
func (in *interpreter) symbolsFor(m match) []string {
	kinds := KindNone
	for _, id := range m.elements {
		kinds |= in.circuit.KindOf(id)
	}
	if kinds == KindNone {
		return symbolNames()
	}
	var names []string
	for _, meaning := range Meanings(kinds) {
		names = append(names, string(meaning.Symbol))
	}
	return names
}

func (in *interpreter) symbolHint(m match) string {
	kinds := KindNone
	for _, id := range m.elements {
		kinds |= in.circuit.KindOf(id)
	}
	if kinds == KindNone {
		return "a part with ratings"
	}
	return "one of " + strings.Join(in.symbolsFor(m), ", ")
}

// remarkFields tells of fields on element and model cards that look like ratings and cannot be read.
func (in *interpreter) remarkFields() {
	for i := range in.circuit.Elements {
		id := ElementID(i)
		if _, fields := modelFields(in.circuit.Elements[id].Device); len(fields)+len(in.circuit.Elements[id].Fields) == 0 {
			continue
		}
		_, unread := in.circuit.FieldRatings(id)
		_, more := in.circuit.ModelRatings(id)
		for _, f := range append(unread, more...) {
			at := f.At
			if at.Line == 0 {
				at = in.circuit.Elements[id].At
			}
			in.duty.Remarks = append(in.duty.Remarks, Remark{Kind: RemarkAssumption, At: at, Element: in.name(id),
				Text: f.Key + "=" + f.Value + " of " + in.name(id) + " cannot be read as a rating, and is passed over"})
		}
	}
}
