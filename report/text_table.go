package report

import (
	"fmt"
	"strings"

	"railproof/checks"
)

func (l *ledger) listNeeded(f *File) {
	list := f.Needed()
	if len(list) > 0 {
		l.section("Ratings to find or to state")
		rows := [][]string{{"part", "rating", "needed", "next step", "for"}}
		for _, n := range list {
			rows = append(rows, []string{printable(n.Name()), string(n.Symbol), n.Bound(), n.NextStep(), strings.Join(n.Checks, ", ")})
		}
		l.table(rows)
		if note := doubtNote(list); note != "" {
			l.hang("  ", "  ", note)
		}
	}
	if statements := f.Statements(); len(statements) > 0 {
		l.section("What else would prove it")
		for _, s := range statements {
			l.hang("  ", "    ", s)
		}
	}
}

// listProven lists what is proven with its margin: every finding, or those of the headline checks alone.
func (l *ledger) listProven(f *File, all bool) {
	title := "Proven headline checks"
	if all {
		title = "Proven"
	}
	rows := [][]string{{"part", "stress", "limit", "margin", "check"}}
	for _, x := range fold(f.Findings) {
		if x.Verdict != checks.Proven || !all && !x.Headline {
			continue
		}
		found, limit, margin := "", "", ""
		switch {
		case x.Stress != nil && x.Limit != nil:
			found, limit = pair(x.Stress.Value, x.Limit.Value, x.Stress.Unit)
			if x.Floor {
				limit = "at least " + limit
			}
			margin = marginWords(x.Margin)
		case x.Stress != nil:
			found = figure(x.Stress.Value, x.Stress.Unit)
		}
		check := x.Title
		if x.NearLimit() {
			check += " (near limit)"
		}
		rows = append(rows, []string{printable(x.Name()), found, limit, margin, check})
	}
	if len(rows) > 1 {
		l.section(title)
		l.table(rows)
	}
}

// widestCell is how many columns a cell takes before it wraps; the longest name of a quantity fits.
const widestCell = 30

// table writes rows under a heading; the last column takes what is left of the line and wraps.
func (l *ledger) table(rows [][]string) {
	last := len(rows[0]) - 1
	wide := make([]int, last)
	for _, row := range rows {
		for k := range wide {
			wide[k] = min(max(wide[k], columns(row[k])), widestCell)
		}
	}
	indent := 2
	for _, w := range wide {
		indent += w + 2
	}
	for k, row := range rows {
		cells := make([][]string, len(row))
		height := 1
		for c := range row {
			room := width - indent
			if c < last {
				room = wide[c]
			}
			cells[c] = wrap(row[c], max(room, 8))
			height = max(height, len(cells[c]))
		}
		for h := range height {
			var b strings.Builder
			b.WriteString("  ")
			for c := range row {
				text := ""
				if h < len(cells[c]) {
					text = cells[c][h]
				}
				b.WriteString(text)
				if c < last {
					b.WriteString(strings.Repeat(" ", max(0, wide[c]-columns(text))+2))
				}
			}
			line := strings.TrimRight(b.String(), " ")
			if k == 0 {
				line = l.faint.Sprint(line)
			}
			l.line(line)
		}
	}
}

func (l *ledger) listAssumptions(f *File) {
	if len(f.Assumptions) == 0 {
		return
	}
	l.section("Assumed, because nothing was stated")
	for _, a := range foldAssumptions(f) {
		l.hang("  ", "    ", a)
	}
}

// foldAssumptions writes each assumption as a line; parts with the same one share it.
func foldAssumptions(f *File) []string {
	type entry struct {
		about         []string
		value, source string
	}
	var list []entry
	index := map[string]int{}
	for _, a := range f.Assumptions {
		key := a.Value + "\x00" + a.Source
		k, ok := index[key]
		if !ok {
			index[key] = len(list)
			list = append(list, entry{[]string{a.About}, a.Value, a.Source})
			continue
		}
		list[k].about = append(list[k].about, a.About)
	}
	var out []string
	for _, e := range list {
		text := joinWith(strings.Join(foldAbout(e.about), ", "), e.value, ": ")
		if e.source != "" {
			text += " (" + e.source + ")"
		}
		out = append(out, text)
	}
	return out
}

// foldAbout shortens "C1 tolerance", "C2 tolerance", "C3 tolerance" to "C1..C3 tolerance".
func foldAbout(about []string) []string {
	var out []string
	for i := 0; i < len(about); {
		name, rest, _ := strings.Cut(about[i], " ")
		names := []string{name}
		j := i + 1
		for ; j < len(about); j++ {
			n, r, _ := strings.Cut(about[j], " ")
			if r != rest {
				break
			}
			names = append(names, n)
		}
		out = append(out, joinWith(strings.Join(foldNames(names), " "), rest, " "))
		i = j
	}
	return out
}

func (l *ledger) listNotRead(f *File) {
	if len(f.NotRead) == 0 {
		return
	}
	l.section("Not read")
	for _, n := range f.NotRead {
		l.hang("  ", "    ", n)
	}
}

func (l *ledger) listTables(f *File) {
	if f.PartsVersion+f.PolicyVersion == "" {
		return
	}
	l.line("")
	for _, text := range f.judgedBy() {
		l.hang("", "", text)
	}
}

// judgedBy names the tables that a file was judged by, and the shared sheet.
func (f *File) judgedBy() []string {
	text := []string{fmt.Sprintf("judged by parts tables %s, policy %s", f.PartsVersion, f.PolicyVersion)}
	if f.SharedSheet != "" {
		text = append(text, "under the shared sheet "+f.SharedSheet)
	}
	return text
}

func (l *ledger) cautions() {
	l.line(l.strong.Sprint("Cautions"))
	for _, c := range Cautions {
		l.hang("  ", "  ", c)
	}
}
