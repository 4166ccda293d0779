package netlist

import (
	"slices"
	"strings"

	"railproof/netlist/quantity"
)

// readRating reads the value of a rating as a duty sheet spells it: a word, a value, or a range where
// the symbol allows one. A tolerance of one figure counts both ways: 5% is -5%..+5%. The error is a
// *quantity.Error.
func readRating(m Meaning, text string) (value quantity.Interval, word string, err error) {
	switch {
	case m.FreeWord:
		return quantity.Interval{}, text, nil
	case m.TakesWord():
		i := slices.IndexFunc(m.Words, func(w string) bool { return strings.EqualFold(w, text) })
		if i < 0 {
			return quantity.Interval{}, "", &quantity.Error{Text: text, What: "no such " + string(m.Symbol), Expected: m.Expectation()}
		}
		return quantity.Interval{}, m.Words[i], nil
	}
	value, err = quantity.ParseInterval(text, m.Unit)
	if err != nil {
		return quantity.Interval{}, "", err
	}
	return value, "", checkRating(m, text, &value)
}

// checkRating refuses what no rating can be and widens a single tolerance to both sides.
func checkRating(m Meaning, text string, value *quantity.Interval) error {
	refuse := func(what, expected string) error {
		return &quantity.Error{Text: text, What: what, Expected: expected}
	}
	switch {
	case value.Low != value.High && !m.Range:
		return refuse(string(m.Symbol)+" is a single value, not a range", m.Unit.Expectation())
	case m.Symbol == "tolerance":
		if value.Low == value.High {
			size := max(value.High, -value.High)
			value.Low, value.High = -size, size
		}
		if value.Low > 0 || value.High < 0 || value.Low <= -1 || value.High > 10 {
			return refuse("no tolerance", "a range about zero, such as -20%..+20%")
		}
	case m.Symbol == "VOUT" && value.High < 0:
		value.Low, value.High = -value.High, -value.Low
	case m.Unit == quantity.Celsius || m.Symbol == "TC":
	case value.Low < 0 || value.High == 0:
		return refuse(string(m.Symbol)+" must be more than zero", m.Unit.Expectation())
	}
	return nil
}
