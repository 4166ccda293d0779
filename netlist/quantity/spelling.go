package quantity

// spelling says how one unit is written and which prefixes people use with it.
type spelling struct {
	symbol   string   // as printed in reports
	compact  string   // as printed in a duty sheet; empty: symbol
	also     []string // further spellings that are read
	name     string   // for messages: "a voltage in V"
	example  string   // for messages: "25V"
	prefixes string   // prefixes read and printed, one letter each; empty: none
}

// spellings is indexed by Unit. Prefixes keep their SI case: m is milli, M is mega.
var spellings = [...]spelling{
	One:                 {symbol: "", name: "a number or a percentage", example: "20%"},
	Volt:                {symbol: "V", name: "a voltage in V", example: "25V", prefixes: "numkM"},
	Ampere:              {symbol: "A", name: "a current in A", example: "1.5A", prefixes: "pnumk"},
	Ohm:                 {symbol: "Ohm", also: []string{"\u03a9", "\u2126", "ohm"}, name: "a resistance in Ohm", example: "90mOhm", prefixes: "umkMG"},
	Farad:               {symbol: "F", name: "a capacitance in F", example: "2200uF", prefixes: "pnum"},
	Henry:               {symbol: "H", name: "an inductance in H", example: "10mH", prefixes: "pnum"},
	Watt:                {symbol: "W", name: "a power in W", example: "2W", prefixes: "numk"},
	Hertz:               {symbol: "Hz", name: "a frequency in Hz", example: "50Hz", prefixes: "mkMG"},
	Second:              {symbol: "s", name: "a time in s", example: "10ms", prefixes: "pnum"},
	Hour:                {symbol: "h", name: "a time in h", example: "40000h"},
	Celsius:             {symbol: "degC", compact: "C", also: []string{"C", "°C"}, name: "a temperature in C", example: "45C"},
	Kelvin:              {symbol: "K", name: "a temperature difference in K", example: "25K"},
	KelvinPerWatt:       {symbol: "K/W", also: []string{"C/W", "degC/W", "°C/W"}, name: "a thermal resistance in K/W", example: "6K/W"},
	WattPerKelvin:       {symbol: "W/K", also: []string{"W/C", "W/degC", "W/°C"}, name: "a derating slope in W/K", example: "6.67mW/K", prefixes: "m"},
	AmpereSquaredSecond: {symbol: "A2s", also: []string{"A²s", "A^2s"}, name: "a melting integral in A2s", example: "1.2A2s"},
	Joule:               {symbol: "J", name: "an energy in J", example: "0.5J", prefixes: "numk"},
	VoltAmpere:          {symbol: "VA", name: "an apparent power in VA", example: "18VA", prefixes: "mk"},
	Degree:              {symbol: "deg", also: []string{"°"}, name: "an angle in deg", example: "90deg"},
	Coulomb:             {symbol: "C", compact: "As", also: []string{"As"}, name: "a charge in As", example: "2mAs", prefixes: "pnum"},
}

// prefix is an SI prefix as people write it.
type prefix struct {
	letter   string
	exponent int
}

// prefixes in falling order of size; an empty letter is the unit itself.
var prefixes = []prefix{{"G", 9}, {"M", 6}, {"k", 3}, {"", 0}, {"m", -3}, {"u", -6}, {"n", -9}, {"p", -12}}

// micro lists the letters read as u: the micro sign U+00B5 and the Greek letter U+03BC.
var micro = []string{"\u00b5", "\u03bc"}

func (u Unit) spelling() spelling {
	if int(u) < len(spellings) {
		return spellings[u]
	}
	return spelling{symbol: "?", name: "a quantity of an unknown unit"}
}

// String is the unit's symbol as reports print it: "V", "Ohm", "degC", "K/W"; empty for a ratio.
func (u Unit) String() string { return u.spelling().symbol }

// Expectation says in words what a value of this unit looks like: "a voltage in V, such as 25V".
func (u Unit) Expectation() string {
	s := u.spelling()
	if s.example == "" {
		return s.name
	}
	return s.name + ", such as " + s.example
}

// compactSymbol is the symbol a duty sheet prints.
func (u Unit) compactSymbol() string {
	if s := u.spelling(); s.compact != "" {
		return s.compact
	}
	return u.spelling().symbol
}

// units lists every unit, in the order in which an unexpected one is guessed.
func units() []Unit {
	list := make([]Unit, len(spellings))
	for i := range list {
		list[i] = Unit(i)
	}
	return list
}
