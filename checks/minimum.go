package checks

import (
	"math"

	"railproof/checks/parts"
	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

// lower judges a stress that must stay above a rating. No policy derates a minimum.
type lower struct {
	stress *study.Stress
	rating *Rating        // nil: unknown
	symbol netlist.Symbol // of the rating that is asked for when it is unknown
	unit   quantity.Unit
	note   string
	remedy string
	// lost is the value at and below which the finding is critical.
	lost float64
	// below is the severity between lost and the rating.
	below Severity
	// absent is the reason when the stress table has no such row.
	absent string
}

// judgeMinimum turns a lower comparison into a finding.
func (p *Pass) judgeMinimum(l lower) Finding {
	f := Finding{Stress: l.stress, Rating: l.rating, Floor: true, Note: l.note}
	if !found(l.stress) {
		return p.unsolvedStress(f, l.absent)
	}
	value := l.stress.Value - l.stress.Error
	if l.rating == nil {
		if value <= l.lost {
			f.Verdict, f.Severity, f.Remedy = Violated, Critical, l.remedy
			f.Limit = p.unchanged(l.lost)
			return f
		}
		f.Verdict, f.Reason = Unproven, "no rating "+string(l.symbol)+" is known"
		f.Needs = &Needs{Symbol: l.symbol, Value: math.Max(0, value), Unit: l.unit}
		return f
	}
	f.Limit = p.unchanged(l.rating.Value)
	if l.rating.Value != 0 {
		f.Margin = (value - l.rating.Value) / math.Abs(l.rating.Value)
	}
	switch {
	case value <= l.lost:
		f.Verdict, f.Severity, f.Remedy = Violated, Critical, l.remedy
	case value < l.rating.Value:
		f.Verdict, f.Severity, f.Remedy = Violated, l.below, l.remedy
	case l.stress.Unproven != "":
		f.Verdict, f.Reason, f.Needs = Unproven, l.stress.Unproven, missing(l.stress)
	default:
		f.Verdict = Proven
		if f.Margin < nearLimit {
			f.Note = join(f.Note, "near limit")
		}
	}
	return f
}

// unchanged is the limit of a rating that no policy derates.
func (p *Pass) unchanged(rating float64) *Limit {
	return &Limit{Value: rating, Policy: p.Policy.Name, Factor: 1, Rule: "the rating itself"}
}

// found reports whether a stress has a value.
func found(s *study.Stress) bool { return s != nil && !math.IsNaN(s.Value) }

// unsolvedStress makes a finding unproven for want of its stress.
func (p *Pass) unsolvedStress(f Finding, absent string) Finding {
	f.Verdict, f.Reason = Unproven, absent
	if absent == "" {
		f.Reason = "no stress was found"
	}
	if f.Stress != nil && f.Stress.Unproven != "" {
		f.Reason, f.Needs = f.Stress.Unproven, missing(f.Stress)
	}
	return f
}

// get is the stress of an element, nil if the table has none.
func (p *Pass) get(element string, q study.Quantity) *study.Stress {
	s, _ := p.Table.Get(element, q)
	return s
}

// known is the rating of an element, nil if there is none.
func (p *Pass) known(id netlist.ElementID, symbol netlist.Symbol) *Rating {
	r, _ := p.rating(id, symbol)
	return r
}

// derived is a stress that follows linearly from another: value = offset + factor x s.
func derived(s *study.Stress, q study.Quantity, unit quantity.Unit, offset, factor float64) *study.Stress {
	d := *s
	d.Quantity, d.Unit = q, unit
	d.Value, d.Error = offset+factor*s.Value, math.Abs(factor)*s.Error
	return &d
}

// judgePlain judges against a rating that no policy derates.
func (p *Pass) judgePlain(u upper) Finding {
	u.key = ""
	f := p.judge(u)
	if f.Limit != nil {
		f.Limit = p.unchanged(f.Rating.Value)
	}
	return f
}

// judgeDerated judges against a rating of which only a factor is left in the circumstances; standard ratings
// in the remedy and in what is needed are the nominal ones.
func (p *Pass) judgeDerated(u upper, factor float64) Finding {
	_, row := p.derate(1, u.key)
	if u.rating != nil && factor < 1 {
		left := *u.rating
		left.Value *= factor
		u.rating = &left
		switch {
		case u.remedy != "" || u.steps == "" || !found(u.stress):
		case factor <= 0:
			u.remedy = "nothing of " + string(u.symbol) + " is left at this temperature: lower the ambient"
		default:
			u.remedy = ratingRemedy(u, (u.stress.Value+u.stress.Error)/row.Factor/factor)
		}
	}
	f := p.judge(u)
	if u.rating == nil && f.Needs != nil && f.Needs.Symbol != "" && factor > 0 && factor < 1 {
		f.Needs.Value /= factor
		f.Needs.NextStandard = nextStandard(u.steps, f.Needs.Value)
	}
	return f
}

// nextStandard is the smallest standard rating that is not below a value, 0 if there is none.
func nextStandard(steps parts.StepKind, value float64) float64 {
	next, ok := parts.NextUp(steps, value)
	if !ok {
		return 0
	}
	return next
}
