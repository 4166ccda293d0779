package netlist

import (
	"errors"
	"slices"
	"strconv"
	"strings"
	"time"

	"railproof/netlist/quantity"
	"railproof/netlist/syntax"
)

// quantityFault reports a value that could not be read; at is where its raw text begins.
func (in *interpreter) quantityFault(err error, raw string, at Position) {
	var fault *quantity.Error
	if !errors.As(err, &fault) {
		in.fault(at, err.Error(), "")
		return
	}
	if strings.HasPrefix(raw, `"`) {
		at.Column++
	}
	at.Column += fault.Offset
	in.fault(at, strconv.Quote(fault.Text)+": "+fault.What, fault.Expected)
}

// value reads a value of one unit.
func (in *interpreter) value(raw string, at Position, unit quantity.Unit) (float64, bool) {
	v, err := quantity.Parse(raw, unit)
	if err != nil {
		in.quantityFault(err, raw, at)
	}
	return v.Number, err == nil
}

// positive reads a value of one unit that must be more than zero and finite.
func (in *interpreter) positive(raw string, at Position, unit quantity.Unit) (float64, bool) {
	v, ok := in.value(raw, at, unit)
	if ok && v <= 0 {
		in.fault(at, strconv.Quote(raw)+": must be more than zero", unit.Expectation())
		return 0, false
	}
	return v, ok
}

// interval reads a range of one unit, or a single value.
func (in *interpreter) interval(raw string, at Position, unit quantity.Unit) (quantity.Interval, bool) {
	v, err := quantity.ParseInterval(raw, unit)
	if err != nil {
		in.quantityFault(err, raw, at)
	}
	return v, err == nil
}

// elements expands the pattern of a statement.
func (in *interpreter) elements(pattern syntax.Token) (match, bool) {
	m, fault := in.circuit.findElements(pattern.Text(), pattern.At(), in.shared())
	if fault != nil {
		in.faults = append(in.faults, *fault)
	} else if len(m.elements) == 0 {
		in.absent(pattern.At(), "no element "+strconv.Quote(pattern.Text()), "")
	}
	return m, fault == nil
}

func (in *interpreter) name(id ElementID) string { return in.circuit.Elements[id].Name }

// onlySettings refuses settings other than those named, and settings given twice.
func (in *interpreter) onlySettings(settings []syntax.Setting, known ...string) (map[string]syntax.Token, bool) {
	values := make(map[string]syntax.Token)
	for _, s := range settings {
		key := ""
		for _, k := range known {
			if strings.EqualFold(k, s.Key) {
				key = k
			}
		}
		if key == "" {
			in.fault(s.At(), "no setting "+strconv.Quote(s.Key)+" here", suggest(s.Key, known, strings.Join(known, ", ")))
			return nil, false
		}
		if _, twice := values[key]; twice {
			in.fault(s.At(), key+" is stated twice", "it once")
			return nil, false
		}
		values[key] = s.Value
	}
	return values, true
}

func (in *interpreter) ambient(s *syntax.AmbientStatement) {
	at := s.Range.At()
	r, ok := in.interval(s.Range.Raw, at, quantity.Celsius)
	if !ok {
		return
	}
	if r.Low < -90 || r.High > 200 {
		in.fault(at, strconv.Quote(s.Range.Raw)+": no air temperature", "degrees Celsius between -90C and 200C")
		return
	}
	in.state("ambient", s.Range.Raw, true, func(d *Duty) { d.Ambient = &AmbientRange{r.Low, r.High, s.Place()} })
}

func (in *interpreter) life(s *syntax.LifeStatement) {
	hours, ok := in.positive(s.Value.Raw, s.Value.At(), quantity.Hour)
	if ok {
		in.state("life", s.Value.Raw, true, func(d *Duty) { d.Life = &quantity.Value{Number: hours, Unit: quantity.Hour} })
	}
}

func (in *interpreter) profile(s *syntax.ProfileStatement) {
	if s.Name != nil {
		for _, p := range StoredChargeProfiles {
			if strings.EqualFold(p.Name, s.Name.Text()) {
				p.At = s.Place()
				in.state("profile", p.Name, true, func(d *Duty) { d.Profile = &p })
				return
			}
		}
		in.fault(s.Name.At(), "no profile "+strconv.Quote(s.Name.Text()),
			suggest(s.Name.Text(), profileNames(), strings.Join(profileNames(), ", ")+", or figures such as 60V 2s"))
		return
	}
	volts, ok := in.positive(s.Voltage.Raw, s.Voltage.At(), quantity.Volt)
	if !ok {
		return
	}
	within, ok := in.positive(s.Time.Raw, s.Time.At(), quantity.Second)
	if ok {
		p := Profile{Voltage: volts, Within: within, Source: "as stated", At: s.Place()}
		in.state("profile", s.Voltage.Raw+" "+s.Time.Raw, true, func(d *Duty) { d.Profile = &p })
	}
}

func (in *interpreter) cooling(s *syntax.CoolingStatement) {
	k, ok := in.positive(s.Value.Raw, s.Value.At(), quantity.KelvinPerWatt)
	if !ok {
		return
	}
	m, ok := in.elements(s.Elements)
	if !ok {
		return
	}
	some := false
	for _, id := range m.elements {
		if in.circuit.KindOf(id)&kindSemiconductor == 0 {
			if m.exact {
				in.unfit(s.Elements.At(), "cooling has no meaning for "+in.name(id)+", a "+in.circuit.KindOf(id).String(), "a semiconductor")
				return
			}
			continue
		}
		some = true
		in.state("cooling "+in.name(id), s.Value.Raw, m.exact, func(d *Duty) {
			d.Coolings = append(d.Coolings, Cooling{id, k, s.Place()})
		})
	}
	if !some && !in.shared() {
		in.remark(s.Place(), "unused: "+s.Elements.Raw+" selects no semiconductor that could have a heat sink")
	}
}

func (in *interpreter) load(s *syntax.LoadStatement) {
	m, ok := in.elements(s.Elements)
	if !ok {
		return
	}
	some := false
	for _, id := range m.elements {
		unit := quantity.One
		switch in.circuit.Elements[id].Device.(type) {
		case Resistor:
			unit = quantity.Ohm
		case CurrentSource:
			unit = quantity.Ampere
		default:
			if m.exact {
				in.unfit(s.Elements.At(), in.name(id)+" cannot be a load", "a resistor or a current source")
				return
			}
			continue
		}
		r, ok := in.interval(s.Range.Raw, s.Range.At(), unit)
		if !ok {
			return
		}
		if unit == quantity.Ohm && r.Low <= 0 {
			in.fault(s.Range.At(), "a load of no ohms is a short", "more than zero, such as 20Ohm..open")
			return
		}
		some = true
		in.state("load "+in.name(id), s.Range.Raw, m.exact, func(d *Duty) {
			d.Loads = append(d.Loads, Load{id, r, s.Place()})
		})
	}
	if !some && in.shared() {
		in.verifyLoad(s)
	} else if !some {
		in.fault(s.Elements.At(), s.Elements.Raw+" selects nothing that can be a load", "a resistor or a current source")
	}
}

func (in *interpreter) rail(s *syntax.RailStatement) {
	r, ok := in.interval(s.Range.Raw, s.Range.At(), quantity.Volt)
	if !ok {
		return
	}
	if s.Percent != nil {
		p, ok := in.interval(s.Percent.Raw, s.Percent.At(), quantity.One)
		if !ok {
			return
		}
		if r.Low != r.High {
			in.fault(s.Percent.At(), "two ranges", "a nominal voltage before a range in per cent, such as 12V -5%..+5%")
			return
		}
		a, b := tidy(r.Low*(1+p.Low)), tidy(r.Low*(1+p.High))
		r.Low, r.High = min(a, b), max(a, b)
	} else if r.Low == r.High {
		in.fault(s.Range.At(), "a rail of one voltage", "a range, such as 11.4V..12.6V or 12V -5%..+5%")
		return
	}
	settings, ok := in.onlySettings(s.Settings, "ripple")
	if !ok {
		return
	}
	rail := Rail{Range: r, At: s.Place()}
	value := r.Compact()
	if ripple, stated := settings["ripple"]; stated {
		v, ok := in.positive(ripple.Text(), ripple.At(), quantity.Volt)
		if !ok {
			return
		}
		rail.Ripple = &v
		value += " ripple=" + ripple.Text()
	}
	name := s.Node.Text()
	node, ok := in.circuit.FindNode(name)
	if !ok {
		in.absent(s.Node.At(), "no node "+strconv.Quote(name), in.circuit.nearestNode(name))
		return
	}
	if node == Ground {
		in.fault(s.Node.At(), "the ground is no rail", "the node that the supply delivers at")
		return
	}
	rail.Node = node
	in.state("rail "+in.circuit.Nodes[node].Name, value, true, func(d *Duty) { d.Rails = append(d.Rails, rail) })
}

func (in *interpreter) concession(s *syntax.ConcessionStatement) {
	check := strings.ToLower(s.Check.Text())
	if in.checks != nil && !slices.Contains(in.checks, check) {
		in.fault(s.Check.At(), "no check "+strconv.Quote(s.Check.Text()), suggest(check, in.checks, "one that `railproof basis` lists"))
		return
	}
	unit, ok := quantity.UnitOf(s.Ceiling.Raw)
	if !ok {
		in.fault(s.Ceiling.At(), strconv.Quote(s.Ceiling.Raw)+": no value with a unit", "the highest value permitted, such as 460V")
		return
	}
	ceiling, err := quantity.Parse(s.Ceiling.Raw, unit)
	if err != nil {
		in.quantityFault(err, s.Ceiling.Raw, s.Ceiling.At())
		return
	}
	if _, err := time.Parse(time.DateOnly, s.Until.Raw); err != nil {
		in.fault(s.Until.At(), strconv.Quote(s.Until.Raw)+" is no date", "year-month-day, such as 2027-03-31")
		return
	}
	reason := strings.TrimSpace(strings.Trim(s.Reason, `"`))
	if reason == "" {
		in.fault(s.Place(), "the concession gives no reason", `one in quotation marks, such as "avalanche-rated part, review 12"`)
		return
	}
	base := Concession{Check: check, Shared: in.shared(), Element: -1, Ceiling: ceiling, Until: s.Until.Raw, Reason: reason, At: s.Place()}
	value := "up to " + ceiling.Compact() + " until " + s.Until.Raw + ` "` + reason + `"`
	grant := func(target string, id ElementID, exact bool) {
		one := base
		one.Target, one.Element = target, id
		in.state("concession "+one.Check+" "+target, value, exact, func(d *Duty) { d.Concessions = append(d.Concessions, one) })
	}
	if name, isNode := strings.CutPrefix(s.Element.Text(), "node:"); isNode {
		node, ok := in.circuit.FindNode(name)
		if !ok {
			in.absent(s.Element.At(), "no node "+strconv.Quote(name), in.circuit.nearestNode(name))
			return
		}
		grant("node:"+in.circuit.Nodes[node].Name, -1, true)
		return
	}
	m, ok := in.elements(s.Element)
	if !ok {
		return
	}
	for _, id := range m.elements {
		grant(in.name(id), id, m.exact)
	}
}
