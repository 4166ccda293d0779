package report

import (
	"math"
	"strings"

	"railproof/checks"
	"railproof/checks/study"
	"railproof/netlist/quantity"
)

// figures is to how many significant digits a human report gives a stress.
const figures = 3

func figure(v float64, u quantity.Unit) string { return quantity.Format(v, u, figures) }

// pair writes two values of one unit with as few digits, three at least, as tell them apart.
func pair(a, b float64, u quantity.Unit) (string, string) {
	for digits := figures; ; digits++ {
		x, y := quantity.FormatFixed(a, u, digits), quantity.FormatFixed(b, u, digits)
		if x != y || a == b || digits >= 7 {
			return tidy(x, a, u), tidy(y, b, u)
		}
	}
}

// tidy writes an exact zero as a plain zero.
func tidy(text string, v float64, u quantity.Unit) string {
	if v == 0 {
		return quantity.Format(0, u, 1)
	}
	return text
}

// difference is how far a stress is beyond its limit.
func difference(a, b float64, u quantity.Unit) string {
	if u == quantity.Celsius {
		u = quantity.Kelvin
	}
	return figure(math.Abs(a-b), u)
}

// conditionWords puts a condition into words.
func conditionWords(c study.Condition) string {
	words := append([]string{c.Name}, c.Also...)
	return strings.Join(nonEmpty(words), ", ")
}

// whenWords is the condition and the moment of an extremum.
func whenWords(s *study.Stress) string {
	return joinWith(conditionWords(s.Condition), momentWords(s), ", ")
}

// momentWords is the moment of an extremum, empty if there is none.
func momentWords(s *study.Stress) string {
	switch {
	case math.IsNaN(s.Phase) || math.IsInf(s.Phase, 0):
		return ""
	case s.Condition.Start == "cold":
		return figure(s.Phase, quantity.Second) + " after switch-on"
	}
	return figure(s.Phase, quantity.Second) + " into the cycle"
}

// limitWords says how the limit follows from the rating.
func limitWords(f *Finding) string {
	if f.Limit == nil {
		return ""
	}
	policy := "policy " + f.Limit.Policy
	if f.Limit.Policy == "" {
		policy = ""
	}
	if f.Rating == nil {
		return joinWith(f.Limit.Rule, policy, ", ")
	}
	text := string(f.Rating.Symbol) + " " + quantity.Format(f.Rating.Value, f.Rating.Unit, 4)
	if f.Limit.Rule != "" && f.Limit.Rule != "the rating itself" {
		text += ", " + f.Limit.Rule
	}
	return joinWith(text, policy, ", ")
}

// originWords says where a rating is known from, and marks what is only from memory.
func originWords(r *checks.Rating) string {
	text := r.Origin
	if r.Confidence == "memory" && !strings.Contains(strings.ToLower(r.Source), "memory") {
		return text + " (from memory)"
	}
	if r.Confidence == "memory" {
		text += " (" + r.Source + ")"
	}
	return text
}

// needWords says what would prove a finding: "VRRM of at least 77.3 V, next step 100 V".
func needWords(f *Finding) string {
	n := f.Needs
	switch {
	case n == nil:
		return ""
	case n.Statement != "":
		return n.Statement
	case n.Symbol == "":
		return ""
	}
	if n.Value == 0 && !f.Floor && !f.doubtful() {
		return "any " + string(n.Symbol)
	}
	text := string(n.Symbol) + " of " + boundWord(f) + " " + upward(n.Value, n.Unit, f.Floor)
	if f.doubtful() {
		if n.Value == 0 {
			return string(n.Symbol) + ", how much is not known yet"
		}
		text = string(n.Symbol) + ", so far " + boundWord(f) + " " + upward(n.Value, n.Unit, f.Floor)
	}
	if n.NextStandard > 0 {
		text += ", next step " + quantity.Format(n.NextStandard, n.Unit, 4)
	}
	return text
}

// doubtful reports whether the stress of a finding proves nothing, so that what it asks for is provisional.
func (f *Finding) doubtful() bool { return f.Stress != nil && f.Stress.Unproven != "" }

// doubtWords says why a demand is provisional, unless the reason of the finding says it.
func doubtWords(f *Finding) string {
	if !f.doubtful() || f.Needs == nil || f.Needs.Symbol == "" || strings.Contains(f.Reason, f.Stress.Unproven) {
		return ""
	}
	return "the stress is not proven yet: " + f.Stress.Unproven
}

func boundWord(f *Finding) string {
	if f.Floor {
		return "at most"
	}
	return "at least"
}

// upward rounds what a part must be rated to the safe side.
func upward(v float64, u quantity.Unit, floor bool) string {
	if v == 0 || math.IsNaN(v) || math.IsInf(v, 0) {
		return figure(v, u)
	}
	step := math.Pow(10, math.Floor(math.Log10(math.Abs(v)))-figures+1)
	rounded := math.Ceil(v/step-1e-9) * step
	if floor {
		rounded = math.Floor(v/step+1e-9) * step
	}
	return figure(rounded, u)
}

func nonEmpty(words []string) []string {
	var kept []string
	for _, w := range words {
		if w != "" {
			kept = append(kept, w)
		}
	}
	return kept
}

func joinWith(a, b, between string) string {
	return strings.Join(nonEmpty([]string{a, b}), between)
}

func joined(a, b string) string { return joinWith(a, b, "; ") }

// inSentence turns the columns of a ledger line into a sentence.
func inSentence(line string) string { return strings.ReplaceAll(line, "   ", ", ") }

// capital begins a sentence.
func capital(text string) string {
	if text == "" {
		return ""
	}
	return strings.ToUpper(text[:1]) + text[1:]
}

// marginWords writes a margin as a percentage; far inside or outside the figure no longer matters.
func marginWords(margin float64) string {
	switch {
	case margin > 9.99:
		return "over 999 %"
	case margin < -9.99:
		return "under -999 %"
	}
	return quantity.Percent(margin, 2)
}
