package report

import (
	"encoding/json"
	"io"
	"math"
	"strconv"

	"railproof/checks"
	"railproof/checks/study"
	"railproof/netlist"
)

// ReportSchema names the layout of the JSON report; it changes only when a reader would break.
const ReportSchema = "railproof-report/1"

// number is a float of the JSON documents: ten significant digits, and null where there is no finite value.
type number float64

// jsonDigits is how many significant digits a JSON number has.
const jsonDigits = 10

// MarshalJSON implements json.Marshaler.
func (n number) MarshalJSON() ([]byte, error) {
	v := float64(n)
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return []byte("null"), nil
	}
	if v == 0 {
		return []byte("0"), nil // a negative zero too
	}
	rounded, err := strconv.ParseFloat(strconv.FormatFloat(v, 'g', jsonDigits, 64), 64)
	if err != nil {
		return nil, err
	}
	return json.Marshal(rounded)
}

// UnmarshalJSON implements json.Unmarshaler; null is NaN.
func (n *number) UnmarshalJSON(text []byte) error {
	if string(text) == "null" {
		*n = number(math.NaN())
		return nil
	}
	var v float64
	if err := json.Unmarshal(text, &v); err != nil {
		return err
	}
	*n = number(v)
	return nil
}

type jsonReport struct {
	Schema string     `json:"schema"`
	Tool   jsonTool   `json:"tool"`
	Files  []jsonFile `json:"files"`
	Totals jsonTotals `json:"totals"`
	Gate   jsonGate   `json:"gate"`
	Exit   Exit       `json:"exit"`
}

type jsonTool struct {
	Name    string `json:"name"`
	Version string `json:"version"`
}

type jsonTotals struct {
	Critical int `json:"critical"`
	Major    int `json:"major"`
	Minor    int `json:"minor"`
	Unproven int `json:"unproven"`
	Proven   int `json:"proven"`
	Conceded int `json:"conceded"`
}

type jsonGate struct {
	At     []checks.Severity `json:"at"`
	Passed bool              `json:"passed"`
}

type jsonFile struct {
	File        string           `json:"file"`
	Title       string           `json:"title"`
	RailMap     []string         `json:"rail_map"`
	Conditions  jsonConditions   `json:"conditions"`
	Tables      jsonTables       `json:"tables"`
	SharedSheet string           `json:"shared_sheet,omitempty"`
	Findings    []jsonFinding    `json:"findings"`
	Assumptions []jsonAssumption `json:"assumptions"`
	NotRead     []string         `json:"not_read"`
	Diagnostics []jsonDiagnostic `json:"diagnostics"`
}

type jsonConditions struct {
	Line    string `json:"line"`
	Load    string `json:"load"`
	Ambient string `json:"ambient"`
	Policy  string `json:"policy"`
}

type jsonTables struct {
	Parts  string `json:"parts"`
	Policy string `json:"policy"`
}

type jsonFinding struct {
	Check       string          `json:"check"`
	Headline    bool            `json:"headline"`
	Element     string          `json:"element"`
	Verdict     checks.Verdict  `json:"verdict"`
	Severity    *string         `json:"severity"`
	Stress      *jsonStress     `json:"stress"`
	Rating      *jsonRating     `json:"rating"`
	Limit       *jsonLimit      `json:"limit"`
	Margin      number          `json:"margin"`
	At          *jsonPlace      `json:"at"`
	Needs       *jsonNeeds      `json:"needs"`
	Reason      string          `json:"reason"`
	Note        string          `json:"note"`
	Remedy      string          `json:"remedy"`
	Fingerprint string          `json:"fingerprint"`
	Concession  *jsonConcession `json:"concession"`
	Baseline    State           `json:"baseline,omitempty"`
}

type jsonStress struct {
	Quantity  study.Quantity `json:"quantity"`
	Value     number         `json:"value"`
	Unit      string         `json:"unit"`
	Error     number         `json:"error"`
	Condition jsonCondition  `json:"condition"`
	Phase     number         `json:"phase_s"`
	Unproven  string         `json:"unproven,omitempty"`
}

type jsonCondition struct {
	Name  string   `json:"name"`
	Line  string   `json:"line"`
	Load  string   `json:"load"`
	Start string   `json:"start"`
	Also  []string `json:"also,omitempty"`
}

type jsonRating struct {
	Symbol     netlist.Symbol `json:"symbol"`
	Value      number         `json:"value"`
	Unit       string         `json:"unit"`
	Origin     string         `json:"origin"`
	Source     string         `json:"source"`
	Confidence string         `json:"confidence"`
}

type jsonLimit struct {
	Value  number `json:"value"`
	Bound  string `json:"bound"` // "at most" or "at least"
	Policy string `json:"policy"`
	Factor number `json:"factor"`
	Rule   string `json:"rule"`
	Source string `json:"source"`
}

type jsonPlace struct {
	File   string `json:"file"`
	Line   int    `json:"line"`
	Column int    `json:"column"`
}

type jsonNeeds struct {
	Symbol       netlist.Symbol `json:"symbol,omitempty"`
	Value        *number        `json:"value,omitempty"`
	Unit         *string        `json:"unit,omitempty"`
	Bound        string         `json:"bound,omitempty"`
	NextStandard *number        `json:"next_standard,omitempty"`
	Statement    string         `json:"statement,omitempty"`
}

type jsonConcession struct {
	Ceiling number     `json:"ceiling"`
	Unit    string     `json:"unit"`
	Until   string     `json:"until"`
	Reason  string     `json:"reason"`
	At      *jsonPlace `json:"at"`
}

type jsonAssumption struct {
	About  string `json:"about"`
	Value  string `json:"value"`
	Source string `json:"source"`
}

type jsonDiagnostic struct {
	At       *jsonPlace `json:"at"`
	What     string     `json:"what"`
	Expected string     `json:"expected"`
}

// WriteJSON writes the report as one JSON document of ReportSchema; SCHEMA.md describes it.
func (r *Report) WriteJSON(w io.Writer) error {
	d := jsonReport{
		Schema: ReportSchema, Tool: jsonTool{"railproof", r.Version}, Files: []jsonFile{},
		Totals: jsonTotals{r.Totals.Critical, r.Totals.Major, r.Totals.Minor, r.Totals.Unproven, r.Totals.Proven, r.Totals.Conceded},
		Gate:   jsonGate{append([]checks.Severity{}, r.Gate.At...), r.Gate.Passed}, Exit: r.Exit,
	}
	for k := range r.Files {
		d.Files = append(d.Files, toJSONFile(&r.Files[k]))
	}
	return encode(w, d)
}

func encode(w io.Writer, d any) error {
	e := json.NewEncoder(w)
	e.SetEscapeHTML(false)
	e.SetIndent("", " ")
	return e.Encode(d)
}

func toJSONFile(f *File) jsonFile {
	j := jsonFile{
		File: f.Name, Title: f.Title, RailMap: append([]string{}, f.RailMap...),
		Conditions: jsonConditions(f.Circumstances), Tables: jsonTables{f.PartsVersion, f.PolicyVersion}, SharedSheet: f.SharedSheet,
		Findings: []jsonFinding{}, Assumptions: []jsonAssumption{}, NotRead: append([]string{}, f.NotRead...),
		Diagnostics: []jsonDiagnostic{},
	}
	for k := range f.Findings {
		j.Findings = append(j.Findings, toJSONFinding(&f.Findings[k]))
	}
	for _, a := range f.Assumptions {
		j.Assumptions = append(j.Assumptions, jsonAssumption(a))
	}
	for _, d := range f.Diagnostics {
		j.Diagnostics = append(j.Diagnostics, jsonDiagnostic{place(d.At), d.What, d.Expected})
	}
	if f.Failure != "" {
		j.Diagnostics = append(j.Diagnostics, jsonDiagnostic{&jsonPlace{File: f.Name}, f.Failure, ""})
	}
	return j
}

func toJSONFinding(f *Finding) jsonFinding {
	j := jsonFinding{
		Check: f.Check, Headline: f.Headline, Element: f.Element, Verdict: f.Verdict,
		Margin: number(math.NaN()), At: place(f.At), Reason: f.Reason, Note: f.Note, Remedy: f.Remedy,
		Fingerprint: f.Fingerprint, Baseline: f.State,
	}
	if f.Verdict == checks.Violated || f.Verdict == checks.Conceded {
		s := string(f.Severity)
		j.Severity = &s
	}
	if f.Stress != nil {
		s := toJSONStress(f.Stress)
		j.Stress = &s
	}
	if r := f.Rating; r != nil {
		j.Rating = &jsonRating{r.Symbol, number(r.Value), r.Unit.String(), r.Origin, r.Source, r.Confidence}
	}
	if l := f.Limit; l != nil {
		bound := "at most"
		if f.Floor {
			bound = "at least"
		}
		j.Limit = &jsonLimit{number(l.Value), bound, l.Policy, number(l.Factor), l.Rule, l.Source}
		if f.Stress != nil {
			j.Margin = number(f.Margin)
		}
	}
	j.Needs = toJSONNeeds(f)
	if c := f.Concession; c != nil {
		j.Concession = &jsonConcession{number(c.Ceiling.Number), c.Ceiling.Unit.String(), c.Until, c.Reason, place(c.At)}
	}
	return j
}

func toJSONNeeds(f *Finding) *jsonNeeds {
	n := f.Needs
	if n == nil || n.Symbol == "" && n.Statement == "" {
		return nil
	}
	j := &jsonNeeds{Statement: n.Statement}
	if n.Symbol != "" {
		value, unit := number(n.Value), n.Unit.String()
		j.Symbol, j.Value, j.Unit, j.Bound = n.Symbol, &value, &unit, boundWord(f)
		next := number(math.NaN()) // null: no standard rating is large enough, or there is no series
		if n.NextStandard > 0 {
			next = number(n.NextStandard)
		}
		j.NextStandard = &next
	}
	return j
}

func toJSONStress(s *study.Stress) jsonStress {
	inexact := number(s.Error)
	if math.IsNaN(s.Value) || math.IsInf(s.Value, 0) {
		inexact = number(math.NaN()) // no value, no error
	}
	return jsonStress{
		Quantity: s.Quantity, Value: number(s.Value), Unit: s.Unit.String(), Error: inexact, Phase: number(s.Phase), Unproven: s.Unproven,
		Condition: jsonCondition{s.Condition.Name, s.Condition.Line, s.Condition.Load, s.Condition.Start, s.Condition.Also},
	}
}

func place(p netlist.Position) *jsonPlace {
	if p.File == "" && p.Line == 0 {
		return nil
	}
	return &jsonPlace{slashed(p.File), p.Line, p.Column}
}
