package report

import (
	"fmt"
	"io"
	"strings"

	"railproof/checks"
)

// WriteMarkdown writes the ledger as Markdown with GitHub-flavoured tables.
func (r *Report) WriteMarkdown(w io.Writer) error {
	m := &markdown{}
	word, why := r.Outcome()
	m.line("# Rail check: " + strings.ToLower(word))
	m.line("")
	m.line(md(capital(why)) + ".")
	for k := range r.Files {
		m.file(&r.Files[k])
	}
	m.line("")
	m.line("## Cautions")
	m.line("")
	for _, c := range Cautions {
		m.line("- " + md(c))
	}
	_, err := io.WriteString(w, m.out.String())
	return err
}

type markdown struct{ out strings.Builder }

func (m *markdown) line(text string) { m.out.WriteString(text + "\n") }

// table writes a table if it has rows.
func (m *markdown) table(head []string, rows [][]string) {
	m.line("")
	m.line("| " + strings.Join(head, " | ") + " |")
	m.line("|" + strings.Repeat("---|", len(head)))
	for _, row := range rows {
		cells := make([]string, len(row))
		for k, c := range row {
			cells[k] = md(c)
		}
		m.line("| " + strings.Join(cells, " | ") + " |")
	}
}

// list writes a list under a heading if it has entries.
func (m *markdown) list(title string, entries []string) {
	if len(entries) == 0 {
		return
	}
	m.line("")
	m.line("### " + title)
	m.line("")
	for _, e := range entries {
		m.line("- " + md(e))
	}
}

func (m *markdown) file(f *File) {
	m.line("")
	m.line("## " + md(joinWith(f.Name, f.Title, ": ")))
	m.line("")
	if f.Unread() {
		m.line("Not checked:")
		m.line("")
		if f.Failure != "" {
			m.line("- " + md(f.Failure))
		}
		for _, d := range f.Diagnostics {
			m.line("- " + md(d.Error()))
		}
		return
	}
	c := f.Circumstances
	m.line(md(fmt.Sprintf("Line %s; load %s; ambient %s; policy %s.", c.Line, c.Load, c.Ambient, c.Policy)))
	for _, rail := range f.RailMap {
		m.line("")
		m.line("Rail: " + md(rail))
	}
	t := f.Totals
	m.line("")
	m.line(fmt.Sprintf("**Violated:** %d critical, %d major, %d minor. **Unproven:** %d. **Proven:** %d. **Conceded:** %d.",
		t.Critical, t.Major, t.Minor, t.Unproven, t.Proven, t.Conceded))
	m.findings(f)
	m.needed(f)
	m.list("What else would prove it", f.Statements())
	m.proven(f)
	m.list("Assumed, because nothing was stated", foldAssumptions(f))
	m.list("Not read", f.NotRead)
	m.line("")
	m.line(md(capital(strings.Join(f.judgedBy(), ", ")) + "."))
}

func (m *markdown) findings(f *File) {
	var rows [][]string
	folded := fold(f.Findings)
	add := func(v checks.Verdict) {
		for k := range folded {
			if folded[k].Verdict == v {
				rows = append(rows, markdownRow(&folded[k]))
			}
		}
	}
	add(checks.Violated)
	for _, group := range unprovenGroups(f) {
		if len(group) == 1 {
			rows = append(rows, markdownRow(&group[0]))
			continue
		}
		rows = append(rows, []string{string(checks.Unproven), "several", strings.Join(groupLines(group), "; "), groupWords(group), "", "", needWords(&group[0].Finding)})
	}
	add(checks.Conceded)
	if len(rows) == 0 {
		return
	}
	m.line("")
	m.line("### Findings")
	m.table([]string{"verdict", "part", "check", "found", "when", "at", "fix or need"}, rows)
}

func markdownRow(x *Folded) []string {
	label := string(x.Verdict)
	if x.Verdict == checks.Violated {
		label = strings.ToUpper(string(x.Severity))
	}
	when := ""
	if x.Stress != nil {
		when = whenWords(x.Stress)
	}
	action := x.forAll(x.Remedy)
	if x.Verdict == checks.Unproven {
		action = x.forAll(needWords(&x.Finding))
		if action != "" {
			action = joined("needs "+action, doubtWords(&x.Finding))
		}
	}
	if c := x.Concession; c != nil {
		action = fmt.Sprintf("conceded until %s, up to %s: %s", c.Until, ceilingWords(c), c.Reason)
	}
	found := joined(joined(inSentence(foundLine(&x.Finding)), x.forAll(x.Reason)), x.forAll(x.Note))
	return []string{label, x.Name(), x.Title, found, when, placeWords(x), action}
}

func (m *markdown) needed(f *File) {
	list := f.Needed()
	if len(list) == 0 {
		return
	}
	m.line("")
	m.line("### Ratings to find or to state")
	var rows [][]string
	for _, n := range list {
		rows = append(rows, []string{n.Name(), string(n.Symbol), n.Bound(), n.NextStep(), strings.Join(n.Checks, ", ")})
	}
	m.table([]string{"part", "rating", "needed", "next step", "for"}, rows)
	if note := doubtNote(list); note != "" {
		m.line("")
		m.line(md(note))
	}
}

func (m *markdown) proven(f *File) {
	var rows [][]string
	for _, x := range fold(f.Findings) {
		if x.Verdict != checks.Proven || x.Stress == nil || x.Limit == nil {
			continue
		}
		found, limit := pair(x.Stress.Value, x.Limit.Value, x.Stress.Unit)
		origin := ""
		if x.Rating != nil {
			origin = originWords(x.Rating)
		}
		rows = append(rows, []string{x.Name(), x.Title, found, limit, marginWords(x.Margin), limitWords(&x.Finding), origin})
	}
	if len(rows) == 0 {
		return
	}
	m.line("")
	m.line("### Proven")
	m.table([]string{"part", "check", "found", "limit", "margin", "limit from", "rating from"}, rows)
}

// md makes text safe inside a paragraph or a cell: nothing in it is markup.
func md(text string) string {
	text = printable(text)
	var b strings.Builder
	for _, r := range text {
		switch r {
		case '\\', '`', '*', '_', '[', ']', '<', '>', '|', '#', '~', '!', '@', '$':
			b.WriteByte('\\')
		case '&':
			b.WriteString("&amp;")
			continue
		}
		b.WriteRune(r)
	}
	return b.String()
}
