package netlist

import (
	"fmt"
	"strings"

	"railproof/netlist/syntax"
)

// define adds parameters to the current scope. Of two of one name the last holds, and it is said.
func (c *collector) define(list []assignment) {
	s := c.current
	_, doubt := c.branched()
	for _, a := range list {
		a.doubt = doubt
		if _, double := s.named[a.name]; double {
			c.remark(RemarkModel, a.line.Start(), "", "parameter "+a.name+" is defined again; the last definition holds")
		}
		s.named[a.name] = true
		s.params = append(s.params, a)
	}
}

// assignments reads NAME=value pairs; words without a value are an error unless they are keywords.
func (c *collector) assignments(items []*syntax.Item, l *syntax.Line) []assignment {
	var list []assignment
	for _, i := range items {
		switch {
		case i.Comma:
		case i.Group != nil:
			list = append(list, c.assignments(i.Group.Items, l)...)
		case i.Assign != nil && i.Assign.Value != nil:
			list = append(list, assignment{name: strings.ToLower(i.Assign.Key.Text()), value: i.Assign.Value, line: l})
		case i.Assign != nil:
			text := i.Assign.Key.Text()
			if !strings.HasSuffix(text, ":") {
				c.fault(l.Position(i.Assign.Key.Pos.Offset), fmt.Sprintf("parameter %q has no value", text), "NAME=value")
			}
		case i.Equals:
			c.fault(l.Start(), "an = without a name before it", "NAME=value")
		}
	}
	return list
}

func (c *collector) open(name string, l *syntax.Line) *scope {
	s := newScope(name, c.current)
	s.at = l.Start()
	c.current = s
	return s
}

func (c *collector) subckt(card *syntax.DirectiveCard, l *syntax.Line) {
	var positional []*syntax.Atom
	var assigned []*syntax.Item
	for _, i := range card.Items {
		if i.Assign != nil && i.Assign.Value == nil {
			if strings.HasSuffix(i.Assign.Key.Text(), ":") {
				continue
			}
			if i.Assign.Key.Word != "/" { // a stroke between the pins and the parameters
				positional = append(positional, i.Assign.Key)
			}
		} else if i.Group != nil {
			positional = append(positional, atoms(i.Group.Items)...)
		} else {
			assigned = append(assigned, i)
		}
	}
	if len(positional) == 0 {
		c.fault(l.Start(), ".subckt without a name", ".subckt NAME node ...")
		c.open("?", l)
		return
	}
	name := positional[0].Text()
	parent := c.current
	s := c.open(name, l)
	for _, p := range positional[1:] {
		s.pins = append(s.pins, p.Text())
	}
	s.defaults = c.assignments(assigned, l)
	if depthOf(s) > maxSubcktDepth {
		c.fault(l.Start(), fmt.Sprintf("subcircuit definitions nest more than %d deep", maxSubcktDepth), "a flatter netlist")
		return
	}
	key := strings.ToLower(name)
	if _, double := parent.subckts[key]; double {
		c.remark(RemarkModel, l.Start(), "", "subcircuit "+name+" is defined again; the first definition holds")
		return
	}
	parent.subckts[key] = s
}

func depthOf(s *scope) int {
	n := 0
	for ; s != nil; s = s.parent {
		n++
	}
	return n
}

// defineFunction reads `.func name(a,b) {body}`.
func (c *collector) defineFunction(l *syntax.Line) {
	text := strings.TrimSpace(l.Text[len(".func"):])
	open, end := strings.IndexByte(text, '('), strings.IndexByte(text, ')')
	if open <= 0 || end < open {
		c.fault(l.Start(), ".func without arguments in brackets", ".func NAME(a,b) {formula}")
		return
	}
	f := &function{}
	_, f.doubt = c.branched()
	for _, a := range strings.Split(text[open+1:end], ",") {
		if a = strings.ToLower(strings.TrimSpace(a)); a != "" {
			f.args = append(f.args, a)
		}
	}
	body := strings.TrimSpace(strings.TrimPrefix(strings.TrimSpace(text[end+1:]), "="))
	if n := len(body); n >= 2 && (body[0] == '{' && body[n-1] == '}' || body[0] == '\'' && body[n-1] == '\'') {
		body = body[1 : n-1]
	}
	parsed, err := syntax.ParseFormula(body)
	if err != nil {
		c.fault(l.Start(), err.Error(), "a formula")
		return
	}
	f.body = parsed
	name := strings.ToLower(strings.TrimSpace(text[:open]))
	if _, double := c.current.funcs[name]; double {
		c.remark(RemarkModel, l.Start(), "", "function "+name+" is defined again; the last definition holds")
	}
	c.current.funcs[name] = f
}

// atoms flattens items to their words and expressions, keys of assignments included.
func atoms(items []*syntax.Item) []*syntax.Atom {
	var list []*syntax.Atom
	for _, i := range items {
		switch {
		case i.Group != nil:
			list = append(list, atoms(i.Group.Items)...)
		case i.Assign != nil:
			list = append(list, i.Assign.Key)
		}
	}
	return list
}
