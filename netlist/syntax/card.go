package syntax

import (
	"strings"

	"github.com/alecthomas/participle/v2"
	"github.com/alecthomas/participle/v2/lexer"
)

// ElementCard is `NAME item item ...`: the nodes, values, keywords and assignments of an element.
type ElementCard struct {
	Name  *Atom   `parser:"@@"`
	Items []*Item `parser:"@@*"`
}

// DirectiveCard is `.keyword item item ...`.
type DirectiveCard struct {
	Keyword string  `parser:"@Word"`
	Items   []*Item `parser:"@@*"`
}

// Item is one thing on a card: a bracketed list, KEY=value, or a single word or value. Commas separate
// like blanks.
type Item struct {
	Comma  bool    `parser:"  @','"`
	Equals bool    `parser:"| @'='"`
	Group  *Group  `parser:"| @@"`
	Assign *Assign `parser:"| @@"`
}

// Group is `( item item ... )`.
type Group struct {
	Pos   lexer.Position
	Items []*Item `parser:"'(' @@* ')'?"`
}

// Assign is `word` or `word = value`.
type Assign struct {
	Key   *Atom  `parser:"@@"`
	Value *Value `parser:"( '=' @@ )?"`
}

// Value is what stands behind an equals sign: one word or expression, or a bracketed list.
type Value struct {
	Atom  *Atom  `parser:"  @@"`
	Group *Group `parser:"| @@"`
}

// Atom is one word, quoted text or braced expression, as written.
type Atom struct {
	Pos    lexer.Position
	Word   string `parser:"  @Word"`
	Quoted string `parser:"| @String"`
	Braced string `parser:"| @Braced"`
}

// Text is the word, or the text between the marks.
func (a *Atom) Text() string {
	switch {
	case a == nil:
		return ""
	case a.Word != "":
		return a.Word
	case a.Quoted != "":
		return a.Quoted[1 : len(a.Quoted)-1]
	case a.Braced != "":
		return a.Braced[1 : len(a.Braced)-1]
	}
	return ""
}

// IsExpression reports whether the atom stood in braces or single quotes.
func (a *Atom) IsExpression() bool { return a != nil && a.Braced != "" }

var (
	elementParser   = buildCard[ElementCard]()
	directiveParser = buildCard[DirectiveCard]()
)

func buildCard[T any]() *participle.Parser[T] {
	return participle.MustBuild[T](participle.Lexer(cardLexer{}), participle.UseLookahead(2))
}

// CardGrammar is the grammar of a card in EBNF, for the documentation.
func CardGrammar() string { return elementParser.String() + "\n\n" + directiveParser.String() }

// ParseElement parses a logical line as an element card.
func ParseElement(l *Line) (*ElementCard, *Diagnostic) {
	if c := plainCard(l.Text); c != nil {
		return c, nil
	}
	return parseCard(elementParser, l)
}

func atomAt(text string, from, to int) Atom {
	return Atom{Pos: lexer.Position{Offset: from, Line: 1, Column: from + 1}, Word: text[from:to]}
}

// plainCard is the card of a line that holds nothing but words and KEY=value, nil for any other: the common
// case, for which cutting at blanks gives what the grammar gives, several times faster.
func plainCard(text string) *ElementCard {
	if strings.ContainsAny(text, "(){}'\",") || strings.HasPrefix(text, "=") {
		return nil
	}
	words := 1 + strings.Count(text, " ") + strings.Count(text, "\t")
	atoms := make([]Atom, 0, 2*words)
	items := make([]Item, 0, words)
	assigns := make([]Assign, 0, words)
	values := make([]Value, 0, strings.Count(text, "="))
	card := &ElementCard{Items: make([]*Item, 0, words)}
	for k := 0; k < len(text); {
		if separator(text[k]) {
			k++
			continue
		}
		start := k
		for k < len(text) && !separator(text[k]) && text[k] != '=' {
			k++
		}
		if k == start {
			return nil // an equals sign without a name before it
		}
		atoms = append(atoms, atomAt(text, start, k))
		if k < len(text) && text[k] == '=' {
			from := k + 1
			for k = from; k < len(text) && !separator(text[k]) && text[k] != '='; k++ {
			}
			if k == from || k < len(text) && text[k] == '=' || len(atoms) == 1 {
				return nil // spaced or doubled: for the grammar
			}
			atoms = append(atoms, atomAt(text, from, k))
			values = append(values, Value{Atom: &atoms[len(atoms)-1]})
			assigns = append(assigns, Assign{Key: &atoms[len(atoms)-2], Value: &values[len(values)-1]})
			items = append(items, Item{Assign: &assigns[len(assigns)-1]})
			card.Items = append(card.Items, &items[len(items)-1])
			continue
		}
		if strings.HasPrefix(strings.TrimLeft(text[k:], " \t"), "=") {
			return nil
		}
		if card.Name == nil {
			card.Name = &atoms[len(atoms)-1]
			continue
		}
		assigns = append(assigns, Assign{Key: &atoms[len(atoms)-1]})
		items = append(items, Item{Assign: &assigns[len(assigns)-1]})
		card.Items = append(card.Items, &items[len(items)-1])
	}
	if card.Name == nil {
		return nil
	}
	return card
}

// ParseDirective parses a logical line as a dot card.
func ParseDirective(l *Line) (*DirectiveCard, *Diagnostic) { return parseCard(directiveParser, l) }

func parseCard[T any](p *participle.Parser[T], l *Line) (*T, *Diagnostic) {
	if at := tooDeep(l.Text); at >= 0 {
		return nil, &Diagnostic{At: l.Position(at), What: "more than 100 brackets within one another", Expected: "a flatter card"}
	}
	card, err := p.ParseString("", l.Text)
	if err == nil {
		return card, nil
	}
	d := &Diagnostic{At: l.Start(), What: err.Error()}
	if pe, ok := err.(participle.Error); ok {
		d.At = l.Position(pe.Position().Offset)
		d.What = pe.Message()
	}
	explain(d, l, err)
	return nil, d
}

// explain puts the parser's error into plain words.
func explain(d *Diagnostic, l *Line, err error) {
	token := ""
	if u, ok := err.(*participle.UnexpectedTokenError); ok {
		token = u.Unexpected.Value
		if u.Unexpected.EOF() {
			d.What, d.Expected = "the card ends too early", "the closing bracket or the value behind ="
			return
		}
	}
	switch {
	case token == "":
	case token[0] == '"' || token[0] == '\'' || token[0] == '{':
		d.What, d.Expected = "a "+token[:1]+" is not closed", "its partner before the end of the card"
	case token == ")" || token == "}":
		d.What, d.Expected = "a "+token+" without its opening bracket", "a name or a value"
	case token == "=":
		d.What, d.Expected = "an = without a name before it", "KEY=value"
	default:
		d.What, d.Expected = "unexpected "+quoteShort(token), "a name, a value or KEY=value"
	}
}

func quoteShort(s string) string {
	if len(s) > 40 {
		s = s[:37] + "..."
	}
	return "`" + strings.ToValidUTF8(s, "?") + "`"
}

// tooDeep returns the offset at which brackets nest deeper than MaxDepth, or -1.
func tooDeep(text string) int {
	depth := 0
	for k := 0; k < len(text); k++ {
		switch text[k] {
		case '(', '{':
			if depth++; depth > MaxDepth {
				return k
			}
		case ')', '}':
			depth--
		}
	}
	return -1
}
