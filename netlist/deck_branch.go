package netlist

import (
	"errors"
	"fmt"
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

// decision is a condition as it came out where it stands.
type decision struct {
	line *syntax.Line
	text string
	held bool
}

// errDoubtful is a name that an .if may define or not.
var errDoubtful = errors.New("an .if whose condition is not known may define it otherwise")

// conditional follows `.if (condition) ... .elseif (condition) ... .else ... .endif`; conditions are computed from
// the parameters of the netlist. It reports whether the card is one of these.
func (c *collector) conditional(key string, l *syntax.Line) bool {
	top := len(c.branches) - 1
	switch key {
	case "if":
		c.branches = append(c.branches, branch{at: l.Start(), state: branchWaiting})
		if out, _ := branched(c.branches[:top+1]); out {
			c.branches[top+1].state = branchDone // the .if stands in a part that is left out
			return true
		}
		c.decide(top+1, l)
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
	if n := len(text); n > 1 && (text[0] == '{' && text[n-1] == '}' || text[0] == '\'' && text[n-1] == '\'') {
		text = text[1 : n-1]
	}
	held, err := false, errors.New("it depends on how its subcircuit is called")
	if c.current.parent == nil {
		held, err = c.condition(text, c.allParameters())
	}
	switch {
	case err != nil:
		c.branches[k].state = branchDoubt
		c.remark(RemarkNotRead, l.Start(), "", "the condition of .if ("+err.Error()+"): its elements are kept, of unknown law")
		return
	case held:
		c.branches[k].state = branchTaken
	}
	c.decisions = append(c.decisions, decision{l, text, held})
	c.remark(RemarkAssumption, l.Start(), "", map[bool]string{true: "the condition holds: what follows is read", false: "the condition does not hold: what follows is left out"}[held])
}

// allParameters are those read so far and those that stand further on, unless what was read of one is in doubt.
func (c *collector) allParameters() []assignment {
	doubt := map[string]bool{}
	list := append([]assignment{}, c.top.params...)
	for _, a := range list {
		doubt[a.name] = a.doubt
	}
	for _, a := range c.ahead {
		if !doubt[a.name] {
			list = append(list, a)
		}
	}
	return list
}

// condition computes a condition from parameters and the functions read so far.
func (c *collector) condition(text string, params []assignment) (bool, error) {
	s := &scope{params: params, funcs: c.top.funcs}
	v, err := newEnvironment(nil, s, nil).atom(&syntax.Atom{Braced: "{" + text + "}"})
	return v != 0, err
}

// checkDecisions computes the conditions again when all parameters are known: one that comes out otherwise has left
// out the wrong part.
func (c *collector) checkDecisions() {
	for _, d := range c.decisions {
		if held, err := c.condition(d.text, c.top.params); err != nil || held != d.held {
			c.fault(d.line.Start(), fmt.Sprintf("the condition `%s` comes out otherwise with the parameters that follow it", shorten(d.text)), "its parameters before it, each stated once")
		}
	}
}

// lookAhead takes the parameters of the netlist that stand outside subcircuits and branches: a condition may refer
// to one that stands behind it.
func (c *collector) lookAhead(lines []syntax.Line) {
	met, depth := false, 0
	for k := range lines {
		switch key := strings.ToLower(firstWord(lines[k].Text)); key {
		case ".subckt", ".macro", ".control", ".data":
			depth++
		case ".ends", ".eom", ".endc", ".enddata", ".endif":
			depth--
		case ".param", ".params", ".parameter":
			if depth == 0 {
				c.ahead = append(c.ahead, c.parametersAhead(&lines[k])...)
			}
		case ".end":
			depth = len(lines) // nothing behind it counts
		default:
			if key == ".if" || strings.HasPrefix(key, ".if(") {
				met = true
				depth++
			}
		}
	}
	if !met {
		c.ahead = nil
	}
}

// parametersAhead reads a .param card without its faults, which its own turn brings.
func (c *collector) parametersAhead(l *syntax.Line) []assignment {
	quiet := &collector{}
	card, fault := syntax.ParseDirective(l)
	switch {
	case fault != nil || functionLike(strings.TrimSpace(l.Text[len(firstWord(l.Text)):])):
		return nil
	case plainAssignments(card.Items):
		return quiet.assignments(card.Items, l)
	}
	return quiet.looseParameters(l)
}

// branched reports whether cards at this place are left out, or kept in doubt.
func (c *collector) branched() (out, doubt bool) { return branched(c.branches) }

func branched(open []branch) (out, doubt bool) {
	for _, b := range open {
		switch b.state {
		case branchWaiting, branchDone:
			return true, false
		case branchDoubt:
			doubt = true
		}
	}
	return false, doubt
}
