package checks

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"railproof/netlist"
	"railproof/netlist/quantity"
)

// names lists elements by name.
func (z *sizer) names(list []netlist.ElementID) string {
	var words []string
	for _, id := range list {
		words = append(words, z.supply.Circuit.Elements[id].Name)
	}
	return strings.Join(words, " ")
}

// roundUp rounds a positive value to three figures, upwards.
func roundUp(x float64) float64 {
	if x <= 0 {
		return 0
	}
	exponent := int(math.Floor(math.Log10(x))) - 2
	figure := math.Ceil(x*math.Pow(10, -float64(exponent)) - 1e-9)
	value, err := strconv.ParseFloat(fmt.Sprintf("%ge%d", figure, exponent), 64)
	if err != nil {
		return x
	}
	return value
}

// missed says why no value of an adjustment helps: what is still short with the last one tried.
func (z *sizer) missed(f *Finding, a *adjustment, last *Finding) miss {
	furthest := a.values[len(a.values)-1]
	what := fmt.Sprintf("no %s of %s helps", a.noun(), z.names(a.elements))
	if last == nil || !found(last.Stress) {
		return miss{words: what}
	}
	if last.Verdict == Unproven {
		return miss{words: what, unproven: last.Reason}
	}
	return miss{words: what + ": with " + quantity.Format(furthest, a.unit, 3) + " " + shortage(f, last, a)}
}

// noun is what an adjustment changes, in words.
func (a *adjustment) noun() string {
	switch a.symbol {
	case "C":
		return "capacitance"
	case "R":
		return "resistance"
	case "L":
		return "inductance"
	}
	return string(a.symbol)
}

// shortage says by how much a stress misses its limit. Where no reservoir helps, it is the crest that is short.
func shortage(f, last *Finding, a *adjustment) string {
	if last.Limit == nil {
		return "it is still violated"
	}
	by := quantity.Format(math.Abs(last.Stress.Value-last.Limit.Value), last.Stress.Unit, 2)
	switch {
	case a.symbol == "C" && f.Floor && last.Stress.Unit == quantity.Volt:
		return "the crest at " + lineWords(last) + " is short by " + by + ": a higher winding voltage, or less current"
	case last.Floor:
		return fmt.Sprintf("the %s is short by %s", spoken(last), by)
	}
	return fmt.Sprintf("the %s is over by %s", spoken(last), by)
}

func lineWords(f *Finding) string {
	if line := f.Stress.Condition.Line; line != "" && line != "as-written" {
		return line + " line"
	}
	return "this line"
}

// spoken is the quantity of a finding in words.
func spoken(f *Finding) string { return strings.ReplaceAll(string(f.Stress.Quantity), "-", " ") }

// lacking says for a violation that no value touches what is wrong, and what its check advises.
func lacking(f *Finding) string {
	words := f.Reason
	if found(f.Stress) && f.Limit != nil && !math.IsInf(f.Stress.Value, 0) {
		side := "over"
		if f.Floor {
			side = "short"
		}
		words = fmt.Sprintf("the %s is %s by %s", spoken(f), side, quantity.Format(math.Abs(f.Stress.Value-f.Limit.Value), f.Stress.Unit, 3))
	}
	return join(words, f.Remedy)
}
