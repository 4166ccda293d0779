package syntax

import (
	"sort"
	"strings"
	"unicode/utf8"
)

// Limits of the reader. Each error that they cause names the limit.
const (
	MaxLine  = 1 << 20  // bytes of one logical line, continuations included
	MaxFile  = 64 << 20 // bytes of one file
	MaxDepth = 100      // parentheses or braces within one another
)

// Line is one logical line: a card with its continuation lines joined and its comments cut off.
type Line struct {
	File  string
	Text  string
	first segment
	more  []segment // of continuation lines
}

// segment says where in the file a part of a logical line stands.
type segment struct {
	offset       int // in Text
	line, column int
}

// Position returns the place in the file of a byte offset into the text of the line.
func (l *Line) Position(offset int) Position {
	at := l.first
	if k := sort.Search(len(l.more), func(k int) bool { return l.more[k].offset > offset }); k > 0 {
		at = l.more[k-1]
	}
	if at.line == 0 {
		return Position{File: l.File, Line: 1, Column: 1}
	}
	end := min(max(offset, at.offset), len(l.Text))
	return Position{File: l.File, Line: at.line, Column: at.column + utf8.RuneCountInString(l.Text[at.offset:end])}
}

// Start is the place of the first character of the line.
func (l *Line) Start() Position { return l.Position(0) }

// Inline is a duty statement that stands in a netlist on a line that begins `*:`.
type Inline struct {
	Text string
	At   Position
}

// Lines cuts text into logical lines. Comments are left out: lines that begin with * or ; or # or //, and
// what follows ; or a $ between blanks, or on an element // behind a blank. A + at the start of a line continues the last card. Lines that begin
// `*:` are returned apart. The first line is returned like any other; whether it is a title is for the
// reader to say.
func Lines(file, text string) (lines []Line, inline []Inline, faults []Diagnostic) {
	number := 0
	first := true
	for len(text) > 0 || first {
		first = false
		number++
		var raw string
		raw, text, _ = strings.Cut(text, "\n")
		body := strings.TrimLeft(raw, " \t\v\f\u00a0\x00")
		column := 1 + utf8.RuneCountInString(raw[:len(raw)-len(body)])
		switch {
		case body == "":
			if number == 1 {
				lines = append(lines, Line{File: file, first: segment{0, 1, 1}})
			}
			continue
		case strings.HasPrefix(body, "*:"):
			inline = append(inline, Inline{Text: body[2:], At: Position{File: file, Line: number, Column: column + 2}})
			if number > 1 {
				continue
			}
			fallthrough
		case body[0] == '*', body[0] == ';', body[0] == '#', strings.HasPrefix(body, "//"):
			if number == 1 {
				lines = append(lines, Line{File: file, Text: "*" + strings.TrimLeft(body, "*;#/: "), first: segment{0, 1, column}})
			}
			continue
		}
		if body[0] == '+' && number > 1 && len(lines) > 0 && (len(lines) > 1 || !isTitleOnly(lines[0])) {
			last := &lines[len(lines)-1]
			rest := cutComment(body[1:])
			if len(last.Text)+len(rest) > MaxLine {
				if len(last.Text) <= MaxLine {
					faults = append(faults, Diagnostic{At: Position{file, number, column}, What: "the card with its continuation lines is longer than 1 MiB", Expected: "a shorter card"})
					last.Text += strings.Repeat(" ", 1)
				}
				continue
			}
			last.Text += " "
			last.more = append(last.more, segment{len(last.Text), number, column + 1})
			last.Text += rest
			continue
		}
		if len(body) > MaxLine {
			faults = append(faults, Diagnostic{At: Position{file, number, column}, What: "the line is longer than 1 MiB", Expected: "a shorter line"})
			continue
		}
		cut := body
		if number > 1 {
			cut = cutComment(body)
		}
		if cut == "" && number > 1 {
			continue
		}
		lines = append(lines, Line{File: file, Text: cut, first: segment{0, number, column}})
	}
	return lines, inline, faults
}

// isTitleOnly reports whether the first line is a comment or blank, which a + cannot continue.
func isTitleOnly(l Line) bool { return l.Text == "" || l.Text[0] == '*' }

// cutComment removes an end-of-line comment and trailing blanks. Quoted text is left alone.
func cutComment(body string) string {
	quote := byte(0)
	for k := 0; k < len(body); k++ {
		switch c := body[k]; {
		case quote != 0:
			if c == quote {
				quote = 0
			}
		case c == '"':
			if strings.IndexByte(body[k+1:], '"') >= 0 {
				quote = c
			}
		case c == '/' && k > 0 && blank(body[k-1]) && strings.HasPrefix(body[k:], "//") && body[0] != '.':
			return strings.TrimRight(body[:k], " \t\x00")
		case c == ';':
			return strings.TrimRight(body[:k], " \t\x00")
		case c == '$' && k > 0 && blank(body[k-1]) && (k+1 == len(body) || blank(body[k+1])):
			return strings.TrimRight(body[:k], " \t\x00")
		}
	}
	return strings.TrimRight(body, " \t\v\f\u00a0\x00")
}

func blank(c byte) bool { return c == ' ' || c == '\t' }
