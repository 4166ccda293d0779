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

// mil marks the one scale factor that is no power of ten: 25.4e-6.
const mil = 1000

// spiceFactors are the scale factors of SPICE as powers of ten, longest first. Case does not matter. `âµ` is the
// lower case of a micro sign that was encoded twice.
var spiceFactors = []struct {
	letters  string
	exponent int
}{
	{"meg", 6}, {"mil", mil},
	{"t", 12}, {"g", 9}, {"k", 3}, {"m", -3},
	{"u", -6}, {"µ", -6}, {"μ", -6}, {"âµ", -6}, {"n", -9}, {"p", -12}, {"f", -15},
}

// coded are the letters of IEC 60062 that may stand for the decimal point, as powers of ten, in their own case: unlike in
// SPICE, M is mega and m milli.
var coded = map[string]int{
	"R": 0, "r": 0, "k": 3, "K": 3, "M": 6, "G": 9, "m": -3,
	"u": -6, "U": -6, "µ": -6, "μ": -6, "n": -9, "N": -9, "p": -12, "P": -12,
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
			value = scaled(text[:mantissa], value, f.exponent)
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

// scaled is a mantissa, whose own value is known, times a power of ten, read as one decimal so that 100u is exactly
// what 100e-6 is.
func scaled(mantissa string, value float64, exponent int) float64 {
	if exponent == mil {
		return value * 25.4e-6
	}
	if e := strings.IndexAny(mantissa, "eE"); e >= 0 {
		own, err := strconv.Atoi(mantissa[e+1:])
		if err != nil {
			return value * math.Pow10(exponent)
		}
		mantissa, exponent = mantissa[:e], exponent+own
	}
	v, err := strconv.ParseFloat(mantissa+"e"+strconv.Itoa(exponent), 64)
	if err != nil {
		return math.Inf(1)
	}
	return v
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

// codedDecimals is how many digits may stand behind the letter: IEC 60062 has values of two to four figures, and
// type numbers such as 2N3055 and 1N4007 are no values.
const codedDecimals = 3

// parseCoded reads the letter-for-point code: whole digits, one letter, decimals, unit letters.
func parseCoded(whole, rest string) (Spice, bool) {
	if strings.ContainsAny(whole, ".eE") {
		return Spice{}, false
	}
	for letter, exponent := range coded {
		if !strings.HasPrefix(rest, letter) {
			continue
		}
		decimals := rest[len(letter):]
		k := 0
		for k < len(decimals) && decimals[k] >= '0' && decimals[k] <= '9' {
			k++
		}
		if k == 0 || k > codedDecimals || !unitLetters(decimals[k:]) {
			return Spice{}, false
		}
		value, err := strconv.ParseFloat(whole+"."+decimals[:k], 64)
		if err != nil {
			return Spice{}, false
		}
		return Spice{Value: scaled(whole+"."+decimals[:k], value, exponent), Factor: letter, Unit: decimals[k:], Coded: true}, true
	}
	return Spice{}, false
}

// unitLetters reports whether a text may be a unit behind a number: letters, the ohm sign, a degree. Other letters
// are refused: they may be a micro sign that lost its encoding.
func unitLetters(text string) bool {
	for _, r := range text {
		switch {
		case r >= 'a' && r <= 'z', r >= 'A' && r <= 'Z', r == '_', r == '%':
		case r == 'Ω', r == '\u2126', r == '°', r == 'µ', r == 'μ':
		default:
			return false
		}
	}
	return true
}
