package syntax

import "github.com/alecthomas/participle/v2/lexer"

// Statement is one statement of a duty sheet. The concrete types below are the only ones.
// Values are kept as written; what they mean is decided by package netlist.
type Statement interface {
	// Place is where the statement begins.
	Place() Position
}

// Token is a word of a statement with its place. String quotation marks are kept in Raw.
type Token struct {
	Pos lexer.Position
	Raw string `parser:"@(Word | Figure | Range | String)"`
}

// Figure is a word that begins like a number, or the word open.
type Figure struct {
	Pos lexer.Position
	Raw string `parser:"@(Figure | Range | 'open')"`
}

// Single is a figure without a range.
type Single struct {
	Pos lexer.Position
	Raw string `parser:"@Figure"`
}

// Span is a figure LOW..HIGH.
type Span struct {
	Pos lexer.Position
	Raw string `parser:"@Range"`
}

// Name is a word that does not begin like a number, or a quoted string.
type Name struct {
	Pos lexer.Position
	Raw string `parser:"@(Word | String)"`
}

// Setting is KEY=VALUE.
type Setting struct {
	Pos   lexer.Position
	Key   string `parser:"@Word '='"`
	Value Token  `parser:"@@"`
}

// LineStatement is `line [SOURCE] 230V [LOW..HIGH] [50Hz]`.
type LineStatement struct {
	Pos       lexer.Position
	Source    *Name   `parser:"'line' @@?"`
	Nominal   Single  `parser:"@@"`
	Range     *Span   `parser:"@@?"`
	Frequency *Single `parser:"@@?"`
}

// WindingStatement is `winding SOURCE as-drawn` or `winding SOURCE 12V 1.5A regulation=12%`.
type WindingStatement struct {
	Pos      lexer.Position
	Source   Name      `parser:"'winding' @@"`
	AsDrawn  bool      `parser:"( @'as-drawn'"`
	Voltage  *Single   `parser:"| @@"`
	Current  *Single   `parser:"  @@"`
	Settings []Setting `parser:"  @@* )"`
}

// AmbientStatement is `ambient 0C..45C`.
type AmbientStatement struct {
	Pos   lexer.Position
	Range Figure `parser:"'ambient' @@"`
}

// LoadStatement is `load ELEMENTS 0A..0.6A` or in ohms, `load RL 20Ohm..open`.
type LoadStatement struct {
	Pos      lexer.Position
	Elements Token  `parser:"'load' @@"`
	Range    Figure `parser:"@@"`
}

// PartStatement is `part ELEMENTS TYPE [pins=in,gnd,out]`.
type PartStatement struct {
	Pos      lexer.Position
	Elements Token     `parser:"'part' @@"`
	Type     Token     `parser:"@@"`
	Settings []Setting `parser:"@@*"`
}

// RateStatement is `rate ELEMENTS SYMBOL=VALUE ...`.
type RateStatement struct {
	Pos      lexer.Position
	Elements Token     `parser:"'rate' @@"`
	Settings []Setting `parser:"@@+"`
}

// CoolingStatement is `cooling ELEMENTS 6K/W`.
type CoolingStatement struct {
	Pos      lexer.Position
	Elements Token  `parser:"'cooling' @@"`
	Value    Single `parser:"@@"`
}

// RailStatement is `rail NODE 11.4V..12.6V [ripple=10mV]` or `rail NODE 12V -5%..+5%`.
type RailStatement struct {
	Pos      lexer.Position
	Node     Token     `parser:"'rail' @@"`
	Range    Figure    `parser:"@@"`
	Percent  *Span     `parser:"@@?"`
	Settings []Setting `parser:"@@*"`
}

// PolicyStatement is `policy NAME`.
type PolicyStatement struct {
	Pos  lexer.Position
	Name Token `parser:"'policy' @@"`
}

// LifeStatement is `life 40000h`.
type LifeStatement struct {
	Pos   lexer.Position
	Value Single `parser:"'life' @@"`
}

// ProfileStatement is `profile NAME` or `profile 60V 2s`: how fast a stored charge must be gone.
type ProfileStatement struct {
	Pos     lexer.Position
	Name    *Name   `parser:"'profile' ( @@"`
	Voltage *Single `parser:"| @@"`
	Time    *Single `parser:"  @@ )"`
}

// ConcessionStatement is `concession CHECK ELEMENT up to 460V until 2027-03-31 "reason"`.
type ConcessionStatement struct {
	Pos     lexer.Position
	Check   Name   `parser:"'concession' @@"`
	Element Token  `parser:"@@"`
	Ceiling Single `parser:"'up' 'to' @@"`
	Until   Single `parser:"'until' @@"`
	Reason  string `parser:"@String"`
}

// Places of the statements.

// Place is where the statement begins.
func (s *LineStatement) Place() Position { return PositionOf(s.Pos) }

// Place is where the statement begins.
func (s *WindingStatement) Place() Position { return PositionOf(s.Pos) }

// Place is where the statement begins.
func (s *AmbientStatement) Place() Position { return PositionOf(s.Pos) }

// Place is where the statement begins.
func (s *LoadStatement) Place() Position { return PositionOf(s.Pos) }

// Place is where the statement begins.
func (s *PartStatement) Place() Position { return PositionOf(s.Pos) }

// Place is where the statement begins.
func (s *RateStatement) Place() Position { return PositionOf(s.Pos) }

// Place is where the statement begins.
func (s *CoolingStatement) Place() Position { return PositionOf(s.Pos) }

// Place is where the statement begins.
func (s *RailStatement) Place() Position { return PositionOf(s.Pos) }

// Place is where the statement begins.
func (s *PolicyStatement) Place() Position { return PositionOf(s.Pos) }

// Place is where the statement begins.
func (s *LifeStatement) Place() Position { return PositionOf(s.Pos) }

// Place is where the statement begins.
func (s *ProfileStatement) Place() Position { return PositionOf(s.Pos) }

// Place is where the statement begins.
func (s *ConcessionStatement) Place() Position { return PositionOf(s.Pos) }

// PositionOf turns a position of the parsing library into ours.
func PositionOf(p lexer.Position) Position {
	return Position{File: p.Filename, Line: p.Line, Column: p.Column}
}

// Text is the word without quotation marks.
func (t Token) Text() string { return unquote(t.Raw) }

// Text is the name without quotation marks.
func (n Name) Text() string { return unquote(n.Raw) }

// At is where the token stands.
func (t Token) At() Position { return PositionOf(t.Pos) }

// At is where the figure stands.
func (f Figure) At() Position { return PositionOf(f.Pos) }

// At is where the figure stands.
func (s Single) At() Position { return PositionOf(s.Pos) }

// At is where the range stands.
func (s Span) At() Position { return PositionOf(s.Pos) }

// At is where the name stands.
func (n Name) At() Position { return PositionOf(n.Pos) }

// At is where the key stands.
func (s Setting) At() Position { return PositionOf(s.Pos) }

func unquote(raw string) string {
	if len(raw) >= 2 && raw[0] == '"' {
		return raw[1 : len(raw)-1]
	}
	return raw
}
