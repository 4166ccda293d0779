package report

import (
	"io"
	"strings"

	"railproof/checks"
	"railproof/netlist"
)

// SettingsSchema names the layout of the JSON settings.
const SettingsSchema = "railproof-settings/1"

// Settings is what a netlist is judged under, each statement with the place it comes from.
type Settings struct{ of *checks.Settings }

// NewSettings takes the settings of a netlist.
func NewSettings(s *checks.Settings) *Settings { return &Settings{s} }

// SettingsFormats names the formats of settings, the default first.
func SettingsFormats() []string { return []string{"text", "json"} }

// Write writes the settings in a named format.
func (s *Settings) Write(w io.Writer, name string, style Style) error {
	switch name {
	case "text":
		return s.WriteText(w, style.Colour)
	case "json":
		return s.WriteJSON(w)
	}
	return unknownFormat(name, SettingsFormats())
}

// WriteText writes the settings for people.
func (s *Settings) WriteText(w io.Writer, colour bool) error {
	l := &ledger{palette: newPalette(colour)}
	l.line(strings.TrimRight(l.strong.Sprint(printable(slashed(s.of.File)))+"   "+printable(ownTitle(s.of.Title)), " "))
	shared := "no shared sheet"
	if s.of.SharedSheet != "" {
		shared = "under the shared sheet " + slashed(s.of.SharedSheet)
	}
	l.hang("", "", shared)
	l.section("In force")
	l.statements(s.of.Stated)
	if len(s.of.Defaults) > 0 {
		l.section("Assumed, because nothing was stated")
		for _, text := range foldAssumptions(&File{Assumptions: s.of.Defaults}) {
			l.hang("  ", "    ", text)
		}
	}
	if len(s.of.Remarks) > 0 {
		l.section("To know")
		for _, text := range foldAssumptions(&File{Assumptions: s.of.Remarks}) {
			l.hang("  ", "    ", text)
		}
	}
	if len(s.of.Idle) > 0 {
		l.section("Of the shared sheet, without effect here")
		for _, i := range s.of.Idle {
			l.beside(i.Text, stands(i.At)+": "+i.Why)
		}
	}
	l.line("")
	l.hang("", "", "parts tables "+s.of.PartsVersion+", policy "+s.of.PolicyVersion)
	_, err := io.WriteString(w, l.out.String())
	return err
}

func (l *ledger) statements(list []checks.Setting) {
	if len(list) == 0 {
		l.line("  nothing is stated; `railproof draft` writes what to fill in")
		return
	}
	for _, s := range list {
		l.beside(s.Text, joinWith(s.Origin, stands(s.At), " "))
	}
}

// besideColumn is where the origin of a statement begins.
const besideColumn = 40

// beside writes a statement and what is to be said of it, on one line if the statement leaves room.
func (l *ledger) beside(statement, remark string) {
	lead := "  " + printable(statement)
	if pad := besideColumn - columns(lead); pad >= 2 {
		lead += strings.Repeat(" ", pad)
	} else {
		l.hang("  ", "      ", statement)
		lead = strings.Repeat(" ", besideColumn)
	}
	l.hang(lead, strings.Repeat(" ", besideColumn), remark)
}

func stands(p netlist.Position) string {
	if p.Line == 0 {
		return ""
	}
	p.File = slashed(p.File)
	return p.String()
}

type jsonSettings struct {
	Schema      string           `json:"schema"`
	File        string           `json:"file"`
	SharedSheet *string          `json:"shared_sheet"`
	Tables      jsonTables       `json:"tables"`
	Stated      []jsonSetting    `json:"stated"`
	Defaults    []jsonAssumption `json:"defaults"`
	Remarks     []jsonAssumption `json:"remarks"`
	Idle        []jsonIdle       `json:"idle"`
}

type jsonSetting struct {
	Statement string     `json:"statement"`
	From      string     `json:"from"`
	At        *jsonPlace `json:"at"`
}

type jsonIdle struct {
	Statement string     `json:"statement"`
	At        *jsonPlace `json:"at"`
	Why       string     `json:"why"`
}

// WriteJSON writes the settings as one JSON document of SettingsSchema; SCHEMA.md describes it.
func (s *Settings) WriteJSON(w io.Writer) error {
	d := jsonSettings{
		Schema: SettingsSchema, File: slashed(s.of.File), Tables: jsonTables{s.of.PartsVersion, s.of.PolicyVersion},
		Stated: []jsonSetting{}, Defaults: []jsonAssumption{}, Remarks: []jsonAssumption{}, Idle: []jsonIdle{},
	}
	if s.of.SharedSheet != "" {
		shared := slashed(s.of.SharedSheet)
		d.SharedSheet = &shared
	}
	for _, one := range s.of.Stated {
		d.Stated = append(d.Stated, jsonSetting{one.Text, one.Origin, place(one.At)})
	}
	for _, a := range s.of.Defaults {
		d.Defaults = append(d.Defaults, jsonAssumption(a))
	}
	for _, a := range s.of.Remarks {
		d.Remarks = append(d.Remarks, jsonAssumption(a))
	}
	for _, i := range s.of.Idle {
		d.Idle = append(d.Idle, jsonIdle{i.Text, place(i.At), i.Why})
	}
	return encode(w, d)
}
