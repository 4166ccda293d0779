package netlist

import (
	"strings"

	"railproof/netlist/quantity"
)

// fieldSpelling says which rating a field written by an exporter or a parts catalogue means.
type fieldSpelling struct {
	key     string // lower case
	kinds   PartKind
	symbol  Symbol
	percent bool // a plain number of 1 and more is in per cent; below 1, taken as a ratio, the worse case
}

// fieldSpellings are read beside the rating symbols themselves. Everything else on a card (maker, part
// number, package) is no rating and is passed over.
var fieldSpellings = []fieldSpelling{
	{key: "v", kinds: KindCapacitor, symbol: "UR"},
	{key: "volt", kinds: KindCapacitor, symbol: "UR"},
	{key: "voltage", kinds: KindCapacitor, symbol: "UR"},
	{key: "irms", kinds: KindCapacitor, symbol: "IR"},
	{key: "rser", kinds: KindCapacitor, symbol: "ESR"},
	{key: "type", kinds: KindCapacitor, symbol: "technology"},
	{key: "v", kinds: KindResistor, symbol: "Umax"},
	{key: "pwr", kinds: KindResistor, symbol: "P70"},
	{key: "power", kinds: KindResistor, symbol: "P70"},
	{key: "wattage", kinds: KindResistor, symbol: "P70"},
	{key: "tol", kinds: KindResistor | KindCapacitor | KindInductor, symbol: "tolerance", percent: true},
	{key: "tolerance", kinds: KindResistor | KindCapacitor | KindInductor, symbol: "tolerance", percent: true},
	{key: "rser", kinds: KindInductor, symbol: "Rcu"},
	{key: "ipk", kinds: KindInductor, symbol: "Isat"},
	{key: "vpk", kinds: KindRectifier, symbol: "VRRM"},
	{key: "iave", kinds: KindRectifier, symbol: "IFAV"},
}

// FieldRatings reads the ratings that stand on an element's own card: trailing KEY=VALUE fields under
// a rating symbol or a common field spelling, and ratings written into the value string. Numbers follow
// the rules of the card (SPICE scale factors), or the duty sheet's where they carry a proper unit. What
// cannot be read as the rating it is named for is returned in unread; Element is not set.
func (c *Circuit) FieldRatings(id ElementID) (ratings []Rating, unread []Field) {
	e := c.Elements[id]
	return readFields(id, c.KindOf(id), e.Fields, "on the card")
}

// ModelRatings reads rating-like parameters of the element's model card (Vpk=, Iave=).
func (c *Circuit) ModelRatings(id ElementID) (ratings []Rating, unread []Field) {
	name, fields := modelFields(c.Elements[id].Device)
	return readFields(id, c.KindOf(id), fields, "on model "+name)
}

// FieldRatings is Circuit.FieldRatings for an element on its own: a diode counts as both rectifier and
// zener, and Rating.Element is -1.
func FieldRatings(e Element) []Rating {
	c := Circuit{Elements: []Element{e}}
	kind := KindDiode
	if _, diode := e.Device.(Diode); !diode {
		kind = c.KindOf(0)
	}
	ratings, _ := readFields(-1, kind, e.Fields, "on the card")
	return ratings
}

func modelFields(device Device) (name string, fields []Field) {
	switch d := device.(type) {
	case Diode:
		if d.Model != nil {
			return d.Model.Name, d.Model.Ratings
		}
	case Transistor:
		if d.Model != nil {
			return d.Model.Name, d.Model.Ratings
		}
	case Fet:
		if d.Model != nil {
			return d.Model.Name, d.Model.Ratings
		}
	}
	return "", nil
}

func readFields(id ElementID, kind PartKind, fields []Field, where string) (ratings []Rating, unread []Field) {
	for _, f := range fields {
		meaning, percent, ok := fieldMeaning(f.Key, kind)
		if !ok {
			continue
		}
		rating := Rating{Element: id, Symbol: meaning.Symbol, At: f.At, Written: f.Key + "=" + f.Value + " " + where}
		if !readField(&rating, meaning, percent, f.Value) {
			unread = append(unread, f)
			continue
		}
		if !meaning.TakesWord() && rating.Value.Low == 0 && rating.Value.High == 0 {
			continue // exporters write 0 for "not known"
		}
		if meaning.TakesWord() && rating.Text == "" {
			continue
		}
		ratings = append(ratings, rating)
	}
	return ratings, unread
}

// fieldMeaning finds what a field key means on a kind of part: exporters' spellings first, then the
// rating symbols.
func fieldMeaning(key string, kind PartKind) (meaning Meaning, percent, ok bool) {
	lower := strings.ToLower(key)
	for _, s := range fieldSpellings {
		if s.key == lower && s.kinds&kind != 0 {
			meaning, ok = MeaningOf(s.symbol, kind)
			return meaning, s.percent, ok
		}
	}
	symbol, ok := FindSymbol(key)
	if !ok {
		return Meaning{}, false, false
	}
	meaning, ok = MeaningOf(symbol, kind)
	return meaning, false, ok
}

// readField fills in the value of a rating; false when it cannot be read as one.
func readField(r *Rating, m Meaning, percent bool, text string) bool {
	text = strings.TrimSpace(text)
	if m.Symbol == "technology" {
		r.Text = technologyOf(text)
		return true
	}
	value, word, err := readRating(m, text)
	if err == nil {
		r.Value, r.Text = value, word
		return true
	}
	if m.TakesWord() {
		return false
	}
	n, ok := quantity.ParseSpice(text)
	if !ok {
		return false
	}
	number := n.Value
	if percent {
		number /= 100
	}
	r.Value = quantity.Interval{Low: number, High: number, Unit: m.Unit}
	if number == 0 {
		return true
	}
	return checkRating(m, text, &r.Value) == nil
}

// technologyOf finds the kind of capacitor in a catalogue's words ("Al electrolytic", "X7R"); empty
// when they name none that is known.
func technologyOf(text string) string {
	lower := strings.ToLower(text)
	for _, t := range []struct{ part, technology string }{
		{"tantal", "tantalum"}, {"electrolyt", "electrolytic"}, {"elko", "electrolytic"}, {"alum", "electrolytic"},
		{"film", "film"}, {"polyprop", "film"}, {"polyester", "film"}, {"ceramic", "ceramic"},
		{"x7r", "ceramic"}, {"x5r", "ceramic"}, {"c0g", "ceramic"}, {"np0", "ceramic"}, {"npo", "ceramic"},
	} {
		if strings.Contains(lower, t.part) {
			return t.technology
		}
	}
	return ""
}
