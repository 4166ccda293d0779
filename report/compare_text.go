package report

import (
	"fmt"
	"io"
	"math"
	"strings"

	"railproof/checks"
)

// WriteText writes the comparison for people.
func (c *Comparison) WriteText(w io.Writer, colour bool) error {
	l := &ledger{palette: newPalette(colour)}
	l.hang("", "", c.Old+"  to  "+c.New)
	count := map[Change]int{}
	for _, d := range c.Changes {
		count[d.Change]++
	}
	var words []string
	for _, change := range changeOrder {
		words = append(words, fmt.Sprintf("%s: %d", change, count[change]))
	}
	l.line(strings.Join(append(words, fmt.Sprintf("unchanged: %d", c.Unchanged)), "   "))
	for _, x := range c.Judges {
		l.hang("", "  ", fmt.Sprintf("%s was judged by other tables before: %s", x.File, judgeWords(x.Old, x.New)))
	}
	for _, d := range foldDifferences(c.Changes) {
		l.difference(&d)
	}
	l.line("")
	word, paint := "PASSED", l.proven
	switch c.Exit {
	case ExitViolated:
		word, paint = "STOPPED", l.major
	case ExitUnproven:
		word, paint = "NOT PROVEN", l.unproven
	}
	why := fmt.Sprintf("gate %s on what is new or worse: %s", c.Gate, counted(c.Gate.Stops, "violation"))
	l.hangPainted(paint, word, "  ", joinWith(why, openWords(c.Gated), ", "))
	_, err := io.WriteString(w, l.out.String())
	return err
}

// judgeWords names the tables that differ.
func judgeWords(before, after Judges) string {
	var words []string
	if before.Parts != after.Parts {
		words = append(words, fmt.Sprintf("parts tables %s, now %s", before.Parts, after.Parts))
	}
	if before.Policy != after.Policy {
		words = append(words, fmt.Sprintf("policy %s, now %s", before.Policy, after.Policy))
	}
	return strings.Join(words, "; ")
}

// foldedDifference is one entry: a difference, or several that differ only in the part they are on.
type foldedDifference struct {
	Difference
	elements []string
	was, is  string
	lines    []string
	place    string // the file that the last of the lines names
}

// foldDifferences gathers differences that read the same, as those on the diodes of one bridge do.
func foldDifferences(list []Difference) []foldedDifference {
	var out []foldedDifference
	index := map[string]int{}
	for _, d := range list {
		f := d.finding()
		was, is := outcomeWords(d.Old), outcomeWords(d.New)
		key := strings.Join([]string{string(d.Change), d.File, f.Check, was, is}, "\x00")
		k, ok := index[key]
		if !ok || f.Element == "" {
			k = len(out)
			index[key] = k
			out = append(out, foldedDifference{Difference: d, was: was, is: is})
		}
		out[k].elements = append(out[k].elements, f.Element)
		if f.At != nil && f.At.Line > 0 {
			line := fmt.Sprintf("%s:%d", f.At.File, f.At.Line)
			if len(out[k].lines) > 0 && f.At.File == out[k].place {
				line = fmt.Sprint(f.At.Line)
			}
			out[k].lines, out[k].place = append(out[k].lines, line), f.At.File
		}
	}
	return out
}

// finding is the newer of the two findings.
func (d *Difference) finding() *jsonFinding {
	if d.New != nil {
		return d.New
	}
	return d.Old
}

func (l *ledger) difference(d *foldedDifference) {
	f := d.finding()
	label := strings.ToUpper(string(d.Change))
	paint := l.proven
	if d.Change == ChangeNew || d.Change == ChangeWorse {
		paint = l.of(f.Verdict, severityOf(f))
	}
	title, _ := titleOf(f.Check)
	name := strings.Join(foldNames(d.elements), " ")
	if name == "" {
		name = "circuit"
	}
	l.line("")
	l.hangPainted(paint, label, strings.Repeat(" ", max(1, labelWidth-len(label))), name+"  "+title)
	l.say("was", d.was)
	l.say("is", d.is)
	l.say("at", strings.Join(d.lines, ", "))
}

// outcomeWords tells a finding of a JSON report in a line.
func outcomeWords(f *jsonFinding) string {
	if f == nil {
		return "absent"
	}
	text := string(f.Verdict)
	if f.Severity != nil && f.Verdict == checks.Violated {
		text = *f.Severity
	}
	if f.Stress != nil && !math.IsNaN(float64(f.Stress.Value)) {
		text += fmt.Sprintf(", %s %.4g %s", f.Stress.Quantity, float64(f.Stress.Value), f.Stress.Unit)
		if f.Limit != nil && !math.IsNaN(float64(f.Limit.Value)) {
			text += fmt.Sprintf(" (limit %.4g %s, margin %s)", float64(f.Limit.Value), f.Stress.Unit, marginWords(float64(f.Margin)))
		}
	}
	return text
}
