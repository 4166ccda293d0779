package report

import (
	"fmt"
	"io"
	"slices"
	"strconv"
	"strings"

	"railproof/checks"
	"railproof/checks/policy"
)

// WriteCatalogue lists every check with its title, headline checks marked.
func WriteCatalogue(w io.Writer, colour bool) error {
	l := &ledger{palette: newPalette(colour)}
	rows := [][]string{{"check", "judges"}}
	for _, c := range Catalogue() {
		title := c.Title
		if c.Headline {
			title += " (headline)"
		}
		rows = append(rows, []string{c.Name, title})
	}
	l.columns(rows)
	_, err := io.WriteString(w, l.out.String())
	return err
}

// columns writes a table whose columns are as wide as their widest cell.
func (l *ledger) columns(rows [][]string) {
	wide := make([]int, len(rows[0]))
	for _, row := range rows {
		for k, text := range row {
			wide[k] = max(wide[k], columns(text))
		}
	}
	for n, row := range rows {
		var b strings.Builder
		for k, text := range row {
			b.WriteString(text + strings.Repeat(" ", wide[k]-columns(text)+2))
		}
		line := strings.TrimRight(b.String(), " ")
		if n == 0 {
			line = l.faint.Sprint(line)
		}
		l.line(line)
	}
}

// CheckNamed finds a check a report can speak of.
func CheckNamed(name string) (*checks.Check, bool) {
	for _, c := range Catalogue() {
		if strings.EqualFold(c.Name, name) {
			return c, true
		}
	}
	return nil, false
}

// WriteBasis writes what a check rests on: formula, assumptions, severity rule and published source.
func WriteBasis(w io.Writer, c *checks.Check, colour bool) error {
	l := &ledger{palette: newPalette(colour)}
	head := c.Title
	if c.Headline {
		head += "  (headline)"
	}
	l.line(l.strong.Sprint(c.Name) + "  " + head)
	l.line("")
	for _, row := range []struct{ word, text string }{
		{"applies to", c.Applies}, {"stress", c.Stress}, {"rating", c.Rating}, {"worst", c.Worst}, {"formula", c.Formula},
		{"assumes", c.Assumptions}, {"severity", c.SeverityRule}, {"source", c.Source}, {"remedy", c.Remedy},
	} {
		if row.text != "" {
			l.hang(fmt.Sprintf("  %-12s", row.word), strings.Repeat(" ", 14), row.text)
		}
	}
	if c.Policy != "" {
		p, err := policy.Named(policy.Default)
		if err != nil {
			return err
		}
		text := "no row in policy " + p.Name
		if row, ok := p.Row(c.Policy); ok {
			text = fmt.Sprintf("%s: %s in policy %s (%s)", c.Policy, row.Rule(), p.Name, row.Source)
		}
		l.hang(fmt.Sprintf("  %-12s", "derating"), strings.Repeat(" ", 14), text)
	}
	_, err := io.WriteString(w, l.out.String())
	return err
}

// WritePolicy writes a derating table, each row with its source, numbered below it, and how sure it is.
func WritePolicy(w io.Writer, p *policy.Policy, colour bool) error {
	l := &ledger{palette: newPalette(colour)}
	l.line(l.strong.Sprint("policy " + printable(p.Version())))
	l.line("")
	var sources []string
	rows := [][]string{{"quantity", "rule", "source", "note"}}
	for _, row := range p.Rows() {
		source := policySource(row)
		k := slices.Index(sources, source)
		if k < 0 {
			k = len(sources)
			sources = append(sources, source)
		}
		rows = append(rows, []string{string(row.Quantity), row.Rule(), strconv.Itoa(k + 1), printable(row.Note)})
	}
	l.table(rows)
	l.section("Sources")
	for k, source := range sources {
		l.hang(fmt.Sprintf("%4d  ", k+1), "      ", source)
	}
	_, err := io.WriteString(w, l.out.String())
	return err
}

// policySource is the source of a row and how sure the row is.
func policySource(row policy.Row) string {
	switch {
	case row.Source == "":
		return "no source (" + row.Confidence + ")"
	case row.Confidence == "" || row.Source == row.Confidence:
		return row.Source
	}
	return row.Source + " (" + row.Confidence + ")"
}
