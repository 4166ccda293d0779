package netlist

import (
	"strings"

	"railproof/netlist/syntax"
)

// plainAssignments reports that a .param card holds nothing but NAME=value, each value one word or one
// expression in its marks.
func plainAssignments(items []*syntax.Item) bool {
	for _, i := range items {
		if i.Comma {
			continue
		}
		if i.Assign == nil || i.Assign.Value == nil && !strings.HasSuffix(i.Assign.Key.Text(), ":") {
			return false
		}
	}
	return true
}

// looseParameters reads a .param card whose formulas stand without marks: `.param a = 2 * b  c=sqrt(a)`. A
// value ends where the next NAME= begins. `.param NAME value` is read too.
func (c *collector) looseParameters(l *syntax.Line) []assignment {
	at := len(firstWord(l.Text))
	text := l.Text
	if f := strings.Fields(text); len(f) == 3 && !strings.Contains(text, "=") {
		if _, number := spice(f[2]); number {
			return []assignment{{name: strings.ToLower(f[1]), value: &syntax.Value{Atom: &syntax.Atom{Word: f[2]}}, line: l}}
		}
	}
	equals := assignmentSigns(text, at)
	if len(equals) == 0 {
		c.fault(l.Position(at), "a parameter has no value", "NAME=value")
		return nil
	}
	var list []assignment
	end := nameBefore(text, at, equals[0])
	for k, sign := range equals {
		from := end
		if end = len(text); k+1 < len(equals) {
			end = nameBefore(text, sign+1, equals[k+1])
		}
		name := strings.TrimSpace(text[from:sign])
		value := strings.Trim(text[sign+1:end], " \t,")
		if name == "" || value == "" || k == 0 && strings.Trim(text[at:from], " \t,") != "" {
			c.fault(l.Position(from), "a parameter without a name or a value", "NAME=value")
			return list
		}
		list = append(list, assignment{name: strings.ToLower(name), value: &syntax.Value{Atom: looseAtom(value, sign+1)}, line: l})
	}
	return list
}

// looseAtom is a value as it would be if it stood in its marks.
func looseAtom(value string, offset int) *syntax.Atom {
	a := &syntax.Atom{}
	a.Pos.Offset = offset
	last := value[len(value)-1]
	switch {
	case len(value) > 1 && value[0] == '"' && last == '"':
		a.Quoted = value
	case len(value) > 1 && (value[0] == '\'' && last == '\'' || value[0] == '{' && last == '}') && strings.Count(value, value[:1]) < 3:
		a.Braced = value
	case !strings.ContainsAny(value, " \t()"):
		a.Word = value
	default:
		a.Braced = "{" + value + "}"
	}
	return a
}

// assignmentSigns are the places of the equals signs outside brackets and marks that are no comparison.
func assignmentSigns(text string, from int) []int {
	var list []int
	depth, quote := 0, byte(0)
	for k := from; k < len(text); k++ {
		switch ch := text[k]; {
		case quote != 0:
			if ch == quote {
				quote = 0
			}
		case ch == '\'' || ch == '"':
			quote = ch
		case ch == '(' || ch == '{':
			depth++
		case ch == ')' || ch == '}':
			depth--
		case ch == '=' && depth == 0:
			if k+1 < len(text) && text[k+1] == '=' {
				k++
			} else if !strings.ContainsRune("<>!", rune(text[k-1])) {
				list = append(list, k)
			}
		}
	}
	return list
}

// nameBefore is where the name before an equals sign begins, from a place in the text on.
func nameBefore(text string, from, sign int) int {
	k := sign
	for k > from && (text[k-1] == ' ' || text[k-1] == '\t') {
		k--
	}
	for k > from && !strings.ContainsRune(" \t,", rune(text[k-1])) {
		k--
	}
	return k
}

// functionLike reports `NAME(arguments) = formula`, which some decks write on a .param card.
func functionLike(rest string) bool {
	open, end := strings.IndexByte(rest, '('), strings.IndexByte(rest, ')')
	if open <= 0 || end < open || strings.ContainsAny(rest[:open], " \t=,{'\"") {
		return false
	}
	return strings.HasPrefix(strings.TrimLeft(rest[end+1:], " \t"), "=")
}
