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
// what follows ; or a $ between blanks, or on an element // behind a blank. A + at the start of a line
// continues the last card. Lines that begin `*:` are returned apart. The first line is returned whatever it
// holds, a comment as `*text`; whether it is a title is for the reader to say.
func Lines(file, text string) (lines []Line, inline []Inline, faults []Diagnostic) {
	c := cutter{file: file}
	for number := 1; len(text) > 0 || number == 1; number++ {
		var raw string
		raw, text, _ = strings.Cut(text, "\n")
		c.cut(raw, number, number == 1)
	}
	c.flush()
	return c.lines, c.inline, c.faults
}

// IncludedLines is Lines for a file that has no title line.
func IncludedLines(file, text string) (lines []Line, inline []Inline, faults []Diagnostic) {
	c := cutter{file: file}
	for number := 1; len(text) > 0; number++ {
		var raw string
		raw, text, _ = strings.Cut(text, "\n")
		c.cut(raw, number, false)
	}
	c.flush()
	return c.lines, c.inline, c.faults
}

// cutter collects the logical lines of one file.
type cutter struct {
	file   string
	lines  []Line
	tail   []byte // continuations of the last line, joined to it when the next card begins
	long   bool   // the last card was too long: its continuations are dropped with it
	inline []Inline
	faults []Diagnostic
}

func (c *cutter) fault(line, column int, what, expected string) {
	c.faults = append(c.faults, Diagnostic{At: Position{c.file, line, column}, What: what, Expected: expected})
}

// flush joins the continuations to the last line, once a card: joining each would take quadratic time.
func (c *cutter) flush() {
	if len(c.tail) > 0 {
		c.lines[len(c.lines)-1].Text += string(c.tail)
		c.tail = c.tail[:0]
	}
}

// cut takes one line of the file. title says that it is kept as it is.
func (c *cutter) cut(raw string, number int, title bool) {
	body := strings.TrimLeft(raw, " \t\v\f\u00a0\x00")
	column := 1 + utf8.RuneCountInString(raw[:len(raw)-len(body)])
	first := segment{0, number, column}
	switch {
	case body == "":
		if title {
			c.lines = append(c.lines, Line{File: c.file, first: segment{0, 1, 1}})
		}
		return
	case strings.HasPrefix(body, "*:"):
		c.inline = append(c.inline, Inline{Text: body[2:], At: Position{File: c.file, Line: number, Column: column + 2}})
		if title {
			c.lines = append(c.lines, Line{File: c.file, Text: "*", first: first})
		}
		return
	case body[0] == '*', body[0] == ';', body[0] == '#', strings.HasPrefix(body, "//"):
		if title {
			c.lines = append(c.lines, Line{File: c.file, Text: "*" + strings.TrimLeft(body, "*;#/: "), first: first})
		}
		return
	case body[0] == '+' && !title && c.long:
		return
	case body[0] == '+' && !title && len(c.lines) > 0 && (len(c.lines) > 1 || !isTitleOnly(c.lines[0])):
		c.join(body[1:], number, column+1)
		return
	}
	c.flush()
	c.long = len(body) > MaxLine
	if c.long {
		c.fault(number, column, "the line is longer than 1 MiB", "a shorter line")
		return
	}
	if !title || body[0] == '.' {
		body = cutComment(body)
	}
	if body != "" {
		c.lines = append(c.lines, Line{File: c.file, Text: body, first: first})
	}
}

// join continues the last card.
func (c *cutter) join(rest string, number, column int) {
	last := &c.lines[len(c.lines)-1]
	rest = cutComment(rest)
	size := len(last.Text) + len(c.tail)
	if size+len(rest) > MaxLine {
		c.fault(number, column-1, "the card with its continuation lines is longer than 1 MiB", "a shorter card")
		c.long = true
		return
	}
	c.tail = append(c.tail, ' ')
	last.more = append(last.more, segment{size + 1, number, column})
	c.tail = append(c.tail, rest...)
}

// isTitleOnly reports whether the first line is a comment or blank, which a + cannot continue.
func isTitleOnly(l Line) bool { return l.Text == "" || l.Text[0] == '*' }

// WithoutComment is the line without an end-of-line comment; the first line of a file still carries one.
func (l Line) WithoutComment() Line {
	l.Text = cutComment(l.Text)
	return l
}

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
