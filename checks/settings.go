package checks

import (
	"slices"
	"strings"

	"railproof/checks/policy"
	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/syntax"
)

// Settings is what a netlist is judged under: what is stated, by whom, and what is taken because nothing is.
type Settings struct {
	File, Title                 string
	SharedSheet                 string // path; empty: none
	Stated                      []Setting
	Defaults                    []Assumption
	Idle                        []netlist.Statement // of the shared sheet, without an effect on this netlist
	Remarks                     []Assumption        // contradictions, what was passed over
	PartsVersion, PolicyVersion string
}

// Setting is one statement in force.
type Setting struct {
	Text   string           // as a duty sheet spells it
	Origin string           // "sheet", "netlist", "shared sheet", "--policy"
	At     netlist.Position // zero for a flag
}

// origins are the words for where a statement stands.
var origins = map[netlist.Origin]string{netlist.FromSharedSheet: "shared sheet", netlist.FromNetlist: "netlist", netlist.FromSheet: "sheet"}

// SettingsOf reads a netlist with its sheets and lists what is in force. Nothing is solved. Diagnostics and the error
// are those of Run.
func SettingsOf(o Options) (*Settings, []netlist.Diagnostic, error) {
	p, diagnostics, err := prepare(o)
	if p == nil {
		return nil, diagnostics, err
	}
	r, d := p.result, p.result.Duty
	s := &Settings{
		File: r.File, Title: r.Title, SharedSheet: d.SharedSheet, Idle: d.Idle,
		PartsVersion: r.PartsVersion, PolicyVersion: r.PolicyVersion,
	}
	for _, one := range d.Stated {
		if o.Policy == "" || keywordOf(one.Text) != "policy" {
			s.Stated = append(s.Stated, Setting{one.Text, origins[one.Origin], one.At})
		}
	}
	if o.Policy != "" {
		s.Stated = append(s.Stated, Setting{Text: "policy " + o.Policy, Origin: "--policy"})
	}
	order := syntax.DutyKeywords()
	slices.SortStableFunc(s.Stated, func(a, b Setting) int {
		return slices.Index(order, keywordOf(a.Text)) - slices.Index(order, keywordOf(b.Text))
	})
	if o.Policy == "" && d.Policy == "" {
		s.Defaults = append(s.Defaults, Assumption{"policy", policy.Default, "the default"})
	}
	for _, a := range study.NewPlan(p.supply).Assumptions() {
		s.Defaults = append(s.Defaults, Assumption(a))
	}
	for _, absent := range []struct {
		keyword, unjudged string
		stated            bool
	}{
		{"rail", "no voltage and ripple of a rail are judged", len(d.Rails) > 0},
		{"life", "how long electrolytics last is not judged", d.Life != nil},
		{"profile", "how fast stored charge is gone is not judged", d.Profile != nil},
	} {
		if !absent.stated {
			s.Defaults = append(s.Defaults, Assumption{About: absent.keyword, Value: absent.unjudged})
		}
	}
	for _, m := range d.Remarks {
		s.Remarks = append(s.Remarks, Assumption{About: m.Element, Value: m.Text, Source: m.At.String()})
	}
	return s, nil, nil
}

func keywordOf(statement string) string {
	word, _, _ := strings.Cut(statement, " ")
	return strings.ToLower(word)
}
