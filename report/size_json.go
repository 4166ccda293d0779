package report

import (
	"io"
	"math"

	"railproof/checks"
	"railproof/netlist"
)

type jsonSizes struct {
	Schema     string         `json:"schema"`
	Tool       jsonTool       `json:"tool"`
	File       string         `json:"file"`
	Title      string         `json:"title"`
	Conditions jsonConditions `json:"conditions"`
	Tables     jsonTables     `json:"tables"`
	Sizes      []jsonSize     `json:"sizes"`
	Totals     jsonSizeTotals `json:"totals"`
	Exit       Exit           `json:"exit"`
}

type jsonSize struct {
	jsonVerdict
	Fingerprint string       `json:"fingerprint"`
	At          *jsonPlace   `json:"at"`
	Remedies    []jsonRemedy `json:"remedies"`
	Short       string       `json:"no_value_helps"`
	Unproven    string       `json:"unproven"`
}

// jsonVerdict is a finding in short: what stands where another one is spoken of.
type jsonVerdict struct {
	Check    string         `json:"check"`
	Element  string         `json:"element"`
	Verdict  checks.Verdict `json:"verdict"`
	Severity *string        `json:"severity"`
	Stress   *jsonStress    `json:"stress"`
	Limit    *jsonLimit     `json:"limit"`
	Reason   string         `json:"reason"`
}

type jsonRemedy struct {
	Changes []jsonChange  `json:"changes"`
	Solved  bool          `json:"solved_again"`
	Stress  *jsonStress   `json:"stress"`
	Limit   *jsonLimit    `json:"limit"`
	Worse   []jsonVerdict `json:"worse"`
	Mends   []jsonVerdict `json:"mends"`
}

type jsonChange struct {
	Element string         `json:"element"`
	Symbol  netlist.Symbol `json:"symbol"`
	From    number         `json:"from"`
	To      number         `json:"to"`
	Unit    string         `json:"unit"`
	Bound   string         `json:"bound"` // "step", "at least" or "at most"
	Series  string         `json:"series"`
	Source  string         `json:"source"`
}

type jsonSizeTotals struct {
	Sized            int `json:"sized"`
	None             int `json:"none"`
	Unproven         int `json:"unproven"`
	Conceded         int `json:"conceded"`
	HeadlineUnproven int `json:"headline_unproven"`
	Unsolved         int `json:"unsolved"`
}

// WriteJSON writes the sizes as one JSON document of SizeSchema; SCHEMA.md describes it.
func (r *SizeReport) WriteJSON(w io.Writer) error {
	f, t := &r.File, r.Totals
	d := jsonSizes{
		Schema: SizeSchema, Tool: jsonTool{"railproof", r.Version}, File: f.Name, Title: f.Title,
		Conditions: jsonConditions(f.Circumstances), Tables: jsonTables{f.PartsVersion, f.PolicyVersion}, Sizes: []jsonSize{},
		Totals: jsonSizeTotals{t.Sized, t.None, t.Blocked, t.Conceded, t.HeadlineUnproven, t.Unsolved}, Exit: r.Exit,
	}
	for k := range r.Sizes {
		s := &r.Sizes[k]
		j := jsonSize{jsonVerdict: toJSONVerdict(&s.Finding.Finding), Fingerprint: s.Fingerprint, At: place(s.At), Remedies: []jsonRemedy{},
			Short: s.Short, Unproven: s.Blocked}
		for i := range s.Remedies {
			j.Remedies = append(j.Remedies, toJSONRemedy(&s.Remedies[i]))
		}
		d.Sizes = append(d.Sizes, j)
	}
	return encode(w, d)
}

func toJSONVerdict(f *checks.Finding) jsonVerdict {
	j := toJSONFinding(&Finding{Finding: *f})
	return jsonVerdict{j.Check, j.Element, j.Verdict, j.Severity, j.Stress, j.Limit, j.Reason}
}

func toJSONVerdicts(list []checks.Finding) []jsonVerdict {
	out := []jsonVerdict{}
	for k := range list {
		out = append(out, toJSONVerdict(&list[k]))
	}
	return out
}

func toJSONRemedy(m *checks.Remedy) jsonRemedy {
	after := toJSONVerdict(&checks.Finding{Stress: m.After, Limit: m.Limit, Floor: m.Floor})
	j := jsonRemedy{Changes: []jsonChange{}, Solved: m.Solved, Stress: after.Stress, Limit: after.Limit,
		Worse: toJSONVerdicts(m.Worse), Mends: toJSONVerdicts(m.Mends)}
	for _, c := range m.Changes {
		bound := "step"
		switch {
		case c.Series != "":
		case c.AtMost:
			bound = "at most"
		default:
			bound = "at least"
		}
		j.Changes = append(j.Changes, jsonChange{c.Element, c.Symbol, number(c.From), number(c.To), c.Unit.String(), bound,
			string(c.Series), stepOf(c).Source})
	}
	return j
}

func finite(v float64) bool { return !math.IsNaN(v) && !math.IsInf(v, 0) }
