package report

import (
	"io"
	"math"
	"strconv"
	"strings"

	"railproof/checks"
	"railproof/checks/study"
	"railproof/netlist/quantity"
)

// WriteText writes the table for people. Conditions are numbered, and told below the table, since a table of
// fifty stresses has but a handful.
func (t *StressTable) WriteText(w io.Writer, colour bool) error {
	l := &ledger{palette: newPalette(colour)}
	f := &File{Name: t.File, Title: ownTitle(t.Title), Circumstances: t.Circumstances, RailMap: t.RailMap, Assumptions: t.Assumptions}
	if t.Nominal {
		f.Circumstances = checks.Circumstances{Line: "as written", Load: "as written", Ambient: "as written", Policy: "none"}
		f.Assumptions = nil
	}
	l.head(f)
	l.line("")
	numbers, conditions := t.conditions()
	head := []string{"part", "quantity", "worst", "+-", "at", "when"}
	if t.Nominal {
		head[2] = "value"
	}
	several := len(conditions) > 1
	if !several {
		head = head[:5]
	}
	rows := [][]string{head}
	last := ""
	unproven := false
	for k := range t.Stresses {
		s := &t.Stresses[k]
		name := printable(s.Element)
		if name == last {
			name = ""
		} else {
			last = name
		}
		value := valueWords(s)
		if s.Unproven != "" {
			value, unproven = value+" ?", true
		}
		at := ""
		if !math.IsNaN(s.Phase) && !math.IsInf(s.Phase, 0) {
			at = figure(s.Phase, quantity.Second)
		}
		row := []string{name, string(s.Quantity), value, errorWords(s), at, strconv.Itoa(numbers[k])}
		rows = append(rows, row[:len(head)])
	}
	l.table(rows)
	if unproven {
		l.section("Values marked ? prove nothing")
		said := map[string]bool{}
		for k := range t.Stresses {
			if why := t.Stresses[k].Unproven; why != "" && !said[why] {
				said[why] = true
				l.hang("  ", "    ", why)
			}
		}
	}
	if several {
		l.section("When")
	} else {
		l.line("")
		conditions = nil
	}
	for k, c := range conditions {
		number := strconv.Itoa(k + 1)
		l.hang(strings.Repeat(" ", max(0, 4-len(number)))+number+"  ", "      ", c)
	}
	l.hang("  ", "  ", "at: the time into the cycle at which an extremum occurs; of a cold start, the time after switch-on")
	l.listAssumptions(f)
	if t.PartsVersion != "" {
		l.line("")
		l.hang("", "", "by parts tables "+t.PartsVersion)
	}
	if t.SharedSheet != "" {
		l.hang("", "", "under the shared sheet "+t.SharedSheet)
	}
	l.line("")
	l.cautions()
	_, err := io.WriteString(w, l.out.String())
	return err
}

// negligible is what a table for people no longer tells from zero, in SI units; the machine formats do.
const negligible = 1e-12

// valueWords is the value of a row; of what is next to nothing, fewer digits.
func valueWords(s *study.Stress) string {
	if math.Abs(s.Value) < negligible {
		return quantity.Format(s.Value, s.Unit, 1)
	}
	return quantity.Format(s.Value, s.Unit, 4)
}

// errorWords is the numerical error of a row, empty where there is no value.
func errorWords(s *study.Stress) string {
	switch {
	case math.IsNaN(s.Value) || math.IsInf(s.Value, 0):
		return ""
	case s.Error > 0 && s.Error < negligible:
		return "<" + quantity.Format(negligible, s.Unit, 1)
	}
	return quantity.Format(s.Error, s.Unit, 1)
}

// conditions numbers the conditions in the order in which the table needs them: the number of each row, and
// the words of each condition.
func (t *StressTable) conditions() (numbers []int, words []string) {
	index := map[string]int{}
	for k := range t.Stresses {
		text := conditionOrStart(t.Stresses[k].Condition)
		n, ok := index[text]
		if !ok {
			words = append(words, text)
			n = len(words)
			index[text] = n
		}
		numbers = append(numbers, n)
	}
	return numbers, words
}

// conditionOrStart is a condition in words, which always name a start.
func conditionOrStart(c study.Condition) string {
	text := conditionWords(c)
	if c.Start == "cold" && !strings.Contains(text, "cold start") {
		text = joinWith(text, "cold start", ", ")
	}
	return text
}
