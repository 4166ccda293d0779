package netlist

import (
	"strconv"
	"strings"

	"railproof/netlist/syntax"
)

// match is what a pattern of a duty statement selects.
type match struct {
	elements []ElementID
	exact    bool // plain names only: no range, no wildcard
}

// findElements expands a pattern: a name, a range D1..D4, a wildcard D* or D?, or a list of these with
// commas. A name that stands in the circuit as written is itself, whatever characters it holds. The
// elements come in netlist order, each once. at is the place of the pattern. With some, what is not there is left
// out of the selection, which may then be empty; else it is a fault.
func (c *Circuit) findElements(pattern string, at Position, some bool) (match, *Diagnostic) {
	if id, ok := c.Find(pattern); ok {
		return match{[]ElementID{id}, true}, nil
	}
	selected := make([]bool, len(c.Elements))
	m := match{exact: true}
	for _, item := range strings.Split(pattern, ",") {
		item = strings.TrimSpace(item)
		exact, what, expected := c.selectElements(item, some, selected)
		if what != "" {
			return match{}, &Diagnostic{At: at, What: what, Expected: expected}
		}
		m.exact = m.exact && exact
	}
	for i, yes := range selected {
		if yes {
			m.elements = append(m.elements, ElementID(i))
		}
	}
	return m, nil
}

// selectElements marks what one item of a list selects; what is not empty when it selects nothing.
func (c *Circuit) selectElements(item string, some bool, selected []bool) (exact bool, what, expected string) {
	if id, ok := c.Find(item); ok {
		selected[id] = true
		return true, "", ""
	}
	if strings.ContainsAny(item, "*?") {
		any := false
		for i := range c.Elements {
			if matchesWildcard(strings.ToLower(item), strings.ToLower(c.Elements[i].Name)) {
				selected[i], any = true, true
			}
		}
		if !any && !some {
			return false, strconv.Quote(item) + " matches no element", "a pattern such as D*"
		}
		return false, "", ""
	}
	if low, high, ok := strings.Cut(item, ".."); ok {
		what, expected = c.selectRange(item, low, high, some, selected)
		return false, what, expected
	}
	if some {
		return true, "", ""
	}
	return true, "no element " + strconv.Quote(item), c.nearestElement(item)
}

// selectRange marks the elements of D1..D4: both ends must be there unless some will do, numbers between them may
// be missing.
func (c *Circuit) selectRange(item, low, high string, some bool, selected []bool) (what, expected string) {
	prefix, from, okLow := numbered(low)
	if digits := strings.TrimRight(high, "0123456789"); digits == "" {
		high = prefix + high
	} else if dot := strings.LastIndexByte(prefix, '.'); dot >= 0 && !strings.Contains(high, ".") {
		high = prefix[:dot+1] + high // X1.D1..D4
	}
	other, to, okHigh := numbered(high)
	if !okLow || !okHigh || !strings.EqualFold(prefix, other) || from > to {
		return strconv.Quote(item) + " is no range of elements", "one such as D1..D4"
	}
	for _, end := range []string{low, high} {
		if _, ok := c.Find(end); !ok && !some {
			return "no element " + strconv.Quote(end), c.nearestElement(end)
		}
	}
	for i := range c.Elements {
		p, n, ok := numbered(c.Elements[i].Name)
		if ok && strings.EqualFold(p, prefix) && n >= from && n <= to {
			selected[i] = true
		}
	}
	return "", ""
}

// numbered splits "D12" into its letters and its number.
func numbered(name string) (prefix string, number int, ok bool) {
	prefix = strings.TrimRight(name, "0123456789")
	number, err := strconv.Atoi(name[len(prefix):])
	return prefix, number, err == nil && prefix != ""
}

// matchesWildcard matches * against any characters and ? against one, in time linear in the product of
// the lengths.
func matchesWildcard(pattern, name string) bool {
	p, n := []rune(pattern), []rune(name)
	star, mark := -1, 0
	i, j := 0, 0
	for j < len(n) {
		switch {
		case i < len(p) && p[i] == '*':
			star, mark = i, j
			i++
		case i < len(p) && (p[i] == '?' || p[i] == n[j]):
			i++
			j++
		case star >= 0:
			mark++
			i, j = star+1, mark
		default:
			return false
		}
	}
	for i < len(p) && p[i] == '*' {
		i++
	}
	return i == len(p)
}

// nearestElement suggests a name: "D1", or what the circuit holds at all.
func (c *Circuit) nearestElement(name string) string {
	var names []string
	for i := range c.Elements {
		names = append(names, c.Elements[i].Name)
	}
	return suggest(name, names, "an element of "+baseName(c.File))
}

// nearestNode suggests a node name.
func (c *Circuit) nearestNode(name string) string {
	var names []string
	for i := range c.Nodes {
		names = append(names, c.Nodes[i].Name)
	}
	return suggest(name, names, "a node of "+baseName(c.File))
}

func suggest(word string, words []string, otherwise string) string {
	if near, ok := syntax.Nearest(word, words); ok {
		return near
	}
	return otherwise
}

// baseName is the last part of a path, with either kind of separator.
func baseName(path string) string {
	if path == "" {
		return "the netlist"
	}
	return path[strings.LastIndexAny(path, `/\`)+1:]
}
