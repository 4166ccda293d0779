package report

import (
	"fmt"
	"io"
	"strings"
	"time"

	"railproof/checks"
	"railproof/checks/parts"
	"railproof/netlist/quantity"
)

// SizeSchema names the layout of the JSON document of `size`.
const SizeSchema = "railproof-size/1"

// SizeReport is what would make each violated check of one netlist pass.
type SizeReport struct {
	Version string
	File    File
	Sizes   []Size
	Totals  SizeTotals
	Exit    Exit
}

// Size is a violated check with its remedies, as the report orders and names it.
type Size struct {
	Finding
	Remedies []checks.Remedy
	Short    string // why no value helps
	Blocked  string // what is unproven and prevents a remedy
}

// SizeTotals counts violations by what was found for them, and what else is open.
type SizeTotals struct {
	Sized, None, Blocked, Conceded int

	HeadlineUnproven, Unsolved int
}

// sizeFormats is every format of `size`, the default first.
var sizeFormats = []struct {
	name  string
	write func(r *SizeReport, w io.Writer, s Style) error
}{
	{"text", func(r *SizeReport, w io.Writer, s Style) error { return r.WriteText(w, s.Colour) }},
	{"json", func(r *SizeReport, w io.Writer, _ Style) error { return r.WriteJSON(w) }},
}

// SizeFormats names the formats of `size`.
func SizeFormats() []string {
	var names []string
	for _, f := range sizeFormats {
		names = append(names, f.name)
	}
	return names
}

// Write writes the sizes in a named format.
func (r *SizeReport) Write(w io.Writer, name string, s Style) error {
	for _, f := range sizeFormats {
		if f.name == name {
			return f.write(r, w, s)
		}
	}
	return unknownFormat(name, SizeFormats())
}

// NewSizeReport draws up the sizes of a result. A violation under a concession that holds on the given day is
// counted, not sized.
func NewSizeReport(result *checks.Result, list []checks.Sizing, version string, now time.Time) *SizeReport {
	r := &SizeReport{Version: version, File: newFile(Input{File: result.File, Result: result}, now)}
	byKey := map[string][]checks.Sizing{}
	for _, s := range list {
		key := sizeKey(&s.Finding)
		byKey[key] = append(byKey[key], s)
	}
	for k := range r.File.Findings {
		f := &r.File.Findings[k]
		r.File.Totals.count(f)
		key := sizeKey(&f.Finding)
		if f.Verdict == checks.Conceded {
			r.Totals.Conceded++
		}
		if f.Verdict != checks.Violated || len(byKey[key]) == 0 {
			continue
		}
		s := byKey[key][0]
		byKey[key] = byKey[key][1:]
		r.add(Size{Finding: *f, Remedies: s.Remedies, Short: s.Short, Blocked: s.Unproven})
	}
	r.Totals.HeadlineUnproven, r.Totals.Unsolved = r.File.Totals.HeadlineUnproven, r.File.Totals.Unsolved
	switch t := r.Totals; {
	case t.None > 0:
		r.Exit = ExitViolated
	case t.Blocked+t.HeadlineUnproven+t.Unsolved > 0:
		r.Exit = ExitUnproven
	}
	return r
}

func (r *SizeReport) add(s Size) {
	switch {
	case len(s.Remedies) > 0:
		r.Totals.Sized++
	case s.Blocked != "":
		r.Totals.Blocked++
	default:
		r.Totals.None++
	}
	r.Sizes = append(r.Sizes, s)
}

// sizeKey tells the violations of a file from one another.
func sizeKey(f *checks.Finding) string {
	quantity := ""
	if f.Stress != nil {
		quantity = string(f.Stress.Quantity)
	}
	return strings.Join([]string{f.Check, f.Element, quantity, f.At.String(), f.Reason}, "\x00")
}

// changeWords puts a change into words: "C1 100 uF -> 220 uF (E6)", "D1 VRRM 35 V -> 100 V (standard step)".
func changeWords(c checks.Change, name string) string {
	to := toWords(c) + seriesWords(c)
	words := []string{name}
	switch c.Symbol {
	case checks.SymbolBleeder:
		return "across " + name + " a bleeder of " + to
	case "R", "C", "L":
	default:
		words = append(words, string(c.Symbol))
	}
	if from := fromWords(c); from != "" {
		words = append(words, from, "->")
	}
	return strings.Join(append(words, to), " ")
}

// toWords is the value that a change goes to; one that is of no series is a bound.
func toWords(c checks.Change) string {
	to := quantity.Format(c.To, c.Unit, 4)
	switch {
	case c.Series != "":
		return to
	case c.AtMost:
		return "at most " + to
	}
	return "at least " + to
}

func fromWords(c checks.Change) string {
	if !finite(c.From) {
		return ""
	}
	return quantity.Format(c.From, c.Unit, 4)
}

// seriesWords names the series of a value: a preferred series by its name.
func seriesWords(c checks.Change) string {
	switch {
	case c.Series == "":
		return ""
	case preferred(c.Series):
		return " (" + string(c.Series) + ")"
	case stepOf(c).Confidence == parts.Memory:
		return " (standard step, from memory)"
	}
	return " (standard step)"
}

// preferred reports whether a series is one of IEC 60063, which repeats in every decade.
func preferred(kind parts.StepKind) bool {
	return strings.HasPrefix(string(kind), "E") && len(kind) <= 3
}

// stepOf is the step of a standard series that a change goes to; of a preferred series its first, for the source.
func stepOf(c checks.Change) parts.Step {
	for _, s := range parts.Steps(c.Series) {
		if s.Value == c.To || preferred(c.Series) {
			return s
		}
	}
	return parts.Step{}
}

// SizeOutcome is the last word on the sizes and its reason.
func (r *SizeReport) SizeOutcome() (word, why string) {
	t := r.Totals
	open := openWords(Totals{HeadlineUnproven: t.HeadlineUnproven, Unsolved: t.Unsolved})
	all := counted(t.Sized+t.None+t.Blocked, "violation")
	switch {
	case t.None > 0:
		return "NOT SIZED", fmt.Sprintf("no value helps against %d of %s", t.None, all)
	case t.Blocked > 0:
		return "NOT PROVEN", fmt.Sprintf("the remedy of %d of %s is unproven", t.Blocked, all)
	case open != "" && t.Sized == 0:
		return "NOT PROVEN", "nothing is violated, but " + open + ": state the ratings that check asks for"
	case open != "":
		return "NOT PROVEN", fmt.Sprintf("%s sized, but %s", all, open)
	case t.Sized == 0:
		return "NOTHING TO SIZE", "no check is violated"
	}
	return "SIZED", "every violation has a remedy; each was tried alone"
}
