package parts

import (
	"fmt"
	"math"
	"regexp"
	"strconv"
	"strings"

	"railproof/netlist"
	"railproof/netlist/quantity"
)

// gradeRule is how a series of zeners marks its tolerance.
type gradeRule struct {
	name  *regexp.Regexp     // type name: stem, grade, and for Pro Electron the voltage behind it
	table string             // the grade whose row is in the table
	width map[string]float64 // tolerance of each grade, ratio
}

// Grades of the JEDEC series: the letter behind the number; of Pro Electron types: the letter before
// the voltage. The widths of the 1N4728 series are printed on its sheets; the others are from memory.
var gradeRules = []gradeRule{
	{regexp.MustCompile(`^(1N47(?:2[89]|[345]\d|6[0-4]))([ACD]?)()$`), "A", map[string]float64{"": 0.10, "A": 0.05, "C": 0.02, "D": 0.01}},
	{regexp.MustCompile(`^(1N7(?:4[6-9]|5\d))([ACD]?)()$`), "A", map[string]float64{"": 0.10, "A": 0.05, "C": 0.02, "D": 0.01}},
	{regexp.MustCompile(`^(1N5(?:2[2-8]\d|3[3-8]\d))([ABCD]?)()$`), "B", map[string]float64{"": 0.20, "A": 0.10, "B": 0.05, "C": 0.02, "D": 0.01}},
	{regexp.MustCompile(`^(BZX(?:85|55|84))([ABCD])(\d+(?:V\d+)?)$`), "C", europeanGrade},
}

// europeanGrade is the tolerance letter of Pro Electron zeners (common practice, from memory).
var europeanGrade = map[string]float64{"A": 0.01, "B": 0.02, "C": 0.05, "D": 0.10}

// graded makes the row of a zener of another tolerance grade than the one in the table.
func (t *Table) graded(name string) (*Row, bool) {
	for _, rule := range gradeRules {
		m := rule.name.FindStringSubmatch(name)
		if m == nil || m[2] == rule.table {
			continue
		}
		base, ok := t.index[m[1]+rule.table+m[3]]
		width, ok2 := rule.width[m[2]]
		if !ok || !ok2 {
			continue
		}
		row := *base
		row.Type = name
		row.values = append([]entry(nil), base.values...)
		nominal, _ := row.Value(VZ)
		for _, end := range []struct {
			symbol netlist.Symbol
			sign   float64
		}{{VZmin, -1}, {VZmax, +1}} {
			row.set(end.symbol, CaseValue{Value: Value{
				Number: nominal.Number * (1 + end.sign*width), Unit: quantity.Volt, Source: fromMemory, Confidence: Memory,
				Condition: fmt.Sprintf("grade %s, %g %%", gradeName(m[2]), width*100),
			}})
		}
		row.Note = join(row.Note, fmt.Sprintf("the ratings of %s with the tolerance of its grade", base.Type))
		row.summarise()
		return &row, true
	}
	return nil, false
}

func gradeName(letter string) string {
	if letter == "" {
		return "without a letter"
	}
	return letter
}

var genericForm = regexp.MustCompile(`^ZENER(\d{1,3}(?:V\d{1,2})?)([ABCDM]?)$`)

// genericGrade is the tolerance of a zener known by its voltage: the Pro Electron letters, and M of IEC 60062.
func genericGrade(letter string) (width float64, ok bool) {
	if letter == "M" {
		return 0.20, true
	}
	width, ok = europeanGrade[letter]
	return width, ok
}

// genericZener makes the row of a zener of which only the voltage is known, and the tolerance where a
// letter of its type gives it. It has no power, current or temperature rating.
func genericZener(name string) (*Row, bool) {
	m := genericForm.FindStringSubmatch(name)
	if m == nil {
		return nil, false
	}
	volts, err := strconv.ParseFloat(strings.Replace(m[1], "V", ".", 1), 64)
	if err != nil || volts < 1.8 || volts > 300 || zenerName(volts, m[2]) != name {
		return nil, false
	}
	row := &Row{
		Type: name, Kind: "zener", Role: netlist.RoleZener, Pins: pinsOf("zener"), PinsDoubtful: true,
		Note: "only the voltage is known, from the type name", Origin: "type name",
	}
	row.set(VZ, CaseValue{Value: Value{Number: volts, Unit: quantity.Volt, Source: "type name", Confidence: Stated}})
	if width, ok := genericGrade(m[2]); ok {
		condition := fmt.Sprintf("grade %s, %g %%", m[2], width*100)
		row.set(VZmin, CaseValue{Value: Value{Number: volts * (1 - width), Unit: quantity.Volt, Source: fromMemory, Confidence: Memory, Condition: condition}})
		row.set(VZmax, CaseValue{Value: Value{Number: volts * (1 + width), Unit: quantity.Volt, Source: fromMemory, Confidence: Memory, Condition: condition}})
	}
	row.summarise()
	return row, true
}

// zenerName is the canonical name of a zener of which only the voltage is known: ZENER12, ZENER5V1C.
func zenerName(volts float64, grade string) string {
	return "ZENER" + voltCode(volts) + grade
}

// voltCode writes volts in the way of IEC 60062: 12, 5V1, 2V85.
func voltCode(volts float64) string {
	text := strconv.FormatFloat(math.Round(volts*100)/100, 'f', -1, 64)
	return strings.Replace(text, ".", "V", 1)
}
