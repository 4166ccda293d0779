package report

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"railproof/checks"
	"railproof/netlist/quantity"
)

// margins of an entry: its label, then its lines.
const (
	labelWidth = 10
	wordWidth  = 6
)

var entryIndent = strings.Repeat(" ", labelWidth)

// entry writes the first line of an entry.
func (l *ledger) entry(label string, f *Folded, tail string) {
	pad := strings.Repeat(" ", max(1, labelWidth-len(label)))
	lead := l.of(f.Verdict, f.Severity).Sprint(label) + pad
	name := printable(f.Name())
	text := name + "  " + f.Title + tail
	if columns(text) > width-labelWidth {
		for k, piece := range wrap(name, width-labelWidth) {
			if k == 0 {
				l.line(lead + l.strong.Sprint(piece))
			} else {
				l.line(entryIndent + l.strong.Sprint(piece))
			}
		}
		l.hang(entryIndent, entryIndent, f.Title+tail)
		return
	}
	l.line(lead + l.strong.Sprint(name) + "  " + f.Title + tail)
}

// say writes one line of an entry: a word, then text.
func (l *ledger) say(word, text string) {
	if text == "" {
		return
	}
	l.hang(entryIndent+word+strings.Repeat(" ", max(1, wordWidth-len(word))), entryIndent+strings.Repeat(" ", wordWidth), text)
}

func (l *ledger) listViolations(f *File) {
	for _, x := range fold(f.Findings) {
		if x.Verdict != checks.Violated {
			continue
		}
		l.line("")
		l.entry(strings.ToUpper(string(x.Severity)), &x, stateTail(&x))
		l.body(&x)
		l.say("fix", x.forAll(x.Remedy))
	}
}

func stateTail(f *Folded) string {
	if f.State == "" {
		return ""
	}
	return "  [" + string(f.State) + "]"
}

// body writes what was found and where.
func (l *ledger) body(f *Folded) {
	if line := foundLine(&f.Finding); line != "" {
		l.hang(entryIndent, entryIndent, line)
		l.say("limit", limitWords(&f.Finding))
		if f.Rating != nil {
			l.say("from", originWords(f.Rating))
		}
	}
	l.say("why", f.forAll(f.Reason))
	if f.Stress != nil {
		l.say("when", whenWords(f.Stress))
	}
	l.say("note", f.forAll(f.Note))
	l.say("at", placeWords(f))
}

// foundLine holds the stress against its limit: "found 1.42 V   needs 2.00 V   short by 0.58 V".
func foundLine(f *Finding) string {
	if f.Stress == nil || math.IsNaN(f.Stress.Value) {
		return ""
	}
	if f.Limit == nil {
		return "found " + figure(f.Stress.Value, f.Stress.Unit)
	}
	found, limit := pair(f.Stress.Value, f.Limit.Value, f.Stress.Unit)
	allowed, beyond, inside := "allows", "over by", "spare"
	short := f.Stress.Value > f.Limit.Value
	if f.Floor {
		allowed, beyond = "needs", "short by"
		short = f.Stress.Value < f.Limit.Value
	}
	last := inside
	if short {
		last = beyond
	}
	if math.IsInf(f.Stress.Value, 0) {
		return fmt.Sprintf("found %s   %s %s", found, allowed, limit)
	}
	return fmt.Sprintf("found %s   %s %s   %s %s", found, allowed, limit, last, difference(f.Stress.Value, f.Limit.Value, f.Stress.Unit))
}

// ofLimit is a stress beside its limit in short: "580 mW of 600 mW".
func ofLimit(f *Finding) string {
	found, limit := pair(f.Stress.Value, f.Limit.Value, f.Stress.Unit)
	if f.Floor {
		return found + ", at least " + limit
	}
	return found + " of " + limit
}

// placeWords names the place of every part of an entry: "a.cir:14 and lines 15, 16".
func placeWords(f *Folded) string {
	if len(f.Places) == 0 || f.Places[0].At.Line == 0 {
		return ""
	}
	first := f.Places[0].At
	text := fmt.Sprintf("%s:%d", slashed(first.File), first.Line)
	var lines []string
	seen := []int{first.Line}
	for _, p := range f.Places[1:] {
		if p.At.File != first.File {
			lines = append(lines, fmt.Sprintf("%s:%d", slashed(p.At.File), p.At.Line))
			continue
		}
		if !slices.Contains(seen, p.At.Line) {
			seen = append(seen, p.At.Line)
			lines = append(lines, fmt.Sprint(p.At.Line))
		}
	}
	if len(lines) > 0 {
		text += ", " + strings.Join(lines, ", ")
	}
	return text
}

// unproven writes what was not proven. Findings that wait for one and the same thing, as all of an
// unsolved circuit do, share one entry.
func (l *ledger) listUnproven(f *File) {
	for _, group := range unprovenGroups(f) {
		first := &group[0]
		l.line("")
		if len(group) == 1 {
			tail := stateTail(first)
			if first.Headline {
				tail += "  (headline)"
			}
			l.entry("UNPROVEN", first, tail)
			l.say("why", first.forAll(first.Reason))
			if line := foundLine(&first.Finding); line != "" {
				l.hang(entryIndent, entryIndent, line)
				l.say("when", whenWords(first.Stress))
			}
			l.say("note", first.forAll(first.Note))
			l.say("needs", first.forAll(needWords(&first.Finding)))
			l.say("but", doubtWords(&first.Finding))
			l.say("at", placeWords(first))
			continue
		}
		l.hangPainted(l.unproven, "UNPROVEN", "  ", groupWords(group))
		l.say("needs", needWords(&first.Finding))
		for _, line := range groupLines(group) {
			l.hang(entryIndent+"- ", entryIndent+"  ", line)
		}
	}
}

func (l *ledger) listConceded(f *File) {
	for _, x := range fold(f.Findings) {
		if x.Verdict != checks.Conceded {
			continue
		}
		l.line("")
		l.entry("CONCEDED", &x, "  ("+string(x.Severity)+")")
		l.body(&x)
		if c := x.Concession; c != nil {
			l.say("until", fmt.Sprintf("%s, up to %s: %s (%s:%d)", c.Until, ceilingWords(c), c.Reason, slashed(c.At.File), c.At.Line))
		}
	}
}

// listNearLimit lists what is proven by little; headline checks stand in a table of their own.
func (l *ledger) listNearLimit(f *File) {
	started := false
	for _, x := range fold(f.Findings) {
		if x.Headline || !x.NearLimit() {
			continue
		}
		if !started {
			l.section("Proven, but near the limit")
			started = true
		}
		l.hang("  ", "    ", fmt.Sprintf("%s  %s: %s (%s to spare)", x.Name(), x.Title, ofLimit(&x.Finding), quantity.Percent(x.Margin, 2)))
	}
}

// nearLimit is the margin below which a proven finding is near its limit.
const nearLimitMargin = 0.05

// NearLimit reports whether a proven finding is inside its limit by less than 5 %.
func (f *Finding) NearLimit() bool {
	return f.Verdict == checks.Proven && f.Limit != nil && f.Stress != nil && f.Margin < nearLimitMargin
}
