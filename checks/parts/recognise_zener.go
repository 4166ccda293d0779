package parts

import (
	"regexp"
	"strconv"
	"strings"
)

var proElectron = regexp.MustCompile(`^` + diodePrefix + `(BZ[A-Z]{1,2}\d{2,3})[-_ ]?([ABCD]?)[-_ ]?(\d{1,3})(?:[V.](\d{1,2}))?` + suffix + `$`)

// europeanLetter is the tolerance letter of a Pro Electron number; without one the widest is taken.
func europeanLetter(written string) string {
	if written == "" {
		return "D"
	}
	return written
}

// zenerFamilies are the spellings of zeners, named by number or by voltage.
var zenerFamilies = []family{
	// JEDEC numbers: 1N4734A, 1N4734, 1N5231BTR.
	{regexp.MustCompile(`^` + diodePrefix + `(1N\d{3,4})([A-Z]?)([A-Z0-9-_/.+#()]{0,16})$`), func(m []string) string {
		if rest := m[3]; m[2] == "" && rest != "" && (rest[0] >= '0' && rest[0] <= '9') {
			return ""
		}
		if another.MatchString(m[2] + m[3]) {
			return ""
		}
		for _, rule := range gradeRules[:3] {
			if rule.name.MatchString(m[1]+m[2]) && packing.MatchString(m[3]) {
				return m[1] + m[2]
			}
			if rule.name.MatchString(m[1]) && packing.MatchString(m[2]+m[3]) {
				return m[1] // the letter is packing, not a grade
			}
		}
		return ""
	}},
	// Pro Electron numbers with a row: BZX84C6V2L, BZX85-C12, BZX55 B 5V1.
	{proElectron, func(m []string) string {
		volts, ok := zenerVolts(m[3], m[4])
		if !ok || another.MatchString(m[5]) {
			return ""
		}
		code := voltCode(volts)
		if volts < 10 && !strings.Contains(code, "V") {
			code += "V0"
		}
		return m[1] + europeanLetter(m[2]) + code
	}},
	// Pro Electron numbers without a row: the voltage and the tolerance are in the number.
	{proElectron, func(m []string) string {
		volts, ok := zenerVolts(m[3], m[4])
		if !ok || another.MatchString(m[5]) {
			return ""
		}
		return zenerName(volts, europeanLetter(m[2]))
	}},
	// Surface-mount twins of the 1N5221 series, other in power: MMSZ5231B. Only the voltage is theirs.
	{regexp.MustCompile(`^` + diodePrefix + `MM[SB]Z(52[2-8]\d)(B?)` + suffix + `$`), func(m []string) string {
		row, ok := Default().Lookup("1N" + m[1] + "B")
		if !ok || another.MatchString(m[3]) {
			return ""
		}
		v, _ := row.Value(VZ)
		if m[2] == "B" {
			return zenerName(v.Number, "C") // 5 %
		}
		return zenerName(v.Number, "")
	}},
	// Trade numbers that carry the voltage: ZMM5V1, ZPD12, ZPY6.8.
	{regexp.MustCompile(`^` + diodePrefix + `Z(?:MM|PD|PY)(\d{1,3})(?:[V.](\d{1,2}))?` + suffix + `$`), func(m []string) string {
		volts, ok := zenerVolts(m[1], m[2])
		if !ok || another.MatchString(m[3]) {
			return ""
		}
		return zenerName(volts, "")
	}},
	// JEDEC series that follow the E24 steps: 1N5918B, 1SMB5918BT3G, 1N963B, 1N3022B. Only the voltage is theirs.
	{regexp.MustCompile(`^` + diodePrefix + `(1N|1SM[AB])(\d{3,4})([ABCD]?)([A-Z0-9-_/.+#()]{0,16})$`), func(m []string) string {
		if !packing.MatchString(m[4]) || another.MatchString(m[4]) {
			return ""
		}
		return zenerName(steppedVolts(m[1], m[2]), map[string]string{"A": "D", "B": "C", "C": "B", "D": "A", "": "M"}[m[3]])
	}},
	// Trade series that carry the voltage: MMSZ5V1T1G, MM3Z12, TZMC5V1, SMAZ5V1, PDZ5.1B, UDZS5.1B, RLZ5.1B.
	{regexp.MustCompile(`^` + diodePrefix + `(?:SZ)?(?:MMSZ|MM[1357]Z|SM[ABF]Z|TZM([BC]?)|TZX|[DEGKPU]DZ[SV]?(?:TE-?\d{2})?|MTZJ?|RLZ(?:TE-?\d{2})?|ZMY)[-_]?(\d{1,3})(?:[V.](\d{1,2}))?` + suffix + `$`), func(m []string) string {
		return zenerOfSeries(m[2], m[3], m[4], m[1])
	}},
	{regexp.MustCompile(`^` + diodePrefix + `RD(\d{1,3})(?:\.(\d))?((?:E|F|M|P|S|UM|UJ|FM|FS|ES|JS|HS)(?:B?\d?)(?:[-_/.+#()][A-Z0-9-_/.+#()]{0,16})?)$`), func(m []string) string {
		return zenerOfSeries(m[1], m[2], m[3], "")
	}},
	// Named by voltage: ZENER_12, ZENER5V1, ZENER-5.1V.
	{regexp.MustCompile(`^(?:X|D|DI|D_|X_)?ZENER[-_ ]?(\d{1,3})(?:([V.])(\d{1,2})?)?(V?)$`), func(m []string) string {
		volts, ok := zenerVolts(m[1], m[3])
		if !ok || m[2] == "." && m[3] == "" {
			return ""
		}
		if m[2] == "" && m[4] == "" && !(volts >= 10 && inE24(volts)) {
			return "" // a bare small number may be a count: ZENER_2
		}
		return zenerName(volts, "")
	}},
	// Short forms need the V: DZ5V1, ZD12V, Z6V8, 5V1ZENER.
	{regexp.MustCompile(`^(?:Z|DZ|ZD|ZEN)[-_]?(\d{1,3})(?:V(\d{1,2})?|\.(\d{1,2})V)$`), func(m []string) string {
		if volts, ok := zenerVolts(m[1], m[2]+m[3]); ok {
			return zenerName(volts, "")
		}
		return ""
	}},
	{regexp.MustCompile(`^(\d{1,3})(?:V(\d{1,2})?|\.(\d{1,2})V)[-_]?ZENER$`), func(m []string) string {
		if volts, ok := zenerVolts(m[1], m[2]+m[3]); ok {
			return zenerName(volts, "")
		}
		return ""
	}},
}

// packing is what may stand behind the grade letter of a JEDEC zener: plating, tape, package.
var packing = regexp.MustCompile(`^(?:G|T|T[13]G?|TR|TRG|TA|TP|TB|TAP|RL|RLG|UR|URG|W|WS|SMD|LL|P|E3|M)?(?:[-_/.+#()][A-Z0-9-_/.+#()]*)?$`)

// zenerVolts reads "5","1" as 5.1 V. ok is false outside 1.8 to 300 V.
func zenerVolts(whole, decimals string) (float64, bool) {
	volts, err := strconv.ParseFloat(whole+"."+decimals+"0", 64)
	return volts, err == nil && volts >= 1.8 && volts <= 300
}

// inE24 tells whether volts has two figures of the E24 series.
func inE24(volts float64) bool {
	up, ok := NextUp(E24, volts)
	return ok && up == volts
}

// zenerOfSeries names the zener of a trade series; a number that is no step of E24 is a code, not a voltage.
func zenerOfSeries(whole, decimals, rest, grade string) string {
	volts, ok := zenerVolts(whole, decimals)
	if !ok || !inE24(volts) || decimals == "" && volts < 10 || another.MatchString(rest) {
		return ""
	}
	return zenerName(volts, grade)
}

// steppedSeries are the JEDEC zeners whose numbers count the steps of E24, from a number and voltage to the last number.
var steppedSeries = []struct {
	stem        string
	first, last int
	volts       float64
}{
	{"1N", 957, 992, 6.8}, {"1N", 3016, 3051, 6.8}, {"1N", 5913, 5956, 3.3},
	{"1SMA", 5913, 5956, 3.3}, {"1SMB", 5913, 5956, 3.3},
}

// steppedVolts is the voltage of a number of those series, 0 if it is of none.
func steppedVolts(stem, digits string) float64 {
	number, err := strconv.Atoi(digits)
	if err != nil {
		return 0
	}
	for _, s := range steppedSeries {
		if s.stem != stem || number < s.first || number > s.last {
			continue
		}
		volts := s.volts
		for range number - s.first {
			volts, _ = NextUp(E24, volts*1.01)
		}
		return volts
	}
	return 0
}

// zenerSeries are the beginnings of names that only zeners have, and JEDEC zeners that no rule gives a voltage.
var zenerSeries = regexp.MustCompile(`ZENER|^` + diodePrefix + `(?:SZ)?(?:(?:MMSZ|MMBZ52|MM[1357]Z|SM[ABF]Z|TZM[BC]?|TZX|TZQ|[DEGKPU]DZ[SV]?(?:TE-?\d{2})?|MTZJ?|RLZ(?:TE-?\d{2})?|HZ[A-Z]{0,2}|BZ[A-Z]{1,2}|ZM[MY]|ZP[DY]|DZ|ZD|ZEN|Z)[-_]?\d|` +
	`RD\d{1,3}(?:\.\d)?(?:E|F|M|P|S|UM|JS)|1SM[AB]59|1N(?:4099|41[0-2]\d|413[0-5]|437[0-2]|461[4-9]|462[0-7]|467[89]|46[89]\d|470\d|471[0-7]|82[1-9]))`)

// NamesZener reports whether a type name is one that only zeners have, whether or not it tells the voltage: to solve
// such a diode without breakdown would misread it.
func NamesZener(typeName string) bool {
	return len(typeName) <= maxTypeName && zenerSeries.MatchString(fold(strings.TrimSpace(typeName)))
}
