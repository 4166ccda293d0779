package syntax

import (
	"io"
	"strings"
	"unicode/utf8"

	"github.com/alecthomas/participle/v2/lexer"
)

// MaxDutyLine is the longest duty statement that is read, in bytes.
const MaxDutyLine = 4096

// Kinds of token in a duty statement.
const (
	dutyWord    lexer.TokenType = iota + 1 // a name: D1, D1..D4, VRRM, as-drawn
	dutyFigure                             // begins like a number: 25V, 7812, 2027-03-31
	dutyRange                              // a figure with .. inside: 0C..45C
	dutyString                             // "D1,D3", with its quotation marks
	dutyEquals                             // =
	dutyInvalid                            // a quotation mark that is not closed, a control character
)

// dutyLexer cuts one duty statement into tokens. It is total: what is wrong becomes an invalid token.
type dutyLexer struct{}

// Symbols names the kinds of token for the grammar.
func (dutyLexer) Symbols() map[string]lexer.TokenType {
	return map[string]lexer.TokenType{"EOF": lexer.EOF, "Word": dutyWord, "Figure": dutyFigure,
		"Range": dutyRange, "String": dutyString, "Equals": dutyEquals, "Invalid": dutyInvalid}
}

// Lex reads one statement that begins at line 1, column 1.
func (dutyLexer) Lex(filename string, r io.Reader) (lexer.Lexer, error) {
	text, err := io.ReadAll(r)
	return &dutyTokens{text: string(text), at: lexer.Position{Filename: filename, Line: 1, Column: 1}}, err
}

// dutyTokens is the state of the lexer within one statement.
type dutyTokens struct {
	text string
	at   lexer.Position // of the first character not yet read
}

// Next returns the next token; after the last one, EOF without end.
func (l *dutyTokens) Next() (lexer.Token, error) {
	for l.text != "" && (l.text[0] == ' ' || l.text[0] == '\t' || l.text[0] == '\r') {
		l.take(1)
	}
	if l.text == "" || l.text[0] == '#' {
		return lexer.EOFToken(l.at), nil
	}
	kind, size := classifyDuty(l.text)
	token := lexer.Token{Type: kind, Value: l.text[:size], Pos: l.at}
	l.take(size)
	return token, nil
}

func (l *dutyTokens) take(size int) {
	l.at.Column += utf8.RuneCountInString(l.text[:size])
	l.at.Offset += size
	l.text = l.text[size:]
}

// classifyDuty finds the kind and length of the token at the start of the text, which is no blank.
func classifyDuty(text string) (lexer.TokenType, int) {
	switch {
	case text[0] == '=':
		return dutyEquals, 1
	case text[0] == '"':
		if end := strings.IndexByte(text[1:], '"'); end >= 0 {
			return dutyString, end + 2
		}
		return dutyInvalid, len(text)
	}
	size := strings.IndexAny(text, " \t\r=\"")
	if size < 0 {
		size = len(text)
	}
	word := text[:size]
	switch {
	case strings.ContainsFunc(word, func(r rune) bool { return r < ' ' || r == 0x7f || r == utf8.RuneError }):
		return dutyInvalid, size
	case !beginsLikeNumber(word):
		return dutyWord, size
	case strings.Contains(word, ".."):
		return dutyRange, size
	}
	return dutyFigure, size
}

// beginsLikeNumber reports whether a word starts with digits, after a sign and a point at most.
func beginsLikeNumber(word string) bool {
	word = strings.TrimPrefix(strings.TrimLeft(word[:1], "+-")+word[1:], ".")
	return word != "" && word[0] >= '0' && word[0] <= '9'
}
