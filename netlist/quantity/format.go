package quantity

import (
	"math"
	"strconv"
	"strings"
)

// Format writes a value in SI as an engineer reads it, rounded to the given number of significant
// digits, trailing zeros dropped: "1.42 V", "3300 uF", "90 mOhm", "207 V". Farads of a microfarad and
// more stay in uF, as capacitors are marked. digits < 1 writes as many as reading back exactly needs.
// An infinite resistance is "open"; NaN is "unknown".
func Format(value float64, unit Unit, digits int) string {
	return assemble(value, unit, digits, " ", unit.String(), false)
}

// FormatFixed is Format with trailing zeros kept, so that figures in a column agree: "2.00 V".
func FormatFixed(value float64, unit Unit, digits int) string {
	return assemble(value, unit, digits, " ", unit.String(), true)
}

// Percent writes a ratio as a percentage with the given number of significant digits: "-20 %".
func Percent(ratio float64, digits int) string {
	if text, special := notFinite(ratio, One); special {
		return text
	}
	d := decimalOf(ratio, digits)
	d.point += 2
	return d.text(false, digits) + " %"
}

// String writes the value exactly, as Format does: "3300 uF".
func (v Value) String() string { return Format(v.Number, v.Unit, 0) }

// Compact writes the value exactly as a duty sheet spells it, without spaces: "3300uF", "45C".
// Parse reads it back to the same number.
func (v Value) Compact() string {
	return assemble(v.Number, v.Unit, 0, "", v.Unit.compactSymbol(), false)
}

// String writes the interval as reports print it: "207..253 V", "20 Ohm..open", "100 mA..1.5 A".
func (i Interval) String() string { return i.Format(0) }

// Format is String with the ends rounded to the given number of significant digits.
func (i Interval) Format(digits int) string {
	low, high := Format(i.Low, i.Unit, digits), Format(i.High, i.Unit, digits)
	if low == high {
		return low
	}
	if l, unit, found := strings.Cut(low, " "); found && strings.HasSuffix(high, " "+unit) {
		return l + ".." + high
	}
	if i.Low == 0 && i.Unit != One && !math.IsInf(i.High, 0) {
		return "0.." + high
	}
	return low + ".." + high
}

// Compact writes the interval exactly as a duty sheet spells it: "207V..253V", "20Ohm..open".
// ParseInterval reads it back to the same numbers. Equal ends are written once.
func (i Interval) Compact() string {
	low := Value{i.Low, i.Unit}.Compact()
	if i.Low == i.High {
		return low
	}
	return low + ".." + Value{i.High, i.Unit}.Compact()
}

func notFinite(value float64, unit Unit) (string, bool) {
	switch {
	case math.IsNaN(value):
		return "unknown", true
	case math.IsInf(value, 1) && unit == Ohm:
		return "open", true
	case math.IsInf(value, 1):
		return "unlimited", true
	case math.IsInf(value, -1):
		return "-unlimited", true
	}
	return "", false
}

func assemble(value float64, unit Unit, digits int, space, symbol string, fixed bool) string {
	if text, special := notFinite(value, unit); special {
		return text
	}
	d := decimalOf(value, digits)
	p := choosePrefix(d, unit)
	d.point -= p.exponent
	number := d.text(fixed, digits)
	if symbol == "" {
		return number
	}
	return number + space + p.letter + symbol
}

// choosePrefix finds the prefix that leaves one to three digits before the point, with the habits of
// the trade: whole volts, amperes and watts up to four digits, microfarads however many.
func choosePrefix(d decimal, unit Unit) prefix {
	none := prefix{}
	allowed := unit.spelling().prefixes
	if d.zero() || allowed == "" {
		return none
	}
	magnitude := d.point - 1 // exponent of the first digit
	switch unit {
	case Farad:
		switch {
		case magnitude >= 0:
			return none
		case magnitude >= -6:
			return prefix{"u", -6}
		}
	case Volt, Ampere, Watt, VoltAmpere, Joule:
		if magnitude >= 0 && magnitude < 4 {
			return none
		}
	}
	last := none
	for _, p := range prefixes {
		if p.letter != "" && !strings.Contains(allowed, p.letter) {
			continue
		}
		if p.exponent <= magnitude {
			return p
		}
		last = p
	}
	return last
}

// decimal is a decimal number: 0.digits x 10^point, with its sign.
type decimal struct {
	negative bool
	digits   string // without leading zeros; empty for zero
	point    int
}

// decimalOf rounds a finite number to significant digits (all that are needed when digits < 1).
func decimalOf(value float64, digits int) decimal {
	text := strconv.FormatFloat(value, 'e', max(digits, 0)-1, 64)
	negative := strings.HasPrefix(text, "-")
	mantissa, exponent, _ := strings.Cut(strings.TrimPrefix(text, "-"), "e")
	power, _ := strconv.Atoi(exponent)
	all := strings.TrimRight(strings.Replace(mantissa, ".", "", 1), "0")
	if all == "" {
		return decimal{}
	}
	return decimal{negative: negative, digits: all, point: power + 1}
}

func (d decimal) zero() bool { return d.digits == "" }

// text writes the number; fixed pads it with zeros to the given number of significant digits.
func (d decimal) text(fixed bool, digits int) string {
	if d.zero() {
		if fixed && digits > 1 {
			return "0." + strings.Repeat("0", digits-1)
		}
		return "0"
	}
	all := d.digits
	if fixed && len(all) < digits {
		all += strings.Repeat("0", digits-len(all))
	}
	var text string
	switch {
	case d.point > 21 || d.point < -5:
		text = all[:1]
		if len(all) > 1 {
			text += "." + all[1:]
		}
		text += "e" + strconv.Itoa(d.point-1)
	case d.point <= 0:
		text = "0." + strings.Repeat("0", -d.point) + all
	case d.point >= len(all):
		text = all + strings.Repeat("0", d.point-len(all))
	default:
		text = all[:d.point] + "." + all[d.point:]
	}
	if d.negative {
		return "-" + text
	}
	return text
}
