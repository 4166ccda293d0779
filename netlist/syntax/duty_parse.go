package syntax

import (
	"errors"
	"strconv"
	"strings"

	"github.com/alecthomas/participle/v2"
	"github.com/alecthomas/participle/v2/lexer"
)

// dutyForm is one kind of statement: its keyword, how it is written, and its parser.
type dutyForm struct {
	keyword string
	usage   string
	parse   func(lex *lexer.PeekingLexer) (Statement, error)
}

// dutyForms in the order of the reference.
var dutyForms = []dutyForm{
	form[LineStatement]("line", "line [SOURCE] 230V [207V..253V or -10%..+10%] [50Hz]"),
	form[WindingStatement]("winding", "winding SOURCE 12V 1.5A regulation=12%, or winding SOURCE as-drawn"),
	form[AmbientStatement]("ambient", "ambient 0C..45C"),
	form[LoadStatement]("load", "load ELEMENT 0A..0.6A, or in ohms 20Ohm..open"),
	form[PartStatement]("part", "part ELEMENT TYPE [pins=in,gnd,out]"),
	form[RateStatement]("rate", "rate ELEMENT SYMBOL=VALUE ..."),
	form[CoolingStatement]("cooling", "cooling ELEMENT 6K/W"),
	form[RailStatement]("rail", "rail NODE 11.4V..12.6V [ripple=10mV]"),
	form[PolicyStatement]("policy", "policy NAME"),
	form[LifeStatement]("life", "life 40000h"),
	form[ProfileStatement]("profile", "profile NAME, or profile 60V 2s"),
	form[ConcessionStatement]("concession", `concession CHECK ELEMENT up to 460V until 2027-03-31 "reason"`),
}

// form builds the parser of one statement type.
func form[S any, P interface {
	*S
	Statement
}](keyword, usage string) dutyForm {
	parser := participle.MustBuild[S](participle.Lexer(dutyLexer{}), participle.CaseInsensitive("Word"), participle.UseLookahead(2))
	return dutyForm{keyword, usage, func(lex *lexer.PeekingLexer) (Statement, error) {
		statement, err := parser.ParseFromLexer(lex)
		return P(statement), err
	}}
}

// DutyKeywords lists the words a statement may begin with, in the order of the reference.
func DutyKeywords() []string {
	var words []string
	for _, f := range dutyForms {
		words = append(words, f.keyword)
	}
	return words
}

// DutyUsage is how a statement is written, for messages; empty for an unknown keyword.
func DutyUsage(keyword string) string {
	for _, f := range dutyForms {
		if f.keyword == keyword {
			return f.usage
		}
	}
	return ""
}

// ParseDuty reads one statement of a duty sheet; at is the place of its first character. A blank line or a
// comment gives a nil statement. The diagnostic, if any, stands at the word that does not fit.
func ParseDuty(text string, at Position) (Statement, *Diagnostic) {
	if len(text) > MaxDutyLine {
		return nil, &Diagnostic{At: at, What: "the statement has " + strconv.Itoa(len(text)) + " bytes",
			Expected: "at most " + strconv.Itoa(MaxDutyLine)}
	}
	start := lexer.Position{Filename: at.File, Line: at.Line, Column: at.Column}
	tokens, err := lexer.Upgrade(&dutyTokens{text: text, at: start})
	if err != nil {
		return nil, &Diagnostic{At: at, What: err.Error()}
	}
	first := *tokens.Peek()
	if first.EOF() {
		return nil, nil
	}
	if bad := invalidToken(text, start); bad != nil {
		return nil, bad
	}
	keyword := strings.ToLower(first.Value)
	for _, f := range dutyForms {
		if f.keyword != keyword {
			continue
		}
		statement, err := f.parse(tokens)
		if err != nil {
			return nil, explainDuty(f, err)
		}
		return statement, nil
	}
	d := &Diagnostic{At: PositionOf(first.Pos), What: "no statement begins with " + strconv.Quote(first.Value),
		Expected: "one of " + strings.Join(DutyKeywords(), ", ")}
	if near, ok := Nearest(keyword, DutyKeywords()); ok {
		d.Expected = near
	}
	return nil, d
}

// invalidToken finds the first token that no statement can hold.
func invalidToken(text string, start lexer.Position) *Diagnostic {
	tokens := dutyTokens{text: text, at: start}
	for {
		token, _ := tokens.Next()
		switch {
		case token.EOF():
			return nil
		case token.Type == dutyInvalid && token.Value[0] == '"':
			return &Diagnostic{At: PositionOf(token.Pos), What: "the quotation mark is not closed", Expected: `a second "`}
		case token.Type == dutyInvalid:
			return &Diagnostic{At: PositionOf(token.Pos), What: "a character that is no text: " + strconv.QuoteToASCII(token.Value)}
		}
	}
}

// explainDuty turns a parse error into a diagnostic that shows how the statement is written.
func explainDuty(f dutyForm, err error) *Diagnostic {
	var unexpected *participle.UnexpectedTokenError
	if errors.As(err, &unexpected) {
		token := unexpected.Unexpected
		what := strconv.Quote(token.Value) + " does not fit here"
		if token.EOF() {
			what = "the statement ends too early"
		}
		return &Diagnostic{At: PositionOf(token.Pos), What: what, Expected: f.usage}
	}
	d := &Diagnostic{What: "not understood", Expected: f.usage}
	if at, ok := err.(participle.Error); ok {
		d.At, d.What = PositionOf(at.Position()), at.Message()
	}
	return d
}
