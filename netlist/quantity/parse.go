package quantity

import (
	"math"
	"slices"
	"strconv"
	"strings"
	"unicode/utf8"
)

// maxNumberLength bounds the digits of one number, in bytes.
const maxNumberLength = 64

// Error says what is wrong with a written value and what was expected.
type Error struct {
	Text     string // the whole text that was read
	Offset   int    // characters from its start to the fault
	What     string
	Expected string
}

// Error formats the fault as `"25v": v is no unit; expected ...`.
func (e *Error) Error() string {
	text := strconv.Quote(e.Text) + ": " + e.What
	if e.Expected != "" {
		text += "; expected " + e.Expected
	}
	return text
}

// Parse reads a value of the given unit: "25V", "90mOhm", "2200uF", "-20%", "1.2A2s", "6K/W", "open".
// Prefixes keep their SI case. One space may stand before the unit. The unit is required, except for a
// ratio. The error is an *Error.
func Parse(text string, unit Unit) (Value, error) {
	if word := strings.TrimSpace(text); word == "open" {
		if unit == Ohm {
			return Value{math.Inf(1), Ohm}, nil
		}
		return Value{}, &Error{text, 0, "open is a resistance", unit.Expectation()}
	}
	number, rest := splitNumber(text)
	if number == "" {
		return Value{}, &Error{text, 0, "no number", unit.Expectation()}
	}
	at := utf8.RuneCountInString(text[:len(text)-len(rest)])
	suffix := strings.TrimSpace(rest)
	exponent, ok := suffixExponent(suffix, unit)
	if !ok {
		return Value{}, &Error{text, at, explainSuffix(suffix, unit), unit.Expectation()}
	}
	result, err := scale(number, exponent)
	if err != nil {
		return Value{}, &Error{text, 0, err.Error(), unit.Expectation()}
	}
	return Value{result, unit}, nil
}

// ParseInterval reads LOW..HIGH, each end with its unit, or a single value as an interval of no width:
// "0C..45C", "20Ohm..open", "-10%..+10%". The lower end comes first. The error is an *Error.
func ParseInterval(text string, unit Unit) (Interval, error) {
	lowText, highText, isRange := strings.Cut(text, "..")
	low, err := Parse(lowText, unit)
	if err != nil {
		fault := err.(*Error)
		if isRange && fault.What == missingUnit {
			fault.What = "the lower end has no unit"
		}
		return Interval{}, &Error{text, fault.Offset, fault.What, fault.Expected}
	}
	if !isRange {
		return Interval{low.Number, low.Number, unit}, nil
	}
	start := utf8.RuneCountInString(lowText) + 2
	high, err := Parse(highText, unit)
	if err != nil {
		fault := err.(*Error)
		return Interval{}, &Error{text, start + fault.Offset, fault.What, fault.Expected}
	}
	if low.Number > high.Number {
		return Interval{}, &Error{text, 0, "the ends are the wrong way round",
			"the lower end first: " + Interval{high.Number, low.Number, unit}.Compact()}
	}
	return Interval{low.Number, high.Number, unit}, nil
}

// UnitOf guesses the unit a text is written in; ok is false when it has none that is known.
func UnitOf(text string) (unit Unit, ok bool) {
	number, rest := splitNumber(text)
	if number == "" {
		return One, false
	}
	return unitOfSuffix(strings.TrimSpace(rest))
}

// splitNumber cuts a decimal number off the front: sign, digits, point, exponent.
func splitNumber(text string) (number, rest string) {
	i := 0
	if i < len(text) && (text[i] == '+' || text[i] == '-') {
		i++
	}
	digits := 0
	for ; i < len(text) && text[i] >= '0' && text[i] <= '9'; i++ {
		digits++
	}
	if i < len(text) && text[i] == '.' {
		i++
		for ; i < len(text) && text[i] >= '0' && text[i] <= '9'; i++ {
			digits++
		}
	}
	if digits == 0 {
		return "", text
	}
	if i < len(text) && (text[i] == 'e' || text[i] == 'E') {
		j := i + 1
		if j < len(text) && (text[j] == '+' || text[j] == '-') {
			j++
		}
		k := j
		for ; k < len(text) && text[k] >= '0' && text[k] <= '9'; k++ {
		}
		if k > j {
			i = k
		}
	}
	return text[:i], text[i:]
}

// suffixExponent reads prefix and unit; exponent is the power of ten of the prefix.
func suffixExponent(suffix string, unit Unit) (exponent int, ok bool) {
	if unit == One {
		switch suffix {
		case "":
			return 0, true
		case "%":
			return -2, true
		}
		return 0, false
	}
	s := unit.spelling()
	for _, letter := range micro {
		if after, found := strings.CutPrefix(suffix, letter); found {
			suffix = "u" + after
		}
	}
	for _, p := range prefixes {
		if p.letter != "" && !strings.Contains(s.prefixes, p.letter) {
			continue
		}
		after, found := strings.CutPrefix(suffix, p.letter)
		if found && (after == s.symbol || slices.Contains(s.also, after)) {
			return p.exponent, true
		}
	}
	return 0, false
}

func unitOfSuffix(suffix string) (Unit, bool) {
	if suffix == "" {
		return One, false
	}
	for _, u := range units() {
		if _, ok := suffixExponent(suffix, u); ok {
			return u, true
		}
	}
	return One, false
}

const missingUnit = "the unit is missing"

// explainSuffix says what is wrong with what follows the number.
func explainSuffix(suffix string, want Unit) string {
	if suffix == "" {
		return missingUnit
	}
	if other, ok := unitOfSuffix(suffix); ok {
		return "the unit " + suffix + " means " + other.spelling().name
	}
	for _, p := range prefixes {
		if p.letter != "" && suffix == p.letter {
			return suffix + " is a prefix without a unit"
		}
	}
	if want != One {
		for _, spelt := range correctSpellings(want) {
			if strings.EqualFold(spelt, suffix) {
				return suffix + " is not in SI case (" + spelt + ")"
			}
		}
	}
	return strconv.Quote(suffix) + " is no unit"
}

// correctSpellings lists every prefix and symbol of a unit as printed.
func correctSpellings(unit Unit) []string {
	s := unit.spelling()
	var list []string
	for _, p := range prefixes {
		if p.letter == "" || strings.Contains(s.prefixes, p.letter) {
			list = append(list, p.letter+unit.compactSymbol())
		}
	}
	return list
}

type numberError string

func (e numberError) Error() string { return string(e) }

// scale converts a decimal text times a power of ten, rounding once.
func scale(number string, exponent int) (float64, error) {
	if len(number) > maxNumberLength {
		return 0, numberError("the number has more than 64 characters")
	}
	mantissa, power := number, 0
	if i := strings.IndexAny(number, "eE"); i >= 0 {
		p, err := strconv.Atoi(number[i+1:])
		if err != nil || p > 400 || p < -400 {
			return 0, numberError("the exponent is out of range")
		}
		mantissa, power = number[:i], p
	}
	value, err := strconv.ParseFloat(mantissa+"e"+strconv.Itoa(power+exponent), 64)
	if err != nil {
		return 0, numberError("the number is out of range")
	}
	if value == 0 {
		value = 0 // no negative zero
	}
	return value, nil
}
