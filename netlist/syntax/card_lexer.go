package syntax

import (
	"io"
	"strings"

	"github.com/alecthomas/participle/v2/lexer"
)

// Kinds of token in a card.
const (
	cardWord    lexer.TokenType = iota + 1 // a name, a number, a node: anything without blanks
	cardString                             // "quoted text", with its quotation marks
	cardBraced                             // {expression} or 'expression', with its marks
	cardPunct                              // ( ) , =
	cardInvalid                            // a mark that is not closed, a control character
)

// cardLexer cuts one logical line into tokens. It is total: what is wrong becomes an invalid token.
type cardLexer struct{}

// Symbols names the kinds of token for the grammar.
func (cardLexer) Symbols() map[string]lexer.TokenType {
	return map[string]lexer.TokenType{"EOF": lexer.EOF, "Word": cardWord, "String": cardString,
		"Braced": cardBraced, "Punct": cardPunct, "Invalid": cardInvalid}
}

// Lex reads one logical line; offsets in its tokens are byte offsets into the line.
func (cardLexer) Lex(filename string, r io.Reader) (lexer.Lexer, error) {
	text, err := io.ReadAll(r)
	return &cardTokens{text: string(text), file: filename}, err
}

// LexString is Lex without a copy.
func (cardLexer) LexString(filename string, text string) (lexer.Lexer, error) {
	return &cardTokens{text: text, file: filename}, nil
}

type cardTokens struct {
	file string
	text string
	at   int
}

// Next returns the next token; after the last one, EOF without end.
func (l *cardTokens) Next() (lexer.Token, error) {
	for l.at < len(l.text) && separator(l.text[l.at]) {
		l.at++
	}
	pos := lexer.Position{Filename: l.file, Offset: l.at, Line: 1, Column: l.at + 1}
	if l.at >= len(l.text) {
		return lexer.EOFToken(pos), nil
	}
	kind, size := classifyCard(l.text[l.at:], l.at == 0 && l.text[0] != '.')
	token := lexer.Token{Type: kind, Value: l.text[l.at : l.at+size], Pos: pos}
	l.at += size
	return token, nil
}

// separator reports a blank; non-breaking blanks arrive as U+00A0 and are blanks too where they stand alone.
func separator(c byte) bool { return c == ' ' || c == '\t' || c == '\v' || c == '\f' || c == 0 }

// classifyCard measures the token that begins a text; named says that it is the name of an element.
func classifyCard(text string, named bool) (lexer.TokenType, int) {
	switch c := text[0]; c {
	case '(', ')', ',', '=':
		return cardPunct, 1
	case '"':
		if end := strings.IndexByte(text[1:], '"'); end >= 0 {
			return cardString, end + 2
		}
		return cardInvalid, len(text)
	case '\'':
		if end := strings.IndexByte(text[1:], '\''); end >= 0 {
			return cardBraced, end + 2
		}
		return cardInvalid, len(text)
	case '{':
		if end := closing(text); end > 0 {
			return cardBraced, end
		}
		return cardInvalid, len(text)
	case '}':
		return cardInvalid, 1
	}
	return cardWord, wordLength(text, named)
}

// closing returns the length of a braced text with its closing brace, 0 if it is not closed.
func closing(text string) int {
	depth := 0
	for k := 0; k < len(text); k++ {
		switch text[k] {
		case '{':
			depth++
		case '}':
			if depth--; depth == 0 {
				return k + 1
			}
		}
	}
	return 0
}

// wordLength measures a word. Names of exports carry parentheses: `Net-(D1-K)`, `R(PULL)3`. A parenthesis
// belongs to the word if it follows - or / or _ inside it, or if what follows its closing one goes on without
// a blank, or if it touches the name of an element: `R(x)`. SIN(0 and dc(48) are a keyword and a bracket.
func wordLength(text string, named bool) int {
	for k := 0; k < len(text); k++ {
		switch text[k] {
		case ' ', '\t', '\v', '\f', 0, ',', '=', ')', '{', '"', '\'':
			return k
		case '}':
			return k
		case '(':
			end := strings.IndexAny(text[k:], ") \t,=")
			if end < 0 || text[k+end] != ')' {
				return k
			}
			after := k + end + 1
			glued := after < len(text) && !separator(text[after]) && !strings.ContainsRune(",=(){}'\"", rune(text[after]))
			if k == 0 || !(named || strings.ContainsRune("-/_", rune(text[k-1])) || glued) {
				return k
			}
			k += end
		}
	}
	return len(text)
}
