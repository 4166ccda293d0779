package report

import (
	"fmt"
	"io"
	"strings"

	"railproof/checks/parts"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

// WritePartTypes lists the types of a parts table by kind.
func WritePartTypes(w io.Writer, t *parts.Table, colour bool) error {
	l := &ledger{palette: newPalette(colour)}
	l.line(l.strong.Sprint("parts tables") + " " + printable(t.Version()))
	var kinds []string
	types := map[string][]string{}
	for _, row := range t.Rows() {
		if types[row.Kind] == nil {
			kinds = append(kinds, row.Kind)
		}
		types[row.Kind] = append(types[row.Kind], printable(row.Type))
	}
	for _, kind := range kinds {
		l.section(printable(kind))
		l.hang("  ", "  ", strings.Join(types[kind], "  "))
	}
	_, err := io.WriteString(w, l.out.String())
	return err
}

// pinWord names a terminal as `pins=` of the duty sheet does.
func pinWord(p netlist.Pin, role netlist.Role) string {
	switch p {
	case netlist.PinIn:
		return "in"
	case netlist.PinReference:
		switch role {
		case netlist.RoleAdjustable:
			return "adj"
		case netlist.RoleShunt:
			return "ref"
		}
		return "gnd"
	case netlist.PinOut:
		return "out"
	case netlist.PinAnode:
		return "anode"
	case netlist.PinCathode:
		return "cathode"
	case netlist.PinAC1:
		return "ac1"
	case netlist.PinAC2:
		return "ac2"
	case netlist.PinPlus:
		return "plus"
	case netlist.PinMinus:
		return "minus"
	}
	return "?"
}

// WritePart writes a row of the parts table: every value with its condition, source and how sure it is.
func WritePart(w io.Writer, row *parts.Row, colour bool) error {
	l := &ledger{palette: newPalette(colour)}
	kind := row.Kind
	if row.Role == netlist.RoleTransistor && row.Polarity != 0 {
		kind = parts.PolarityWord(row.Polarity) + " " + kind
	}
	l.line(l.strong.Sprint(printable(row.Type)) + "  " + printable(kind) + "  (" + printable(row.Origin) + ")")
	if len(row.Pins) > 0 {
		var pins []string
		for _, p := range row.Pins {
			pins = append(pins, pinWord(p, row.Role))
		}
		text := strings.Join(pins, ", ")
		if row.PinsDoubtful {
			text += " (netlists do not agree: state pins=)"
		}
		l.hang("  pins  ", "        ", text)
	}
	if row.Note != "" {
		l.hang("  note  ", "        ", row.Note)
	}
	l.line("")
	rows := [][]string{{"rating", "value", "case", "sure", "holds for; source"}}
	for _, symbol := range row.Symbols() {
		for _, c := range row.Cases(symbol) {
			about := c.Source
			if c.Condition != "" {
				about = c.Condition + "; " + about
			}
			digits := 0 // as in the table
			if c.Unit == quantity.One {
				digits = 4 // a ratio may come out of decibels
			}
			rows = append(rows, []string{string(symbol), quantity.Format(c.Number, c.Unit, digits), printable(c.Case), printable(c.Confidence), printable(about)})
		}
	}
	l.table(rows)
	if row.Model != nil {
		l.line("")
		l.hang("  law   ", "        ", fmt.Sprintf("I = %.3g A (exp(V/(%.3g VT)) - 1), RS %s; %s",
			row.Model.IS, row.Model.N, quantity.Format(row.Model.RS, quantity.Ohm, 3), row.Model.Quality))
	}
	if law := row.Bipolar(); law != nil {
		l.line("")
		l.hang("  law   ", "        ", law.Quality)
	}
	_, err := io.WriteString(w, l.out.String())
	return err
}
