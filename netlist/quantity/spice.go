package quantity

import (
	"math"
	"strconv"
	"strings"
)

// Spice is a number as a netlist writes it.
type Spice struct {
	Value  float64
	Factor string // scale factor as written: "u", "MEG", "" if none; for 4k7 the letter in the middle
	Unit   string // letters behind the factor, as written; ignored by the value
	Rest   string // what follows a slash: "50V" of 470uF/50V, "60V/tantalum" of 1u/60V/tantalum
	Coded  bool   // in the letter-for-point code of IEC 60062: 4k7
}

// spiceFactors are the scale factors of SPICE, longest first. Case does not matter.
var spiceFactors = []struct {
	letters string
	factor  float64
}{
	{"meg", 1e6}, {"mil", 25.4e-6},
	{"t", 1e12}, {"g", 1e9}, {"k", 1e3}, {"m", 1e-3},
	{"u", 1e-6}, {"µ", 1e-6}, {"μ", 1e-6}, {"n", 1e-9}, {"p", 1e-12}, {"f", 1e-15},
}

// coded are the letters of IEC 60062 that may stand for the decimal point, in their own case: unlike in
// SPICE, M is mega and m milli.
var coded = map[string]float64{
	"R": 1, "r": 1, "k": 1e3, "K": 1e3, "M": 1e6, "G": 1e9, "m": 1e-3,
	"u": 1e-6, "U": 1e-6, "µ": 1e-6, "μ": 1e-6, "n": 1e-9, "N": 1e-9, "p": 1e-12, "P": 1e-12,
}

// ParseSpice reads a number with SPICE scale factor and unit letters, or in the code of IEC 60062.
// ok is false if the text is no number; overflow is no number either.
func ParseSpice(text string) (s Spice, ok bool) {
	mantissa := spiceMantissa(text)
	if mantissa == 0 {
		return Spice{}, false
	}
	value, err := strconv.ParseFloat(text[:mantissa], 64)
	if err != nil || math.IsInf(value, 0) {
		return Spice{}, false
	}
	rest := text[mantissa:]
	if k := strings.IndexByte(rest, '/'); k >= 0 {
		s.Rest = rest[k+1:]
		rest = rest[:k]
	}
	if c, ok := parseCoded(text[:mantissa], rest); ok {
		c.Rest = s.Rest
		return c, true
	}
	lower := strings.ToLower(rest)
	for _, f := range spiceFactors {
		if strings.HasPrefix(lower, f.letters) {
			s.Factor, s.Unit = rest[:len(f.letters)], rest[len(f.letters):]
			value *= f.factor
			break
		}
	}
	if s.Factor == "" {
		s.Unit = rest
	}
	if !unitLetters(s.Unit) || math.IsInf(value, 0) {
		return Spice{}, false
	}
	s.Value = value
	return s, true
}

// spiceMantissa measures sign, digits, point and exponent; 0 if there is no digit.
func spiceMantissa(text string) int {
	k, digits := 0, 0
	if k < len(text) && (text[k] == '+' || text[k] == '-') {
		k++
	}
	run := func() {
		for k < len(text) && text[k] >= '0' && text[k] <= '9' {
			k++
			digits++
		}
	}
	run()
	if k < len(text) && text[k] == '.' {
		k++
		run()
	}
	if digits == 0 {
		return 0
	}
	if k < len(text) && (text[k] == 'e' || text[k] == 'E') {
		e := k + 1
		if e < len(text) && (text[e] == '+' || text[e] == '-') {
			e++
		}
		if e < len(text) && text[e] >= '0' && text[e] <= '9' {
			for e < len(text) && text[e] >= '0' && text[e] <= '9' {
				e++
			}
			return e
		}
	}
	return k
}

// parseCoded reads the letter-for-point code: whole digits, one letter, decimals, unit letters.
func parseCoded(whole, rest string) (Spice, bool) {
	if strings.ContainsAny(whole, ".eE") {
		return Spice{}, false
	}
	for letter, factor := range coded {
		if !strings.HasPrefix(rest, letter) {
			continue
		}
		decimals := rest[len(letter):]
		k := 0
		for k < len(decimals) && decimals[k] >= '0' && decimals[k] <= '9' {
			k++
		}
		if k == 0 || !unitLetters(decimals[k:]) {
			return Spice{}, false
		}
		value, err := strconv.ParseFloat(whole+"."+decimals[:k], 64)
		if err != nil {
			return Spice{}, false
		}
		return Spice{Value: value * factor, Factor: letter, Unit: decimals[k:], Coded: true}, true
	}
	return Spice{}, false
}

// unitLetters reports whether a text may be a unit behind a number: letters, the ohm sign, a few marks.
func unitLetters(text string) bool {
	for _, r := range text {
		switch {
		case r >= 'a' && r <= 'z', r >= 'A' && r <= 'Z', r >= 0x80, r == '_', r == '%':
		default:
			return false
		}
	}
	return true
}
