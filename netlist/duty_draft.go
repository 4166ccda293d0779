package netlist

import (
	"fmt"
	"slices"
	"strings"

	"railproof/netlist/quantity"
	"railproof/netlist/syntax"
)

// DraftLine is a rating that a check asks for.
type DraftLine struct {
	Element ElementID
	Symbol  Symbol
	Hint    string // how much is needed: "at least 77.3 V, next step 100 V"; may be empty
	For     string // the checks it is for: "diode-reverse-voltage"; may be empty
}

// Draft writes a starter duty sheet: one commented line for each statement and rating that is missing, with
// its unit, what it is, and what it is for. A line counts once its ? are filled in and its leading # is taken
// away; as written the sheet states nothing. Lines come in the order of the reference, then of the netlist.
func Draft(c *Circuit, d *Duty, needs []DraftLine) []byte {
	if d == nil {
		d = &Duty{}
	}
	w := &draftWriter{}
	w.text("Duty sheet for " + baseName(c.File) + ". Fill in each ?, and take away the # before the statement.")
	c.draftSources(w, d)
	c.draftConditions(w, d)
	c.draftPins(w, d)
	c.draftRatings(w, needs)
	return []byte(w.b.String())
}

// draftWriter writes commented statements in sections.
type draftWriter struct{ b strings.Builder }

func (w *draftWriter) text(s string) { w.b.WriteString("# " + s + "\n") }

func (w *draftWriter) section(title string) { w.b.WriteString("#\n# " + title + "\n") }

// statement writes a statement with what it means behind it.
func (w *draftWriter) statement(s, remark string) {
	if remark != "" {
		s = fmt.Sprintf("%-44s # %s", s, remark)
	}
	w.b.WriteString("# " + s + "\n")
}

func (c *Circuit) draftSources(w *draftWriter, d *Duty) {
	var open []SineSource
	for _, s := range c.SineSources(d) {
		if s.Stands == Undeclared || s.Stands == DrivesTransformer && s.LooksRMS {
			open = append(open, s)
		}
	}
	if len(d.Lines) > 0 && len(open) == 0 {
		return
	}
	w.section("The supply line, and what each drawn source stands for (one statement a source)")
	if len(d.Lines) == 0 {
		w.statement("line ?V -10%..+10% ?Hz", "nominal voltage, rms, and how far it varies: scales every source as drawn")
	}
	for _, s := range open {
		name := syntax.DutyString(c.Elements[s.Element].Name)
		w.statement("line "+name+" ?V -10%..+10% ?Hz", "if "+name+" is the line itself: amplitude = nominal x sqrt 2")
		w.statement("winding "+name+" ?V ?A regulation=?%", "if it stands for a secondary: rated V rms and A rms, (V no load - V full load)/V full load")
		w.statement("winding "+name+" as-drawn", "if its amplitude is the off-load emf and its series resistance is drawn")
	}
}

func (c *Circuit) draftConditions(w *draftWriter, d *Duty) {
	w.section("Surroundings and load")
	if d.Ambient == nil {
		w.statement("ambient ?C..?C", "air around the parts; 0C..40C if not stated")
	}
	for _, id := range c.FindLoads(d) {
		if slices.ContainsFunc(d.Loads, func(l Load) bool { return l.Element == id }) {
			continue
		}
		name := syntax.DutyString(c.Elements[id].Name)
		if _, ok := c.Elements[id].Device.(CurrentSource); ok {
			w.statement("load "+name+" 0A..?A", "lightest and full load; drawn: "+c.describe(id))
		} else {
			w.statement("load "+name+" ?Ohm..open", "full and lightest load; drawn: "+c.describe(id))
		}
	}
	var told []NodeID
	for _, chain := range c.RailMap(d) {
		stated := slices.ContainsFunc(d.Rails, func(r Rail) bool { return r.Node == chain.Output })
		if stated || slices.Contains(told, chain.Output) {
			continue
		}
		told = append(told, chain.Output)
		w.statement("rail "+syntax.DutyString(c.Nodes[chain.Output].Name)+" ?V..?V ripple=?mV", "what the supply must deliver, ripple peak to peak")
	}
	if d.Policy == "" {
		w.statement("policy common", "derating policy")
	}
	if d.Life == nil {
		w.statement("life ?h", "how long the electrolytics must last")
	}
	if d.Profile == nil {
		w.statement("profile accessible-terminals", "how fast stored charge must be gone; one of "+strings.Join(profileNames(), ", "))
	}
}

func (c *Circuit) draftPins(w *draftWriter, d *Duty) {
	first := true
	for i := range c.Elements {
		id := ElementID(i)
		r, ok := c.Elements[i].Device.(Regulator)
		if !ok || !r.PinsAssumed || slices.ContainsFunc(d.Parts, func(p PartName) bool { return p.Element == id && p.Pins != nil }) {
			continue
		}
		if first {
			w.section("Order in which the netlist lists the pins")
			first = false
		}
		reference := "gnd"
		if r.Adjustable {
			reference = "adj"
		}
		pins := "in," + reference + ",out"
		if r.Shunt {
			pins = "k,ref,a"
		}
		w.statement("part "+syntax.DutyString(c.Elements[i].Name)+" "+syntax.DutyString(c.Elements[i].TypeName)+" pins="+pins, "as assumed")
	}
}

// draftRatings writes the ratings asked for; parts that need the same for the same purpose share a line.
func (c *Circuit) draftRatings(w *draftWriter, needs []DraftLine) {
	type shared struct {
		line     DraftLine
		elements []ElementID
	}
	var lines []shared
	for _, n := range needs {
		if n.Symbol == "" || n.Element < 0 || int(n.Element) >= len(c.Elements) {
			continue
		}
		i := slices.IndexFunc(lines, func(s shared) bool {
			return s.line.Symbol == n.Symbol && s.line.Hint == n.Hint && s.line.For == n.For &&
				c.KindOf(s.line.Element) == c.KindOf(n.Element)
		})
		if i < 0 {
			lines = append(lines, shared{line: n})
			i = len(lines) - 1
		}
		if !slices.Contains(lines[i].elements, n.Element) {
			lines[i].elements = append(lines[i].elements, n.Element)
		}
	}
	for i := range lines {
		slices.Sort(lines[i].elements)
	}
	slices.SortStableFunc(lines, func(a, b shared) int { return int(a.elements[0]) - int(b.elements[0]) })
	if len(lines) > 0 {
		w.section("Ratings")
	}
	for _, l := range lines {
		meaning, ok := MeaningOf(l.line.Symbol, c.KindOf(l.line.Element))
		if !ok {
			continue
		}
		remark := meaning.Description
		if l.line.Hint != "" {
			remark += "; " + l.line.Hint
		}
		if l.line.For != "" {
			remark += " (" + l.line.For + ")"
		}
		w.statement("rate "+c.draftPattern(l.elements)+" "+string(meaning.Symbol)+"="+placeholder(meaning), remark)
	}
}

// draftPattern writes a pattern that selects exactly the given elements.
func (c *Circuit) draftPattern(elements []ElementID) string {
	var names []string
	for _, id := range elements {
		names = append(names, c.Elements[id].Name)
	}
	for _, items := range [][]string{foldNames(names), names} {
		pattern := strings.Join(items, ",")
		if m, fault := c.findElements(pattern, Position{}, false); fault == nil && slices.Equal(m.elements, elements) {
			return syntax.DutyString(pattern)
		}
	}
	return syntax.DutyString(names[0])
}

// placeholder is a ? with the unit that is expected.
func placeholder(m Meaning) string {
	switch {
	case m.TakesWord():
		return "?"
	case m.Symbol == "tolerance":
		return "-?%..+?%"
	case m.Unit == quantity.One:
		return "?"
	case m.Unit == quantity.Farad:
		return "?uF"
	}
	return "?" + strings.TrimPrefix(m.Unit.String(), "deg")
}
