package checks

import (
	"math"

	"railproof/checks/parts"
	"railproof/checks/policy"
	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

// Check is one rule, as a value: what it applies to, which stress it holds against which rating, and how
// severity follows. The texts feed the terminal help, the reports and the documentation.
type Check struct {
	Name         string // "diode-reverse-voltage"
	Title        string // "peak reverse voltage"
	Headline     bool   // one of the four whose verdict every release gate needs
	Applies      string // to which elements
	Stress       string // what is computed
	Rating       string // what it is held against
	Worst        string // in which condition it is worst
	Formula      string // closed form for a hand check
	Assumptions  string
	SeverityRule string
	Source       string // published
	Remedy       string
	// Policy is the row that derates the rating; empty if none does.
	Policy policy.Key

	run func(p *Pass)
}

// standardSeverity is the rule of every check that states no other.
const standardSeverity = "critical beyond the rating, major beyond rating x policy factor"

// nearLimit is the margin below which a proven finding is noted as near its limit.
const nearLimit = 0.05

// Pass is the only input and the only output of a check.
type Pass struct {
	Supply *study.Supply
	Table  *study.Table
	Policy *policy.Policy

	check    *Check
	findings []Finding
}

// Circuit is the circuit under check.
func (p *Pass) Circuit() *netlist.Circuit { return p.Supply.Circuit }

// element returns an element of the circuit.
func (p *Pass) element(id netlist.ElementID) *netlist.Element { return &p.Supply.Circuit.Elements[id] }

// each calls f for every element of the circuit, in netlist order.
func (p *Pass) each(f func(id netlist.ElementID, e *netlist.Element)) {
	for k := range p.Supply.Circuit.Elements {
		f(netlist.ElementID(k), &p.Supply.Circuit.Elements[k])
	}
}

// report adds a finding for an element.
func (p *Pass) report(id netlist.ElementID, f Finding) {
	e := p.element(id)
	f.Element, f.At = e.Name, e.At
	p.add(f)
}

// add adds a finding that already names its place.
func (p *Pass) add(f Finding) {
	f.Check, f.Headline = p.check.Name, p.check.Headline
	p.findings = append(p.findings, f)
}

// rating finds a rating of an element.
func (p *Pass) rating(id netlist.ElementID, symbol netlist.Symbol) (*Rating, bool) {
	v, ok := p.Supply.Property(id, symbol)
	if !ok {
		return nil, false
	}
	return &Rating{
		Symbol: symbol, Value: v.Value(), Unit: v.Unit, Origin: v.Origin, Source: v.Source, Confidence: v.Confidence,
	}, true
}

// derate applies the policy row of a key to a rating. A policy without such a row leaves the rating itself
// as the limit, and the limit says so.
func (p *Pass) derate(rating float64, key policy.Key) (*Limit, policy.Row) {
	row, ok := p.Policy.Row(key)
	if !ok {
		return &Limit{Value: rating, Policy: p.Policy.Name, Factor: 1, Rule: "rating (the policy has no row for " + string(key) + ")"},
			policy.Row{Factor: 1, AtMost: math.Inf(1)}
	}
	return &Limit{
		Value: row.Limit(rating), Policy: p.Policy.Name, Factor: row.Factor, Rule: row.Rule(), Source: row.Source,
	}, row
}

// upper judges a stress that must stay below a rating.
type upper struct {
	stress *study.Stress
	rating *Rating        // nil: unknown
	symbol netlist.Symbol // of the rating that is asked for when it is unknown
	unit   quantity.Unit
	key    policy.Key
	steps  parts.StepKind // series of standard ratings, empty if there is none
	note   string
	remedy string
	// critical, if set, replaces the severity of a stress beyond the rating.
	critical Severity
}

// judge turns an upper comparison into a finding.
func (p *Pass) judge(u upper) Finding {
	f := Finding{Stress: u.stress, Rating: u.rating, Note: u.note}
	if u.stress == nil || math.IsNaN(u.stress.Value) {
		f.Verdict = Unproven
		f.Reason = "no stress was found"
		if u.stress != nil && u.stress.Unproven != "" {
			f.Reason, f.Needs = u.stress.Unproven, missing(u.stress)
		}
		return f
	}
	found := u.stress.Value + u.stress.Error
	if u.rating == nil {
		_, row := p.derate(1, u.key)
		f.Verdict, f.Reason = Unproven, "no rating "+string(u.symbol)+" is known"
		f.Needs = &Needs{Symbol: u.symbol, Value: math.Max(0, found) / row.Factor, Unit: u.unit}
		if found <= unstressed && u.unit != quantity.Celsius && u.stress.Unproven == "" {
			f.Reason += "; nothing stresses it in any condition, so any will do"
			f.Needs.Value = 0
		}
		if u.steps != "" {
			if next, ok := parts.NextUp(u.steps, f.Needs.Value); ok {
				f.Needs.NextStandard = next
			}
		}
		return f
	}
	f.Limit, _ = p.derate(u.rating.Value, u.key)
	if f.Limit.Value != 0 {
		f.Margin = (f.Limit.Value - found) / math.Abs(f.Limit.Value)
	}
	switch {
	case found > u.rating.Value:
		f.Verdict, f.Severity = Violated, Critical
		if u.critical != "" {
			f.Severity = u.critical
		}
	case found > f.Limit.Value:
		f.Verdict, f.Severity = Violated, Major
	case u.stress.Unproven != "":
		f.Verdict, f.Reason = Unproven, u.stress.Unproven
		f.Needs = missing(u.stress)
	default:
		f.Verdict = Proven
		if f.Margin < nearLimit {
			f.Note = join(f.Note, "near limit")
		}
	}
	if f.Verdict == Violated {
		f.Remedy = u.remedy
		if f.Remedy == "" && u.steps != "" {
			_, row := p.derate(1, u.key)
			f.Remedy = ratingRemedy(u, found/row.Factor)
		}
	}
	return f
}

// unstressed is the stress in SI units below which any part will do, as of a diode that never conducts.
const unstressed = 1e-9

// missing is the duty statement that a stress waits for, nil if none would help.
func missing(s *study.Stress) *Needs {
	if s.Missing == "" {
		return nil
	}
	return &Needs{Statement: s.Missing}
}

// ratingRemedy names the smallest standard rating that makes the check pass.
func ratingRemedy(u upper, needed float64) string {
	next, ok := parts.NextUp(u.steps, needed)
	if !ok {
		return "no standard " + string(u.symbol) + " reaches " + quantity.Format(needed, u.unit, 3) + ": lower the stress"
	}
	return "a part with " + string(u.symbol) + " of " + quantity.Format(next, u.unit, 0) + " (needs " + quantity.Format(needed, u.unit, 3) + ")"
}

func join(a, b string) string {
	if a == "" {
		return b
	}
	if b == "" {
		return a
	}
	return a + "; " + b
}
