package syntax

import (
	"fmt"
	"strings"

	"github.com/alecthomas/participle/v2"
	"github.com/alecthomas/participle/v2/lexer"
)

// Formula is an arithmetic expression as parameters and behavioural sources carry it. Operators bind in the
// usual order; ^ and ** are powers and bind to the right.
type Formula struct {
	Condition *Disjunction `parser:"@@"`
	Then      *Formula     `parser:"( '?' @@"`
	Else      *Formula     `parser:"  ':' @@ )?"`
}

// Disjunction is a || b, with | accepted too.
type Disjunction struct {
	Terms []*Conjunction `parser:"@@ ( ( '||' | '|' ) @@ )*"`
}

// Conjunction is a && b, with & accepted too.
type Conjunction struct {
	Terms []*Comparison `parser:"@@ ( ( '&&' | '&' ) @@ )*"`
}

// Comparison is a < b and the like.
type Comparison struct {
	Left  *Sum   `parser:"@@"`
	Op    string `parser:"( @( '<=' | '>=' | '==' | '!=' | '<' | '>' )"`
	Right *Sum   `parser:"  @@ )?"`
}

// Sum is a + b - c.
type Sum struct {
	First *Product   `parser:"@@"`
	Rest  []*SumTerm `parser:"@@*"`
}

// SumTerm is + b or - b.
type SumTerm struct {
	Op   string   `parser:"@( '+' | '-' )"`
	Term *Product `parser:"@@"`
}

// Product is a * b / c.
type Product struct {
	First *Unary         `parser:"@@"`
	Rest  []*ProductTerm `parser:"@@*"`
}

// ProductTerm is * b or / b or % b.
type ProductTerm struct {
	Op   string `parser:"@( '*' | '/' | '%' )"`
	Term *Unary `parser:"@@"`
}

// Unary is a sign or negation before a power.
type Unary struct {
	Op    string `parser:"  ( @( '-' | '+' | '!' )"`
	Of    *Unary `parser:"    @@ )"`
	Power *Power `parser:"| @@"`
}

// Power is a ^ b.
type Power struct {
	Base     *Operand `parser:"@@"`
	Exponent *Unary   `parser:"( ( '^' | '**' ) @@ )?"`
}

// Operand is a number, a probe, a call, a name, or a formula in brackets.
type Operand struct {
	Pos    lexer.Position
	Number string   `parser:"  @Number"`
	Probe  string   `parser:"| @Probe"`
	Call   *Call    `parser:"| @@"`
	Sub    *Formula `parser:"| '(' @@ ')' | '{' @@ '}'"`
}

// Call is a name, with arguments if it is a function.
type Call struct {
	Name string     `parser:"@Name"`
	Open bool       `parser:"( @'('"`
	Args []*Formula `parser:"  ( @@ ( ',' @@ )* )? ')' )?"`
}

var formulaParser = participle.MustBuild[Formula](participle.Lexer(formulaLexer{}), participle.UseLookahead(2))

// FormulaGrammar is the grammar of a formula in EBNF, for the documentation.
func FormulaGrammar() string { return formulaParser.String() }

// maxFormula is the longest formula that is parsed, in bytes.
const maxFormula = 64 << 10

// FormulaError is what is wrong with a formula, with the byte offset into its text.
type FormulaError struct {
	Offset int
	What   string
}

// Error describes the fault.
func (e *FormulaError) Error() string { return e.What }

// ParseFormula parses a formula.
func ParseFormula(text string) (*Formula, error) {
	if len(text) > maxFormula {
		return nil, &FormulaError{0, "the formula is longer than 64 KiB"}
	}
	if at := tooDeep(text); at >= 0 {
		return nil, &FormulaError{at, "more than 100 brackets within one another"}
	}
	if at := signRun(text); at >= 0 {
		return nil, &FormulaError{at, "more than 100 signs in a row"}
	}
	if strings.Count(text, "?") > MaxDepth || strings.Count(text, "^")+strings.Count(text, "**") > MaxDepth {
		return nil, &FormulaError{0, "more than 100 choices or powers in one formula"}
	}
	f, err := formulaParser.ParseString("", text)
	if err == nil {
		return f, nil
	}
	fault := &FormulaError{What: fmt.Sprintf("cannot read the formula %s", quoteShort(text))}
	if pe, ok := err.(participle.Error); ok {
		fault.Offset = pe.Position().Offset
		if u, ok := err.(*participle.UnexpectedTokenError); ok {
			if u.Unexpected.EOF() {
				fault.What = fmt.Sprintf("the formula %s ends too early", quoteShort(text))
			} else {
				fault.What = fmt.Sprintf("unexpected %s in the formula %s", quoteShort(u.Unexpected.Value), quoteShort(text))
			}
		}
	}
	return nil, fault
}

// signRun returns the offset of a run of more than MaxDepth signs, or -1: each is one level of the tree.
func signRun(text string) int {
	run := 0
	for k := 0; k < len(text); k++ {
		switch text[k] {
		case '-', '+', '!':
			if run++; run > MaxDepth {
				return k
			}
		case ' ', '\t':
		default:
			run = 0
		}
	}
	return -1
}

// String prints the formula so that it reads back the same.
func (f *Formula) String() string {
	if f.Then == nil {
		return f.Condition.String()
	}
	return f.Condition.String() + " ? " + f.Then.String() + " : " + f.Else.String()
}

// String prints the disjunction.
func (d *Disjunction) String() string { return joinTerms(d.Terms, " || ") }

// String prints the conjunction.
func (c *Conjunction) String() string { return joinTerms(c.Terms, " && ") }

func joinTerms[T fmt.Stringer](terms []T, op string) string {
	words := make([]string, len(terms))
	for k, t := range terms {
		words[k] = t.String()
	}
	return strings.Join(words, op)
}

// String prints the comparison.
func (c *Comparison) String() string {
	if c.Right == nil {
		return c.Left.String()
	}
	return c.Left.String() + " " + c.Op + " " + c.Right.String()
}

// String prints the sum.
func (s *Sum) String() string {
	text := s.First.String()
	for _, r := range s.Rest {
		text += " " + r.Op + " " + r.Term.String()
	}
	return text
}

// String prints the product.
func (p *Product) String() string {
	text := p.First.String()
	for _, r := range p.Rest {
		text += " " + r.Op + " " + r.Term.String()
	}
	return text
}

// String prints the sign and its operand.
func (u *Unary) String() string {
	if u.Power != nil {
		return u.Power.String()
	}
	return u.Op + u.Of.String()
}

// String prints the power.
func (p *Power) String() string {
	if p.Exponent == nil {
		return p.Base.String()
	}
	return p.Base.String() + "^" + p.Exponent.String()
}

// String prints the operand.
func (o *Operand) String() string {
	switch {
	case o.Number != "":
		return o.Number
	case o.Probe != "":
		return o.Probe
	case o.Call != nil:
		if !o.Call.Open {
			return o.Call.Name
		}
		return o.Call.Name + "(" + joinTerms(o.Call.Args, ", ") + ")"
	}
	return "(" + o.Sub.String() + ")"
}
