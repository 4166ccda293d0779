package report

import (
	"fmt"
	"io"
	"strings"

	"railproof/checks"
)

// foldedSize is one entry of the text: a size, or several that differ only in the part they are on.
type foldedSize struct {
	Folded
	size Size // of the first
}

// WriteText writes the sizes as a ledger for people.
func (r *SizeReport) WriteText(w io.Writer, colour bool) error {
	l := &ledger{palette: newPalette(colour)}
	l.head(&r.File)
	l.line("")
	l.line(r.countLine())
	list := foldSizes(r.Sizes)
	for k := range list {
		l.line("")
		l.size(&list[k])
	}
	l.listSizes(list)
	l.listTables(&r.File)
	l.line("")
	l.cautions()
	l.line("")
	word, why := r.SizeOutcome()
	paint := l.proven
	switch r.Exit {
	case ExitViolated:
		paint = l.major
	case ExitUnproven:
		paint = l.unproven
	}
	l.hangPainted(paint, word, "  ", why)
	_, err := io.WriteString(w, l.out.String())
	return err
}

func (r *SizeReport) countLine() string {
	t := r.Totals
	text := fmt.Sprintf("violated: %d   with a remedy: %d   without: %d", t.Sized+t.None+t.Blocked, t.Sized, t.None)
	if t.Blocked > 0 {
		text += fmt.Sprintf("   unproven: %d", t.Blocked)
	}
	if t.Conceded > 0 {
		text += fmt.Sprintf("   conceded: %d", t.Conceded)
	}
	return text
}

// foldSizes gathers sizes that read the same but for the part, as those of the diodes of one bridge do.
func foldSizes(list []Size) []foldedSize {
	var out []foldedSize
	index := map[string]int{}
	for _, s := range list {
		key := s.key()
		k, ok := index[key]
		if !ok || s.Element == "" {
			index[key] = len(out)
			out = append(out, foldedSize{Folded{Finding: s.Finding, Elements: []string{s.Element}, Places: []checks.Finding{s.Finding.Finding}}, s})
			continue
		}
		o := &out[k]
		o.Elements = append(o.Elements, s.Element)
		o.Places = append(o.Places, s.Finding.Finding)
	}
	return out
}

// key is what two sizes must share to be told as one.
func (s *Size) key() string {
	words := []string{foldKey(&s.Finding), s.withoutName(s.Short), s.withoutName(s.Blocked)}
	for k := range s.Remedies {
		for _, line := range remedyLines(&s.Remedies[k], func(name string) string { return name }) {
			words = append(words, line.word, s.withoutName(line.text))
		}
	}
	return strings.Join(words, "\x00")
}

// sizeLine is one line of an entry: a word, then text.
type sizeLine struct{ word, text string }

func (l *ledger) size(f *foldedSize) {
	l.entry(strings.ToUpper(string(f.Severity)), &f.Folded, "")
	if line := foundLine(&f.Finding); line != "" {
		l.hang(entryIndent, entryIndent, line)
	}
	l.say("why", f.forAll(f.Reason))
	if f.Stress != nil {
		l.say("when", whenWords(f.Stress))
	}
	l.say("at", placeWords(&f.Folded))
	name := func(element string) string {
		if element == f.Element {
			return f.Name()
		}
		return element
	}
	for k := range f.size.Remedies {
		lines := remedyLines(&f.size.Remedies[k], name)
		if k > 0 {
			lines[0].word = "or"
		}
		for _, line := range lines {
			l.say(line.word, line.text)
		}
	}
	switch {
	case len(f.size.Remedies) > 0:
	case f.size.Blocked != "":
		l.say("open", "unproven, and so no remedy: "+f.forAll(f.size.Blocked))
	default:
		l.say("none", f.forAll(f.size.Short))
	}
}

// remedyLines puts a remedy into words: the change and what is found then, what it makes worse, what it mends.
func remedyLines(m *checks.Remedy, name func(string) string) []sizeLine {
	lines := []sizeLine{{"size", remedyChange(m, name)}, {"then", thenWords(m)}}
	for k := 0; k < len(m.Worse); {
		effect := effectWords(&m.Worse[k])
		names := []string{name(m.Worse[k].Element)}
		for k++; k < len(m.Worse) && effectWords(&m.Worse[k]) == effect; k++ {
			names = append(names, name(m.Worse[k].Element))
		}
		lines = append(lines, sizeLine{"but", strings.Join(foldNames(names), " ") + " " + effect})
	}
	if len(m.Mends) > 0 {
		lines = append(lines, sizeLine{"mends", strings.Join(mendWords(m.Mends), ", ")})
	}
	return lines
}

// remedyChange is every change of a remedy; parts that change alike share the words.
func remedyChange(m *checks.Remedy, name func(string) string) string {
	var words []string
	for k := 0; k < len(m.Changes); {
		c := m.Changes[k]
		names := []string{name(c.Element)}
		for k++; k < len(m.Changes) && m.Changes[k].Symbol == c.Symbol && m.Changes[k].To == c.To; k++ {
			names = append(names, name(m.Changes[k].Element))
		}
		words = append(words, changeWords(c, strings.Join(foldNames(names), " ")))
	}
	return strings.Join(words, " with ")
}

// thenWords is what the check finds after the change.
func thenWords(m *checks.Remedy) string {
	how := "judged again"
	if m.Solved {
		how = "all conditions solved again"
	}
	if m.After == nil || m.Limit == nil {
		return "the check no longer applies (" + how + ")"
	}
	f := Finding{Finding: checks.Finding{Stress: m.After, Limit: m.Limit, Floor: m.Floor}}
	text := inSentence(foundLine(&f)) + " (" + how + ")"
	if m.Solved {
		text = joinWith(text, whenWords(m.After), "; ")
	}
	return text
}

// effectWords is a finding that a remedy makes worse, its part aside: "winding current: 1.2 A of 1 A, critical".
func effectWords(f *checks.Finding) string {
	title, _ := titleOf(f.Check)
	x := Finding{Finding: *f}
	text := title + ": "
	switch {
	case f.Verdict == checks.Unproven:
		return text + "unproven, " + f.Reason
	case f.Stress != nil && f.Limit != nil:
		return text + ofLimit(&x) + ", " + string(f.Severity)
	}
	return text + joinWith(f.Reason, string(f.Severity), ", ")
}

// mendWords names other violations that a remedy mends, the parts of one check together.
func mendWords(list []checks.Finding) []string {
	var out []string
	for k := 0; k < len(list); {
		check := list[k].Check
		var names []string
		for ; k < len(list) && list[k].Check == check; k++ {
			if len(names) == 0 || names[len(names)-1] != list[k].Element {
				names = append(names, list[k].Element)
			}
		}
		title, _ := titleOf(check)
		out = append(out, strings.Join(foldNames(names), " ")+" "+title)
	}
	return out
}

// listSizes closes with what is to be changed: the first remedy of each entry, of several steps of one rating the
// furthest.
func (l *ledger) listSizes(list []foldedSize) {
	type wish struct {
		change checks.Change
		names  string
		checks []string
	}
	var wishes []*wish
	index := map[string]*wish{}
	for k := range list {
		if len(list[k].size.Remedies) == 0 {
			continue
		}
		for _, c := range list[k].size.Remedies[0].Changes {
			names := c.Element
			if c.Element == list[k].Element {
				names = list[k].Name()
			}
			key := names + "\x00" + string(c.Symbol)
			w, ok := index[key]
			if !ok {
				w = &wish{change: c, names: names}
				index[key] = w
				wishes = append(wishes, w)
			}
			if further(c, w.change) {
				w.change = c
			}
			if check := list[k].Check; len(w.checks) == 0 || w.checks[len(w.checks)-1] != check {
				w.checks = append(w.checks, check)
			}
		}
	}
	if len(wishes) == 0 {
		return
	}
	l.section("What to change")
	rows := [][]string{{"part", "what", "change", "for"}}
	for _, w := range wishes {
		change := toWords(w.change) + seriesWords(w.change)
		if from := fromWords(w.change); from != "" {
			change = from + " -> " + change
		}
		rows = append(rows, []string{printable(w.names), string(w.change.Symbol), change, strings.Join(w.checks, ", ")})
	}
	l.table(rows)
	l.hang("  ", "  ", "the first remedy of each violation, tried alone; check again with all of them made")
}

// further reports whether a change goes further than another of the same rating.
func further(a, b checks.Change) bool { return (a.To > b.To) != a.AtMost && a.To != b.To }
