package parts

import (
	"regexp"
	"strconv"
	"strings"

	"railproof/netlist"
)

// maxTypeName is the longest type name that is looked at, in bytes.
const maxTypeName = 64

// family is one way of writing a group of type numbers. pattern matches the whole folded name;
// canonical turns its groups into the name of a row, or "" where the name only looks right.
type family struct {
	pattern   *regexp.Regexp
	canonical func(m []string) string
}

// Pieces of type names.
const (
	// What exporters and libraries put before a diode's number.
	diodePrefix = `(?:_{0,2}(?:DIODE|ZENER|DI|BR|D|X)[_-]?|_{1,2})?`
	// What exporters put before a regulator's number.
	partPrefix = `(?:_{0,2}(?:X|U|IC|REG|VR)[_-]|_{1,2}|X)?`
	// Package, tape, plating and maker behind a number that ends in a digit: letters first, or a separator.
	suffix = `((?:[A-Z][A-Z0-9]{0,7})?(?:[-_/.+#()][A-Z0-9-_/.+#()]{0,16})?)`
	// The same behind a number that ends in a letter: a separator first.
	separated = `((?:[-_/.+#()][A-Z0-9-_/.+#()]{0,16})?)`
	// Makers of three-terminal regulators and references, by their letters.
	makers = `(?:LM|MC|UA|L|KA|NJM|TL|TA|TS|UPC|AN|BA|KIA|IL|HA|CJ|WS|AZ|ST|UTC|NCV|NCP|SG|CW|HT)`
)

// Find finds the row of a type name as people and exporters write it: "DI_1N4734A", "D1n4001rl",
// "LM7812CT", "BZX84C6V2L", "ZENER_12". A name that could be something else is not found.
func (t *Table) Find(typeName string) (*Row, bool) {
	name := strings.TrimSpace(typeName)
	if name == "" || len(name) > maxTypeName {
		return nil, false
	}
	name = strings.NewReplacer("µ", "U", "μ", "U").Replace(name)
	name = fold(name)
	for _, row := range t.user {
		if fold(row.Type) == name {
			return row, true
		}
	}
	if !strings.ContainsAny(name, "0123456789") {
		return nil, false
	}
	for _, f := range spellings {
		m := f.pattern.FindStringSubmatch(name)
		if m == nil {
			continue
		}
		if canonical := f.canonical(m); canonical != "" {
			if row, ok := t.Lookup(canonical); ok {
				return row, true
			}
		}
	}
	if canonical, ok := t.numbers.find(name); ok {
		return t.Lookup(canonical)
	}
	if canonical := t.transistorNamed(name); canonical != "" {
		return t.Lookup(canonical)
	}
	return nil, false
}

// spellings are tried in this order; none of them overlaps the numbers of rectifiers and bridges.
var spellings = append(append(append([]family(nil), zenerFamilies...), regulatorFamilies...), aliasFamilies...)

// numbers are the type numbers of rectifiers and bridges, by every way to write the separator in them.
type numbers map[string]string

func numbersOf(rows []*Row) numbers {
	known := numbers{}
	for _, row := range rows {
		if row.Role != netlist.RoleRectifier && row.Role != netlist.RoleBridge || tooShort.MatchString(row.Type) {
			continue
		}
		for _, separator := range []string{"-", "_", ""} {
			known[strings.ReplaceAll(row.Type, "-", separator)] = row.Type
		}
	}
	return known
}

// longestNumber is the length of the longest type number with a separator.
const longestNumber = 12

// find finds the number at the beginning of a name, behind what exporters put there; the longest wins,
// and what follows it must be a suffix.
func (known numbers) find(name string) (string, bool) {
	starts := []int{0}
	if m := prefixed.FindStringIndex(name); m != nil && m[1] > 0 {
		starts = append(starts, m[1])
	}
	for _, start := range starts {
		rest := name[start:]
		for length := min(len(rest), longestNumber); length >= 2; length-- {
			number, ok := known[rest[:length]]
			if !ok || start > 0 && bareOnly.MatchString(number) {
				continue
			}
			behind := afterDigit
			if last := number[len(number)-1]; last < '0' || last > '9' {
				behind = afterLetter
			}
			if tail := rest[length:]; behind.MatchString(tail) && !another.MatchString(tail) {
				return number, true
			}
		}
	}
	return "", false
}

var (
	prefixed    = regexp.MustCompile(`^` + diodePrefix)
	afterDigit  = regexp.MustCompile(`^` + suffix + `$`)
	afterLetter = regexp.MustCompile(`^` + separated + `$`)
)

// tooShort are trade names that are as likely to be a name somebody gave: they are found by their
// exact name with Lookup, never recognised.
var tooShort = regexp.MustCompile(`^M[1-7]$`)

// bareOnly are trade names short enough that a letter before them makes another word.
var bareOnly = regexp.MustCompile(`^(?:US1.|S1.|SS1.|W\d+|P600.)$`)

// another tells a suffix that means another part or several of them: "1N4007X2", "LM7805-12".
var another = regexp.MustCompile(`^(?:[-_]?X\d|[-_]\d+(?:\.\d+)?V?\d*$)`)

// aliasFamilies are other trade names of built-in rows.
var aliasFamilies = []family{
	{regexp.MustCompile(`^` + diodePrefix + `KBP2(005|01|02|04|06|08|10)` + suffix + `$`), func(m []string) string { return "2KBP" + m[1] }},
	{regexp.MustCompile(`^6A(05|10|1|2|4|6|8)` + suffix + `$`), func(m []string) string {
		letter := map[string]string{"05": "A", "1": "B", "2": "D", "4": "G", "6": "J", "8": "K", "10": "M"}
		return "P600" + letter[m[1]]
	}},
}

// regulatorFamilies are the spellings of three-terminal regulators and shunt references.
var regulatorFamilies = []family{
	// 7812, LM7812CT, 78L05ACZ, MC79M15BTG.
	{regexp.MustCompile(`^` + partPrefix + makers + `?(7[89])([LM]?)(05|06|08|09|10|12|15|18|24)` + suffix + `$`), func(m []string) string {
		if another.MatchString(m[4]) {
			return ""
		}
		return m[1] + m[2] + m[3]
	}},
	// LM340T-12, LM340-5.0: the same law as 7812, 7805.
	{regexp.MustCompile(`^` + partPrefix + `LM340[A-Z]{0,3}[-_]?(5|8|12|15)(?:[.V]0)?(?:[-_/][A-Z0-9-_/]{0,10})?$`), func(m []string) string {
		if len(m[1]) == 1 {
			return "780" + m[1]
		}
		return "78" + m[1]
	}},
	// LM317T, LM317LZ, LM337, LM350AT, LM338K; not the high-voltage versions.
	{regexp.MustCompile(`^` + partPrefix + makers + `(317|337|338|350)` + suffix + `$`), func(m []string) string {
		rest := m[2]
		if strings.HasPrefix(rest, "HV") || strings.HasPrefix(rest, "-HV") || another.MatchString(rest) {
			return ""
		}
		if strings.HasPrefix(rest, "L") || strings.HasPrefix(rest, "M") {
			if m[1] != "317" {
				return "" // no row for the small versions of the others
			}
			return "317" + rest[:1]
		}
		return m[1]
	}},
	// TL431, TL431ACLP, KA431BZ.
	{regexp.MustCompile(`^` + partPrefix + makers + `431` + suffix + `$`), func(m []string) string {
		rest := m[1]
		if another.MatchString(rest) {
			return ""
		}
		if strings.HasPrefix(rest, "A") || strings.HasPrefix(rest, "B") {
			return "431" + rest[:1]
		}
		return "431"
	}},
	// LM1117-3.3, LM1117MPX-5.0, AMS1117-3.3, 1117-ADJ.
	{regexp.MustCompile(`^` + partPrefix + `([A-Z]{0,4})1117([A-Z]{0,4})[-_]?` + outputVoltage + `$`), func(m []string) string {
		maker := ""
		if m[1] == "LM" {
			maker = "LM"
		} else if m[1] == "TLV" {
			return "" // a CMOS type of another law
		}
		return withVoltage(maker+"1117", m[3], m[4])
	}},
	// LM1086CT-3.3, LM2940CT-12, LP2950CZ-5.0, LM2931Z-5.0.
	{regexp.MustCompile(`^` + partPrefix + `(?:LM|LP|LT|KA|MIC|UA|L|TS|NJM|IL|AMS)?(1084|1085|1086|2940|2931|2950)([A-Z]{0,4})[-_]?` + outputVoltage + `$`), func(m []string) string {
		return withVoltage(m[1], m[3], m[4])
	}},
}

// outputVoltage is the voltage behind a type number: 3.3, 3V3, 5.0, 12, ADJ.
const outputVoltage = `(ADJ|\d{1,2})(?:[.V](\d{1,2}))?V?(?:[-_/+#][A-Z0-9-_/+#]{0,12})?`

// withVoltage names the row of a fixed voltage or of the adjustable version.
func withVoltage(number, whole, decimals string) string {
	if whole == "ADJ" {
		if decimals != "" {
			return ""
		}
		return number + "-ADJ"
	}
	volts, err := strconv.ParseFloat(whole+"."+decimals+"0", 64)
	if err != nil {
		return ""
	}
	return number + "-" + strconv.FormatFloat(volts, 'f', -1, 64)
}
