package report

import (
	"fmt"
	"io"
	"strings"
	"unicode/utf8"

	"github.com/fatih/color"

	"railproof/checks"
)

// width is how many columns the ledger takes.
const width = 80

// ledger lays text out in lines of at most width columns.
type ledger struct {
	palette
	out strings.Builder
}

// WriteText writes the report as a ledger for people.
func (r *Report) WriteText(w io.Writer, style Style) error {
	l := &ledger{palette: newPalette(style.Colour)}
	for k := range r.Files {
		f := &r.Files[k]
		if f.Unread() {
			continue // its diagnostics stand on the error stream
		}
		if l.out.Len() > 0 {
			l.line("")
			l.line(l.faint.Sprint(strings.Repeat("=", width)))
			l.line("")
		}
		l.file(f, style.Proven)
	}
	if l.out.Len() > 0 {
		l.line("")
		l.cautions()
		l.line("")
	}
	l.verdict(r)
	_, err := io.WriteString(w, l.out.String())
	return err
}

func (l *ledger) file(f *File, proven bool) {
	l.head(f)
	l.line("")
	l.totals(f.Totals)
	l.listViolations(f)
	l.listUnproven(f)
	l.listConceded(f)
	l.listProven(f, proven)
	if !proven {
		l.listNearLimit(f)
	}
	l.listNeeded(f)
	l.listAssumptions(f)
	l.listNotRead(f)
	l.listTables(f)
}

// head names the file, its circumstances and its rails.
func (l *ledger) head(f *File) {
	l.circumstances(f)
	for _, rail := range f.RailMap {
		l.hang("rail  ", "      ", rail)
	}
	if len(f.RailMap) == 0 {
		l.hang("rail  ", "      ", "no usual arrangement recognised; the checks do not depend on it")
	}
}

func (l *ledger) circumstances(f *File) {
	name, title := printable(f.Name), printable(f.Title)
	if title == "" {
		title = "(no title)"
	}
	if columns(name)+3+columns(title) <= width {
		l.line(l.strong.Sprint(name) + "   " + title)
	} else {
		l.line(l.strong.Sprint(name))
		l.hang("", "", title)
	}
	c := f.Circumstances
	l.line(strings.Join(l.fill([]string{"line " + c.Line, "load " + c.Load, "ambient " + c.Ambient, "policy " + c.Policy}, "   "), "\n"))
}

func (l *ledger) totals(t Totals) {
	violated, painted := "violated: 0", "violated: 0"
	var plain, colourful []string
	for _, s := range severities {
		if n := t.of(s); n > 0 {
			text := fmt.Sprintf("%d %s", n, s)
			plain, colourful = append(plain, text), append(colourful, l.of(checks.Violated, s).Sprint(text))
		}
	}
	if len(plain) > 0 {
		violated, painted = "violated: "+strings.Join(plain, ", "), "violated: "+strings.Join(colourful, ", ")
	}
	rest := fmt.Sprintf("unproven: %d   proven: %d   conceded: %d", t.Unproven, t.Proven, t.Conceded)
	if columns(violated)+3+columns(rest) > width {
		l.line(painted)
		l.line(rest)
		return
	}
	l.line(painted + "   " + rest)
}

// verdict is the last word on the whole run.
func (l *ledger) verdict(r *Report) {
	checked := 0
	for k := range r.Files {
		if !r.Files[k].Unread() {
			checked++
		}
	}
	if len(r.Files) > 1 {
		l.line(fmt.Sprintf("%d of %d files checked", checked, len(r.Files)))
		l.totals(r.Totals)
	}
	word, why := r.Outcome()
	paint := l.proven
	switch r.Exit {
	case ExitViolated, ExitBadInput:
		paint = l.major
	case ExitUnproven:
		paint = l.unproven
	}
	l.hangPainted(paint, word, "  ", why)
}

// Outcome is the last word on a run and its reason.
func (r *Report) Outcome() (word, why string) {
	gate := "gate " + r.Gate.String()
	if r.NewOnly {
		gate += " on new findings"
	}
	open := openWords(r.Gated)
	switch r.Exit {
	case ExitBadInput:
		return "NOT CHECKED", "a file could not be read"
	case ExitViolated:
		return "STOPPED", fmt.Sprintf("%s: %s at or above it", gate, counted(r.Gate.Stops, "violation"))
	case ExitUnproven:
		return "NOT PROVEN", gate + ": nothing violates it, but " + open
	}
	switch {
	case open != "":
		return "PASSED", gate + "; allowed: " + open
	case r.NewOnly:
		return "PASSED", joinWith(gate+": nothing new violates it", openWords(r.Totals), "; open as before: ")
	case r.headlines() == 0:
		return "PASSED", gate + ", but no headline check applies to any part"
	}
	return "PASSED", gate + ", every headline check judged"
}

// openWords tells what keeps a gate from being passed without a violation, empty if nothing does.
func openWords(t Totals) string {
	var words []string
	if n := t.HeadlineUnproven; n > 0 {
		words = append(words, counted(n, "headline check")+" unproven")
	}
	if n := t.Unsolved; n > 0 {
		words = append(words, counted(n, "part")+" of the circuit unsolved")
	}
	return strings.Join(words, ", ")
}

// headlines is how many findings headline checks have.
func (r *Report) headlines() int {
	n := 0
	for _, f := range r.Files {
		for _, x := range f.Findings {
			if x.Headline {
				n++
			}
		}
	}
	return n
}

func counted(n int, what string) string {
	if n == 1 {
		return "1 " + what
	}
	return fmt.Sprintf("%d %ss", n, what)
}

func (l *ledger) line(text string) {
	l.out.WriteString(text)
	l.out.WriteByte('\n')
}

func (l *ledger) section(title string) {
	l.line("")
	l.line(l.strong.Sprint(title))
}

// hang writes text after a lead, broken at blanks, further lines under the indent.
func (l *ledger) hang(lead, indent, text string) {
	for k, piece := range wrap(printable(text), width-columns(lead)) {
		if k == 0 {
			l.line(strings.TrimRight(lead+piece, " "))
			continue
		}
		l.line(indent + piece)
	}
}

// hangPainted is hang with a painted lead.
func (l *ledger) hangPainted(paint *color.Color, lead, gap, text string) {
	indent := strings.Repeat(" ", columns(lead)+len(gap))
	for k, piece := range wrap(printable(text), width-len(indent)) {
		if k == 0 {
			l.line(paint.Sprint(lead) + gap + piece)
			continue
		}
		l.line(indent + piece)
	}
}

// fill puts words on as few lines as they need.
func (l *ledger) fill(words []string, gap string) []string {
	var lines []string
	for _, w := range words {
		w = printable(w)
		last := len(lines) - 1
		if last >= 0 && columns(lines[last])+len(gap)+columns(w) <= width {
			lines[last] += gap + w
			continue
		}
		lines = append(lines, wrap(w, width)...)
	}
	return lines
}

// wrap breaks text at blanks into lines of at most limit columns; a longer word stands alone, and a per cent
// sign stays with its number. Wide gaps inside a line are kept.
func wrap(text string, limit int) []string {
	var lines []string
	for {
		at, column := -1, 0
		for k, r := range text {
			if r == ' ' && k > 0 && !strings.HasPrefix(text[k+1:], "%") {
				if column > limit && at > 0 {
					break
				}
				at = k
			}
			if column++; column > limit && at > 0 {
				break
			}
		}
		if column <= limit || at <= 0 {
			return append(lines, text)
		}
		lines = append(lines, strings.TrimRight(text[:at], " "))
		text = strings.TrimLeft(text[at:], " ")
	}
}

// columns is how many columns a text takes, one a character.
func columns(text string) int { return utf8.RuneCountInString(text) }
