package netlist

import (
	"math"
	"testing"
)

// Numbers and formulas.
func TestPracticeOfNumbers(t *testing.T) {
	r := func(value string) string { return "t\nV1 a 0 1\nR1 a 0 " + value + "\n" }
	c := func(value string) string { return "t\nV1 a 0 1\nC1 a 0 " + value + "\n" }
	l := func(value string) string { return "t\nV1 a 0 1\nL1 a 0 " + value + "\n" }
	is := func(name, value string) string { return "V1(a 0)=1 " + name + "1(a 0)=" + value }
	hold(t, []practice{
		{"plain", r("4700"), is("R", "4700"), ""},
		{"k", r("4.7k"), is("R", "4700"), ""},
		{"K", r("4.7K"), is("R", "4700"), ""},
		{"exponent", r("4.7e3"), is("R", "4700"), ""},
		{"Meg", r("1Meg"), is("R", "1e+06"), ""},
		{"MEG with unit", r("1.5MEGohm"), is("R", "1.5e+06"), ""},
		{"upper M is milli", r("2000M"), is("R", "2"), "suffix: `M` is milli"},
		{"unit behind the factor", c("10uF"), is("C", "1e-05"), ""},
		{"unit behind the factor, inductance", l("820uH"), is("L", "0.00082"), ""},
		{"unit without factor", l("1H"), is("L", "1"), ""},
		{"F is femto", c("1F"), is("C", "1e-15"), "suffix: femto"},
		{"a capacitance without factor", c("10"), is("C", "10"), "suffix: scale factor"},
		{"MF on a capacitor is milli", c("10MF"), is("C", "0.01"), "suffix: `M` is milli"},
		{"longer units", r("2kOhm"), is("R", "2000"), ""},
		{"omega as unit", r("2kΩ"), is("R", "2000"), ""},
		{"value, blank, unit, package", c("10 uF (0805)"), is("C", "1e-05"), "assumed: read `10 uF` as 10uF|assumed: `0805` behind the value"},
		{"value is a word", r("R"), is("R", "unknown"), ""},
		{"value is missing", r(""), is("R", "unknown"), ""},
		{"zero ohms", r("0k"), is("R", "0"), ""},
		{"leading point", c(".1u"), is("C", "1e-07"), ""},
		{"letter for the point", r("4k7"), is("R", "4700"), ""},
		{"letter for the point, ohms", r("4R7"), is("R", "4.7"), ""},
		{"letter for the point, micro", c("2u2"), is("C", "2.2e-06"), ""},
		{"mil", l("10mil"), is("L", "0.000254"), ""},
		{"rating behind a stroke, capacitor", c("470uF/50V"), is("C", "0.00047"), ""},
		{"rating behind a stroke, resistor", r("100R/2W"), is("R", "100"), ""},
		{"value and rating in quotes", c("\"4.7mF 63V\""), is("C", "0.0047"), ""},
		{"value, rating and technology", c("1u/60V/tantalum"), is("C", "1e-06"), ""},
		{"a word that says nothing", r("1k foo"), is("R", "1000"), "assumed: `foo` behind the value"},
		{"a second number", r("1k 2k"), is("R", "1000"), "assumed: `2k` behind the value"},
		{"value and rating divided by a comma", c("1000uF,16V"), is("C", "0.001"), ""},
		{"value and tolerance divided by a comma and a blank", r("1k, 1%"), is("R", "1000"), ""},
		{"one part behind a value that says nothing", c("10uF/450V/105C"), is("C", "1e-05"), "assumed: `105C` behind the value"},
		{"a tolerance is no value", r("5%"), is("R", "unknown"), ""},
		{"a tolerance with a blank is no value", r("5 %"), is("R", "unknown"), ""},
		{"a tolerance before the value", r("1% 4k7"), is("R", "4700"), ""},
		{"a tolerance behind a blank", c("10u 20 %"), is("C", "1e-05"), ""},
		{"a tolerance in the letter code", r("1k5%"), is("R", "unknown"), ""},
		{"a rating is no value, resistor", r("2W"), is("R", "unknown"), ""},
		{"a rating is no value, capacitor", c("63V"), is("C", "unknown"), ""},
		{"a rating before the value", c("63V 10u"), is("C", "1e-05"), ""},
		{"temperature coefficients in a list", r("R=1k TC=0.01,0.02"), is("R", "1000"), ""},
		{"temperature coefficients as words", r("1k TC 0.01 0.02"), is("R", "1000"), ""},
		{"a list behind TC= is no value", r("RX TC=0.01,0.02"), is("R", "unknown"), ""},
		{"a negative resistance", r("-5"), is("R", "unknown"), ""},
		{"formula in braces", r("{2*(rl+1)} \n.param rl=4"), is("R", "10"), ""},
		{"formula in braces, power and root", r("{sqrt(2^4)*3}"), is("R", "12"), ""},
		{"braces within braces", r("{2*{rl}}\n.param rl=4"), is("R", "8"), ""},
		{"formula in quotes", r("'2*rl'\n.param rl=4"), is("R", "8"), ""},
		{"formula in quotes inside SIN", "t\n.param n=10\nV1 a 0 SIN(0 'sqrt(2)*230/n' {100/2})\nR1 a 0 1\n", "V1(a 0)=sin:0:32.53:50 R1(a 0)=1", ""},
		{"parameters refer forward", r("{a}\n.param a={b*2}\n.param b=c c=3k"), is("R", "6000"), ""},
		{"units in a parameter", r("{a}\n.param a=2kOhm"), is("R", "2000"), ""},
		{"ternary", r("{q > 1 ? 5 : 6}\n.param q=2"), is("R", "5"), ""},
		{"if()", r("{if(q > 1, 5, 6)}\n.param q=0"), is("R", "6"), ""},
		{".func", r("{double(3)+double(2)}\n.func double(x) {x*2}"), is("R", "10"), ""},
		{".func of functions", r("{f(1)}\n.func f(x) {g(x)+g(2*x)}\n.func g(y)={y^2}"), is("R", "5"), ""},
		{"a function that is not known", r("{wobble(1k)}"), is("R", "unknown"), ""},
		{"a parameter of a function that is not known, unused", r("1\n.param z={wobble(1)}"), is("R", "1"), "not read: parameter z"},
		{"a parameter defined twice", r("{a}\n.param a=1 a=2"), is("R", "2"), "model: parameter a is defined again"},
		{"m= on a resistor", r("1k m=2"), is("R", "500"), "model: in parallel"},
	})
	refuse(t, map[string]string{
		r("4,7k"):                     "t.cir:3:9: a comma inside a number",
		r("{a}\n.param a={b} b={a}"):  "is defined by itself",
		r("{1/0}"):                    "t.cir:3:8: `1/0` has no finite value",
		r("{x}"):                      "t.cir:3:8: x is neither a number nor a parameter",
		r("{1e308*10}"):               "has no finite value",
		r("{2*}"):                     "the formula `2*` ends too early",
		r("{2*(3}"):                   "ends too early",
		r("{2"):                       "a { is not closed",
		r("{f(1)}\n.func f(a,b) {a}"): "f takes 2 arguments, not 1",
	})
}

// Ratings that stand in values and behind them.
func TestPracticeOfRatingsOnCards(t *testing.T) {
	for card, want := range map[string]map[string]float64{
		"C1 a 0 22u V=50 Irms=.13 Rser=0.1 mfg=\"A B\" type=\"Al el\"": {"UR": 50, "IR": 0.13, "ESR": 0.1},
		"C1 a 0 470uF/50V":           {"UR": 50},
		"C1 a 0 100nF 63V":           {"UR": 63},
		"C1 a 0 \"4.7mF 63V\"":       {"UR": 63},
		"C1 a 0 1u/60V/tantalum":     {"UR": 60},
		"R1 a 0 100R/2W":             {"P70": 2},
		"R1 a 0 10k 1/4W":            {"P70": 0.25},
		"R1 a 0 10k/1/2W/1%":         {"P70": 0.5},
		"R1 a 0 10k 1/4 W":           {"P70": 0.25},
		"R1 a 0 100 5 %  5 W":        {"P70": 5},
		"C1 a 0 22 uF 25 V":          {"UR": 25},
		"R1 a 0 10k 250mW":           {"P70": 0.25},
		"R1 a 0 10k 5Watt":           {"P70": 5},
		"R1 a 0 330 tol=1 pwr=0.5":   {"P70": 0.5},
		"R1 a 0 330 5% 0.5W $ metal": {"P70": 0.5},
	} {
		c := accepted(t, "t\nV1 a 0 1\n"+card+"\n")
		got := map[string]float64{}
		for _, r := range FieldRatings(c.Elements[1]) {
			got[string(r.Symbol)] = r.Value.Low
		}
		for symbol, value := range want {
			if math.Abs(got[symbol]-value) > 1e-9 {
				t.Errorf("%s: %s is %g, want %g (%v)", card, symbol, got[symbol], value, c.Elements[1].Fields)
			}
		}
	}
}
