package quantity

import (
	"math"
	"testing"
)

// Numbers of netlists. The scale factors are those of Berkeley SPICE; the letter code is IEC 60062.
func TestParseSpice(t *testing.T) {
	for text, want := range map[string]float64{
		"2200u": 2200e-6, "2200uF": 2200e-6, "2.2m": 2.2e-3, "4k7": 4700, "4R7": 4.7, "1meg": 1e6, "1MEG": 1e6, "1Meg": 1e6,
		"100n": 100e-9, ".1u": 0.1e-6, "1e-6": 1e-6, "10mil": 254e-6, "1F": 1e-15, "10M": 10e-3, "22µ": 22e-6, "22μF": 22e-6,
		"470uF/50V": 470e-6, "100R/2W": 100, "1u/60V/tantalum": 1e-6, "2kOhm": 2000, "12V": 12, "0k": 0, "-5": -5, "+3.3": 3.3,
		"2u2": 2.2e-6, "1T": 1e12, "3g": 3e9, "7f": 7e-15, "1.5MEGohm": 1.5e6, "1e3": 1000, "1e3k": 1e6, "2M2": 2.2e6,
	} {
		got, ok := ParseSpice(text)
		if !ok || math.Abs(got.Value-want) > 1e-15*math.Abs(want) {
			t.Errorf("%s: %v %v, want %v", text, got.Value, ok, want)
		}
	}
	for _, text := range []string{"", "abc", "nan", "inf", "1e999", "1..2", "--1", "k1", "+", ".", "1k2k3", "5V5V/"} {
		if got, ok := ParseSpice(text); ok && (math.IsNaN(got.Value) || math.IsInf(got.Value, 0) || text != "5V5V/") {
			t.Errorf("%s was read as %v", text, got.Value)
		}
	}
}

func FuzzSpice(f *testing.F) {
	for _, seed := range []string{"4k7", "470uF/50V", "1e-6meg", "10mil", "µ", "1e308k"} {
		f.Add(seed)
	}
	f.Fuzz(func(t *testing.T, text string) {
		if n, ok := ParseSpice(text); ok && (math.IsNaN(n.Value) || math.IsInf(n.Value, 0)) {
			t.Fatalf("%q was read as %v", text, n.Value)
		}
	})
}
