package syntax

import (
	"io"
	"strings"

	"github.com/alecthomas/participle/v2/lexer"
)

// Kinds of token in a formula.
const (
	formulaNumber  lexer.TokenType = iota + 1 // 4.7k, 1e-3, .5meg
	formulaName                               // a parameter or function
	formulaProbe                              // V(a), V(a,b), I(V1), as one token
	formulaOp                                 // an operator or bracket
	formulaInvalid                            // anything else
)

// formulaLexer cuts a formula into tokens. It is total.
type formulaLexer struct{}

// Symbols names the kinds of token for the grammar.
func (formulaLexer) Symbols() map[string]lexer.TokenType {
	return map[string]lexer.TokenType{"EOF": lexer.EOF, "Number": formulaNumber, "Name": formulaName,
		"Probe": formulaProbe, "Op": formulaOp, "Invalid": formulaInvalid}
}

// Lex reads one formula.
func (formulaLexer) Lex(filename string, r io.Reader) (lexer.Lexer, error) {
	text, err := io.ReadAll(r)
	return &formulaTokens{text: string(text)}, err
}

type formulaTokens struct {
	text string
	at   int
}

// Next returns the next token; after the last one, EOF without end.
func (l *formulaTokens) Next() (lexer.Token, error) {
	for l.at < len(l.text) && (separator(l.text[l.at]) || l.text[l.at] == '\n') {
		l.at++
	}
	pos := lexer.Position{Offset: l.at, Line: 1, Column: l.at + 1}
	if l.at >= len(l.text) {
		return lexer.EOFToken(pos), nil
	}
	kind, size := classifyFormula(l.text[l.at:])
	token := lexer.Token{Type: kind, Value: l.text[l.at : l.at+size], Pos: pos}
	l.at += size
	return token, nil
}

func classifyFormula(text string) (lexer.TokenType, int) {
	c := text[0]
	switch {
	case c >= '0' && c <= '9' || c == '.' && len(text) > 1 && text[1] >= '0' && text[1] <= '9':
		return formulaNumber, numberLength(text)
	case nameStart(c):
		size := 1
		for size < len(text) && (nameStart(text[size]) || text[size] >= '0' && text[size] <= '9' || text[size] == '.' || text[size] == '#') {
			size++
		}
		if word := strings.ToLower(text[:size]); (word == "v" || word == "i") && size < len(text) && text[size] == '(' {
			if end := probeEnd(text[size:]); end > 0 {
				return formulaProbe, size + end
			}
			return formulaInvalid, len(text)
		}
		return formulaName, size
	}
	if len(text) > 1 {
		switch text[:2] {
		case "**", "<=", ">=", "==", "!=", "&&", "||":
			return formulaOp, 2
		}
	}
	if strings.IndexByte("+-*/^(){}<>,?:!&|%", c) >= 0 {
		return formulaOp, 1
	}
	return formulaInvalid, 1
}

// probeEnd measures the brackets of a probe; names of nodes may carry brackets of their own: V(Net-(D1-K)).
func probeEnd(text string) int {
	depth := 0
	for k := 0; k < len(text); k++ {
		switch text[k] {
		case '(':
			depth++
		case ')':
			if depth--; depth == 0 {
				return k + 1
			}
		}
	}
	return 0
}

func nameStart(c byte) bool {
	return c >= 'a' && c <= 'z' || c >= 'A' && c <= 'Z' || c == '_' || c == '$' || c == '@' || c >= 0x80
}

// numberLength measures digits, point, exponent, scale factor and unit letters.
func numberLength(text string) int {
	k := 0
	digits := func() {
		for k < len(text) && text[k] >= '0' && text[k] <= '9' {
			k++
		}
	}
	digits()
	if k < len(text) && text[k] == '.' {
		k++
		digits()
	}
	if k < len(text) && (text[k] == 'e' || text[k] == 'E') {
		e := k + 1
		if e < len(text) && (text[e] == '+' || text[e] == '-') {
			e++
		}
		if e < len(text) && text[e] >= '0' && text[e] <= '9' {
			k = e
			digits()
		}
	}
	for k < len(text) && (nameStart(text[k]) && text[k] != '$' || text[k] >= '0' && text[k] <= '9') {
		k++
	}
	return k
}
