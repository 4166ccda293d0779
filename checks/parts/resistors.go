package parts

import (
	"math"
	"sync"

	"railproof/checks/parts/records"
	"railproof/netlist/syntax"
)

// PowerLine is a derating line: full power up to Full, none from Zero on, straight between. degC.
type PowerLine struct {
	Style      string
	Full, Zero float64
	Source     string
	Confidence string
	Note       string
}

// Factor is the part of the rated power that remains at a temperature in degC, 0 to 1.
func (l PowerLine) Factor(celsius float64) float64 {
	if math.IsNaN(celsius) {
		return 0
	}
	return math.Min(1, math.Max(0, (l.Zero-celsius)/(l.Zero-l.Full)))
}

// DefaultResistorStyle is the style taken where none is stated.
const DefaultResistorStyle = "film"

var resistorLines = sync.OnceValue(func() []PowerLine {
	lines, problems := readResistors()
	if err := records.Join(problems); err != nil {
		panic("built-in resistor table: " + err.Error())
	}
	return lines
})

func readResistors() ([]PowerLine, []syntax.Diagnostic) {
	titles, problems := readTitles()
	table, found := records.Read("resistors.csv", embedded("resistors.csv"), "style", "T_full", "T_zero")
	problems = append(problems, found...)
	var lines []PowerLine
	for _, record := range table.Records {
		full, ok1, err1 := record.Number("T_full")
		zero, ok2, err2 := record.Number("T_zero")
		if err1 != nil || err2 != nil || !ok1 || !ok2 || !(zero > full) {
			problems = append(problems, syntax.Diagnostic{At: record.At, What: "not a falling line", Expected: "T_zero above T_full"})
			continue
		}
		line := PowerLine{Style: record.Text("style"), Full: full, Zero: zero, Confidence: record.Text(columnConfidence), Note: record.Text(columnNote), Source: fromMemory}
		if line.Confidence != Memory {
			line.Source = ""
			for _, item := range attribution(record.Text(columnSource)) {
				line.Source = resolve(titles, item.key)
			}
			if line.Source == "" {
				problems = append(problems, syntax.Diagnostic{At: record.Place(columnSource), What: "source key without title"})
			}
		}
		lines = append(lines, line)
	}
	return lines, problems
}

// ResistorLine is the derating line of a style of resistor: film, power-film, composition, wirewound.
func ResistorLine(style string) (PowerLine, bool) {
	for _, line := range resistorLines() {
		if line.Style == style {
			return line, true
		}
	}
	return PowerLine{}, false
}
