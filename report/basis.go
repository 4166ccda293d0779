package report

import (
	"fmt"
	"io"
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

// WritePolicy writes a derating table, each row with its source and how sure it is.
func WritePolicy(w io.Writer, p *policy.Policy, colour bool) error {
	l := &ledger{palette: newPalette(colour)}
	l.line(l.strong.Sprint("policy "+printable(p.Name)) + "  " + printable(p.Version()))
	l.line("")
	for _, row := range p.Rows() {
		l.line(fmt.Sprintf("  %-32s %s", row.Quantity, row.Rule()))
		source := row.Source
		if row.Confidence != "" {
			source += " [" + row.Confidence + "]"
		}
		l.hang("      ", "      ", source)
		if row.Note != "" {
			l.hang("      ", "      ", row.Note)
		}
	}
	_, err := io.WriteString(w, l.out.String())
	return err
}
