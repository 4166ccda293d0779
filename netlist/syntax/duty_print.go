package syntax

import (
	"strings"

	"github.com/alecthomas/participle/v2/lexer"
)

// PrintDuty writes a statement in its canonical form, without a line end. ParseDuty reads it back to the
// same statement.
func PrintDuty(statement Statement) string {
	var p dutyPrinter
	switch s := statement.(type) {
	case *LineStatement:
		p.word("line")
		if s.Source != nil {
			p.name(s.Source.Raw)
		}
		p.word(s.Nominal.Raw)
		if s.Range != nil {
			p.word(s.Range.Raw)
		}
		if s.Frequency != nil {
			p.word(s.Frequency.Raw)
		}
	case *WindingStatement:
		p.word("winding")
		p.name(s.Source.Raw)
		if s.AsDrawn {
			p.word("as-drawn")
			break
		}
		p.word(s.Voltage.Raw)
		p.word(s.Current.Raw)
		p.settings(s.Settings)
	case *AmbientStatement:
		p.word("ambient", s.Range.Raw)
	case *LoadStatement:
		p.word("load", s.Elements.Raw, s.Range.Raw)
	case *PartStatement:
		p.word("part", s.Elements.Raw, s.Type.Raw)
		p.settings(s.Settings)
	case *RateStatement:
		p.word("rate", s.Elements.Raw)
		p.settings(s.Settings)
	case *CoolingStatement:
		p.word("cooling", s.Elements.Raw, s.Value.Raw)
	case *RailStatement:
		p.word("rail", s.Node.Raw, s.Range.Raw)
		if s.Percent != nil {
			p.word(s.Percent.Raw)
		}
		p.settings(s.Settings)
	case *PolicyStatement:
		p.word("policy", s.Name.Raw)
	case *LifeStatement:
		p.word("life", s.Value.Raw)
	case *ProfileStatement:
		p.word("profile")
		if s.Name != nil {
			p.name(s.Name.Raw)
			break
		}
		p.word(s.Voltage.Raw, s.Time.Raw)
	case *ConcessionStatement:
		p.word("concession")
		p.name(s.Check.Raw)
		p.word(s.Element.Raw, "up", "to", s.Ceiling.Raw, "until", s.Until.Raw, s.Reason)
	}
	return p.text.String()
}

// dutyPrinter puts words together, one space between them.
type dutyPrinter struct{ text strings.Builder }

func (p *dutyPrinter) word(words ...string) {
	for _, w := range words {
		if p.text.Len() > 0 {
			p.text.WriteByte(' ')
		}
		p.text.WriteString(w)
	}
}

// name writes a name, in quotation marks only where it needs them.
func (p *dutyPrinter) name(raw string) {
	if bare := unquote(raw); aloneAs(bare) == dutyWord {
		raw = bare
	}
	p.word(raw)
}

// aloneAs is the kind of token that a text is by itself, dutyInvalid if it is not exactly one.
func aloneAs(text string) lexer.TokenType {
	if text == "" || strings.ContainsRune("# \t\r", rune(text[0])) {
		return dutyInvalid
	}
	kind, size := classifyDuty(text)
	if size != len(text) {
		return dutyInvalid
	}
	return kind
}

func (p *dutyPrinter) settings(list []Setting) {
	for _, s := range list {
		p.word(s.Key + "=" + s.Value.Raw)
	}
}

// DutyString puts a text in quotation marks if it could not stand as one word of a statement.
func DutyString(text string) string {
	switch aloneAs(text) {
	case dutyWord, dutyFigure, dutyRange:
		return text
	}
	return `"` + text + `"`
}

var _ lexer.Definition = dutyLexer{}
