package parts

import (
	"fmt"
	"math"
	"strconv"
	"strings"
	"sync"

	"railproof/checks/parts/records"
	"railproof/netlist/syntax"
)

// StepKind names a series of preferred values or of standard ratings.
type StepKind string

// The series. The E-series are preferred numbers of IEC 60063, repeated in every decade; the others are
// lists in SI units.
const (
	E3                  StepKind = "E3"
	E6                  StepKind = "E6"
	E12                 StepKind = "E12"
	E24                 StepKind = "E24"
	E48                 StepKind = "E48"
	E96                 StepKind = "E96"
	VRRMSteps           StepKind = "VRRM"                 // V
	ElectrolyticVoltage StepKind = "electrolytic-voltage" // V
	FilmVoltage         StepKind = "film-voltage"         // V dc
	ResistorPower       StepKind = "resistor-power"       // W
	ZenerPower          StepKind = "zener-power"          // W
	FuseCurrent         StepKind = "fuse-current"         // A
	IFAVSteps           StepKind = "IFAV"                 // A
	RegulatorCurrent    StepKind = "IO"                   // A
)

// Step is one value of a series with where it is known from.
type Step struct {
	Value      float64
	Source     string
	Confidence string
}

// series is a list in ascending order; decades repeats it in every decade, with values 10 to 99 (or
// 100 to 999) standing for the figures.
type series struct {
	steps   []Step
	decades bool
}

var allSeries = sync.OnceValue(func() map[StepKind]series {
	all, problems := readSeries()
	if err := records.Join(problems); err != nil {
		panic("built-in steps: " + err.Error())
	}
	return all
})

func readSeries() (map[StepKind]series, []syntax.Diagnostic) {
	titles, problems := readTitles()
	table, found := records.Read("steps.csv", embedded("steps.csv"), "kind", "values", columnSource, columnConfidence)
	problems = append(problems, found...)
	all := map[StepKind]series{}
	for _, record := range table.Records {
		kind := StepKind(record.Text("kind"))
		list := all[kind]
		list.decades = strings.HasPrefix(string(kind), "E") && len(kind) <= 3
		source := titles[record.Text(columnSource)]
		if source == "" {
			problems = append(problems, syntax.Diagnostic{At: record.Place(columnSource), What: "source key without title"})
		}
		for _, text := range strings.Fields(record.Text("values")) {
			value, err := records.ParseNumber(text)
			if n := len(list.steps); err != nil || n > 0 && value <= list.steps[n-1].Value {
				problems = append(problems, syntax.Diagnostic{At: record.Place("values"), What: fmt.Sprintf("%s: %q", kind, text), Expected: "ascending numbers"})
			}
			list.steps = append(list.steps, Step{value, source, record.Text(columnConfidence)})
		}
		all[kind] = list
	}
	return all, problems
}

// slack is the relative difference within which a value counts as equal to a step.
const slack = 1e-9

// Steps lists a series in ascending order; of an E-series the figures of one decade.
func Steps(kind StepKind) []Step { return append([]Step(nil), allSeries()[kind].steps...) }

// NextUp is the smallest step that is not below value: a step is its own next step. ok is false beyond
// the end of the series, or for an unknown series, or where value is not a positive finite number.
func NextUp(kind StepKind, value float64) (float64, bool) {
	return next(kind, value, func(step float64) bool { return step >= value*(1-slack) }, false)
}

// NextDown is the largest step that is not above value. ok is as for NextUp.
func NextDown(kind StepKind, value float64) (float64, bool) {
	return next(kind, value, func(step float64) bool { return step <= value*(1+slack) }, true)
}

func next(kind StepKind, value float64, fits func(float64) bool, down bool) (float64, bool) {
	list, known := allSeries()[kind]
	if !known || !(value > 0) || math.IsInf(value, 0) {
		return 0, false
	}
	var candidates []float64
	if list.decades {
		exponent := int(math.Floor(math.Log10(value)))
		figures := len(strconv.Itoa(int(list.steps[0].Value))) // 2 or 3
		for decade := exponent - 1; decade <= exponent+1; decade++ {
			for _, step := range list.steps {
				candidates = append(candidates, decimal(step.Value, decade-figures+1))
			}
		}
	} else {
		for _, step := range list.steps {
			candidates = append(candidates, step.Value)
		}
	}
	best, found := 0.0, false
	for _, candidate := range candidates {
		if fits(candidate) && (!found || down || candidate < best) {
			best, found = candidate, true
		}
	}
	return best, found
}

// decimal is figure x 10^exponent, rounded as the decimal number it is.
func decimal(figure float64, exponent int) float64 {
	value, err := strconv.ParseFloat(fmt.Sprintf("%ge%d", figure, exponent), 64)
	if err != nil {
		return 0 // below the smallest number
	}
	return value
}
