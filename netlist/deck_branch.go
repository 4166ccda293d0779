package netlist

import (
	"errors"
	"strings"

	"railproof/netlist/syntax"
)

// branch is an open `.if`: which of its parts belongs to the circuit.
type branch struct {
	at    Position
	state branchState
}

type branchState uint8

const (
	branchTaken   branchState = iota // this part is read
	branchWaiting                    // none before held: the next condition decides
	branchDone                       // one before held: the rest is left out
	branchDoubt                      // a condition could not be computed: all parts are kept as unknown
)

// conditional follows `.if (condition) ... .elseif (condition) ... .else ... .endif`; conditions are computed from
// the parameters that stand before them. It reports whether the card is one of these.
func (c *collector) conditional(key string, l *syntax.Line) bool {
	top := len(c.branches) - 1
	switch key {
	case "if":
		c.branches = append(c.branches, branch{at: l.Start(), state: branchWaiting})
		c.decide(len(c.branches)-1, l)
		return true
	case "elseif", "else", "endif":
	default:
		return false
	}
	if top < 0 {
		c.fault(l.Start(), "."+key+" without .if", ".if before it")
		return true
	}
	b := &c.branches[top]
	switch {
	case key == "endif":
		c.branches = c.branches[:top]
	case b.state == branchDoubt:
	case b.state == branchTaken:
		b.state = branchDone
	case b.state == branchWaiting && key == "else":
		b.state = branchTaken
	case b.state == branchWaiting:
		c.decide(top, l)
	}
	return true
}

// decide computes the condition of a branch.
func (c *collector) decide(k int, l *syntax.Line) {
	text := strings.TrimSpace(l.Text[len(firstWord(l.Text)):])
	if strings.HasPrefix(strings.ToLower(l.Text), ".if(") || strings.HasPrefix(strings.ToLower(l.Text), ".elseif(") {
		text = l.Text[strings.IndexByte(l.Text, '('):]
	}
	var chain func(s *scope) *environment
	chain = func(s *scope) *environment {
		if s == nil {
			return nil
		}
		return newEnvironment(chain(s.parent), s, nil)
	}
	err := errors.New("it depends on how its subcircuit is called")
	v := 0.0
	if c.current.parent == nil {
		v, err = chain(c.current).atom(&syntax.Atom{Braced: "{" + text + "}"})
	}
	switch {
	case err != nil:
		c.branches[k].state = branchDoubt
		c.remark(RemarkNotRead, l.Start(), "", "the condition of .if ("+err.Error()+"): its elements are kept, of unknown law")
	case v != 0:
		c.branches[k].state = branchTaken
	}
	if err == nil {
		c.remark(RemarkAssumption, l.Start(), "", map[bool]string{true: "the condition holds: what follows is read", false: "the condition does not hold: what follows is left out"}[v != 0])
	}
}

// branched reports whether cards at this place are left out, or kept in doubt.
func (c *collector) branched() (out, doubt bool) {
	for _, b := range c.branches {
		switch b.state {
		case branchWaiting, branchDone:
			return true, false
		case branchDoubt:
			doubt = true
		}
	}
	return false, doubt
}
