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
	if last == nil || last.Limit == nil && last.Verdict != Unproven || !found(last.Stress) || !found(f.Stress) {
		return miss{words: what}
	}
	if last.Verdict == Unproven {
		return miss{words: what, unproven: last.Reason}
	}
	switch {
	case !a.circuit():
		needed := (f.Stress.Value + f.Stress.Error) * a.from / f.Limit.Value
		return miss{words: join("no standard "+string(a.symbol)+" reaches the "+quantity.Format(roundUp(needed), a.unit, 3)+" that are needed", f.Remedy)}
	case unmoved(f, last):
		return miss{words: what + ": whatever its value, " + shortage(last)}
	case a.symbol == "C" && f.Check != railRipple.Name && last.Stress.Unit == quantity.Volt:
		return miss{words: fmt.Sprintf("%s: with %s the crest at %s is short by %s: a higher winding voltage, or less current", what,
			quantity.Format(furthest, a.unit, 3), lineWords(last), distance(last))}
	}
	return miss{words: what + ": with " + quantity.Format(furthest, a.unit, 3) + " " + shortage(last)}
}

// unmoved reports whether a rail's voltage did not follow a change: then what holds it decides, not its reservoir.
func unmoved(f, last *Finding) bool {
	const part = 0.01
	return f.Check == railVoltage.Name && last.Limit != nil && math.Abs(last.Stress.Value-f.Stress.Value) < part*math.Abs(f.Stress.Value-last.Limit.Value)
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

// distance is by how much a stress misses its limit.
func distance(f *Finding) string {
	return quantity.Format(math.Abs(f.Stress.Value-f.Limit.Value), f.Stress.Unit, 3)
}

// shortage says what misses its limit, and by how much: "the smallest headroom is short by 1.2 V".
func shortage(f *Finding) string {
	side := "over"
	if f.Floor {
		side = "short"
	}
	return fmt.Sprintf("the %s is %s by %s", spoken(f), side, distance(f))
}

func lineWords(f *Finding) string {
	if line := f.Stress.Condition.Line; line != "" && line != "as-written" {
		return line + " line"
	}
	return "this line"
}

// lacking says for a violation that no value touches what is wrong, and what its check advises.
func lacking(f *Finding) string {
	words := f.Reason
	if found(f.Stress) && f.Limit != nil && !math.IsInf(f.Stress.Value, 0) {
		words = shortage(f)
	}
	return "no value helps: " + join(words, f.Remedy)
}

// spoken is the quantity of a finding in words: "largest backflow", "smallest headroom".
func spoken(f *Finding) string {
	words := strings.ReplaceAll(string(f.Stress.Quantity), "-", " ")
	if rest, ok := strings.CutPrefix(words, "max "); ok {
		return "largest " + rest
	}
	if rest, ok := strings.CutPrefix(words, "min "); ok {
		return "smallest " + rest
	}
	return words
}
