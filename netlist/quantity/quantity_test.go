package quantity

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

func TestParse(t *testing.T) {
	for _, c := range []struct {
		text string
		unit Unit
		want float64
	}{
		{"25V", Volt, 25},
		{"90mOhm", Ohm, 0.09},
		{"4.7kΩ", Ohm, 4700},
		{"1M\u2126", Ohm, 1e6},
		{"1mohm", Ohm, 1e-3},
		{"1.2A2s", AmpereSquaredSecond, 1.2},
		{"6K/W", KelvinPerWatt, 6},
		{"6C/W", KelvinPerWatt, 6},
		{"40000h", Hour, 40000},
		{"-20%", One, -0.2},
		{"+20%", One, 0.2},
		{"0.12", One, 0.12},
		{"45C", Celsius, 45},
		{"-25degC", Celsius, -25},
		{"105°C", Celsius, 105},
		{"2200uF", Farad, 2.2e-3},
		{"2200\u00b5F", Farad, 2.2e-3},
		{"2200\u03bcF", Farad, 2.2e-3},
		{"100 nF", Farad, 1e-7},
		{"6.67mW/K", WattPerKelvin, 6.67e-3},
		{"1e-3A", Ampere, 1e-3},
		{".5A", Ampere, 0.5},
		{"5.A", Ampere, 5},
		{"50Hz", Hertz, 50},
		{"2us", Second, 2e-6},
		{"18VA", VoltAmpere, 18},
	} {
		got, err := Parse(c.text, c.unit)
		if err != nil {
			t.Errorf("Parse(%q): %v", c.text, err)
		} else if got.Number != c.want || got.Unit != c.unit {
			t.Errorf("Parse(%q) = %v %v, want %v", c.text, got.Number, got.Unit, c.want)
		}
	}
	if open, err := Parse("open", Ohm); err != nil || !math.IsInf(open.Number, 1) {
		t.Errorf("open = %v, %v", open, err)
	}
}

func TestParseErrors(t *testing.T) {
	for _, c := range []struct {
		text   string
		unit   Unit
		offset int
		want   string
	}{
		{"25", Volt, 2, "the unit is missing; expected a voltage in V, such as 25V"},
		{"25A", Volt, 2, "the unit A means a current in A; expected a voltage in V"},
		{"25v", Volt, 2, "v is not in SI case (V)"},
		{"4.7KOhm", Ohm, 3, "KOhm is not in SI case (kOhm)"},
		{"2200UF", Farad, 4, "UF is not in SI case (uF)"},
		{"10m", Farad, 2, "m is a prefix without a unit"},
		{"25Volt", Volt, 2, `"Volt" is no unit`},
		{"V", Volt, 0, "no number"},
		{"", Volt, 0, "no number"},
		{"open", Volt, 0, "open is a resistance"},
		{"2,2uF", Farad, 1, `",2uF" is no unit`},
		{"1e999V", Volt, 0, "the exponent is out of range"},
		{"1e308kV", Volt, 0, "the number is out of range"},
		{"NaNV", Volt, 0, "no number"},
		{"infV", Volt, 0, "no number"},
		{"20%", Volt, 2, "the unit % means a number or a percentage"},
		{"5V", One, 1, "the unit V means a voltage in V"},
		{strings.Repeat("9", 65) + "V", Volt, 0, "more than 64 characters"},
	} {
		_, err := Parse(c.text, c.unit)
		fault, ok := err.(*Error)
		if !ok {
			t.Errorf("Parse(%q) = %v, want an error", c.text, err)
		} else if !strings.Contains(fault.Error(), c.want) || fault.Offset != c.offset {
			t.Errorf("Parse(%q): offset %d, %v; want offset %d, %s", c.text, fault.Offset, fault, c.offset, c.want)
		}
	}
}

func TestParseInterval(t *testing.T) {
	for _, c := range []struct {
		text      string
		unit      Unit
		low, high float64
	}{
		{"0C..45C", Celsius, 0, 45},
		{"20Ohm..open", Ohm, 20, math.Inf(1)},
		{"-10%..+10%", One, -0.1, 0.1},
		{"0A..0.6A", Ampere, 0, 0.6},
		{"-12.6V..-11.4V", Volt, -12.6, -11.4},
		{"12V", Volt, 12, 12},
		{"5.V...5kV", Volt, 5, 500},
	} {
		got, err := ParseInterval(c.text, c.unit)
		if err != nil || got != (Interval{c.low, c.high, c.unit}) {
			t.Errorf("ParseInterval(%q) = %v, %v", c.text, got, err)
		}
	}
	for _, c := range []struct {
		text   string
		unit   Unit
		offset int
		want   string
	}{
		{"0..45C", Celsius, 1, "the lower end has no unit"},
		{"0C..45", Celsius, 6, "the unit is missing"},
		{"253V..207V", Volt, 0, "the lower end first: 207V..253V"},
		{"0A..", Ampere, 4, "no number"},
		{"..1A", Ampere, 0, "no number"},
		{"0A..1V", Ampere, 5, "means a voltage"},
	} {
		_, err := ParseInterval(c.text, c.unit)
		fault, ok := err.(*Error)
		if !ok || !strings.Contains(fault.Error(), c.want) || fault.Offset != c.offset {
			t.Errorf("ParseInterval(%q): %v; want offset %d, %s", c.text, err, c.offset, c.want)
		}
	}
}

func TestFormat(t *testing.T) {
	for _, c := range []struct {
		value  float64
		unit   Unit
		digits int
		want   string
	}{
		{3.3e-3, Farad, 3, "3300 uF"},
		{0.47, Farad, 3, "470000 uF"},
		{2.2, Farad, 3, "2.2 F"},
		{1e-7, Farad, 3, "100 nF"},
		{22e-12, Farad, 3, "22 pF"},
		{1.4196, Volt, 3, "1.42 V"},
		{1600, Volt, 4, "1600 V"},
		{25000, Volt, 3, "25 kV"},
		{0.05, Volt, 3, "50 mV"},
		{0.6, Ampere, 3, "600 mA"},
		{-0.58, Volt, 2, "-580 mV"},
		{4700, Ohm, 3, "4.7 kOhm"},
		{0.09, Ohm, 3, "90 mOhm"},
		{math.Inf(1), Ohm, 3, "open"},
		{math.NaN(), Volt, 3, "unknown"},
		{999.6, Ohm, 3, "1 kOhm"}, // rounding carries into the next prefix
		{0, Volt, 3, "0 V"},
		{45, Celsius, 3, "45 degC"},
		{-0.001, Celsius, 3, "-0.001 degC"},
		{40000, Hour, 3, "40000 h"},
		{1.2, AmpereSquaredSecond, 3, "1.2 A2s"},
		{0.8, One, 3, "0.8"},
		{1e-18, Ampere, 3, "0.000001 pA"},
		{3.2e-21, Ampere, 2, "3.2e-9 pA"},
		{12.5, KelvinPerWatt, 3, "12.5 K/W"},
	} {
		if got := Format(c.value, c.unit, c.digits); got != c.want {
			t.Errorf("Format(%v, %v, %d) = %q, want %q", c.value, c.unit, c.digits, got, c.want)
		}
	}
	if got := FormatFixed(2, Volt, 3); got != "2.00 V" {
		t.Errorf("FormatFixed = %q", got)
	}
	if got := Percent(-0.2, 3); got != "-20 %" {
		t.Errorf("Percent = %q", got)
	}
}

func TestIntervalFormat(t *testing.T) {
	for _, c := range []struct {
		in            Interval
		text, compact string
	}{
		{Interval{207, 253, Volt}, "207..253 V", "207V..253V"},
		{Interval{0, 0.6, Ampere}, "0..600 mA", "0A..600mA"},
		{Interval{0.1, 1.5, Ampere}, "100 mA..1.5 A", "100mA..1.5A"},
		{Interval{20, math.Inf(1), Ohm}, "20 Ohm..open", "20Ohm..open"},
		{Interval{0, 45, Celsius}, "0..45 degC", "0C..45C"},
		{Interval{12, 12, Volt}, "12 V", "12V"},
		{Interval{-0.2, 0.2, One}, "-0.2..0.2", "-0.2..0.2"},
	} {
		if got := c.in.String(); got != c.text {
			t.Errorf("String = %q, want %q", got, c.text)
		}
		if got := c.in.Compact(); got != c.compact {
			t.Errorf("Compact = %q, want %q", got, c.compact)
		}
	}
}

// What is printed reads back to the same bits, in either spelling.
func TestRoundTrip(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		unit := rapid.SampledFrom(units()).Draw(t, "unit")
		number := rapid.OneOf(rapid.Float64Range(-1e12, 1e12), rapid.Float64Range(-1e-3, 1e-3), rapid.Float64()).Draw(t, "number")
		value := Value{number, unit}
		for _, text := range []string{value.String(), value.Compact()} {
			if len(text) > maxNumberLength {
				continue // numbers far from any rating may need more than is read
			}
			got, err := Parse(text, unit)
			if err != nil || got != value {
				t.Fatalf("%v prints as %q, reads back %v, %v", number, text, got.Number, err)
			}
		}
	})
}

func TestIntervalRoundTrip(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		unit := rapid.SampledFrom(units()).Draw(t, "unit")
		ends := rapid.SliceOfN(rapid.Float64Range(-1e9, 1e9), 2, 2).Draw(t, "ends")
		in := Interval{min(ends[0], ends[1]), max(ends[0], ends[1]), unit}
		got, err := ParseInterval(in.Compact(), unit)
		if err != nil || got != in {
			t.Fatalf("%v prints as %q, reads back %v, %v", in, in.Compact(), got, err)
		}
	})
}

// Rounding to n digits moves a value by less than one in the n-th digit.
func TestFormatRounds(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		number := rapid.Float64Range(1e-9, 1e9).Draw(t, "number")
		digits := rapid.IntRange(1, 9).Draw(t, "digits")
		got, err := Parse(Format(number, Ohm, digits), Ohm)
		if err != nil || math.Abs(got.Number-number) > number*math.Pow(10, 1-float64(digits))*0.5000001 {
			t.Fatalf("%v to %d digits reads back %v, %v", number, digits, got.Number, err)
		}
	})
}

func FuzzParse(f *testing.F) {
	for _, seed := range []string{"25V", "-20%", "0C..45C", "20Ohm..open", "1.2A2s", "6K/W", "9e9e9", "..", "1e-400V"} {
		f.Add(seed, uint8(Volt))
	}
	f.Fuzz(func(t *testing.T, text string, unit uint8) {
		u := Unit(unit % uint8(len(spellings)))
		if i, err := ParseInterval(text, u); err == nil {
			again, err := ParseInterval(i.Compact(), u)
			if len(i.Compact()) <= maxNumberLength && (err != nil || again != i) {
				t.Fatalf("%q -> %q -> %v, %v", text, i.Compact(), again, err)
			}
		} else if fault := err.(*Error); fault.Offset < 0 || fault.Offset > len([]rune(text)) {
			t.Fatalf("%q: offset %d outside the text", text, fault.Offset)
		}
	})
}
