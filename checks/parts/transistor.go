package parts

import (
	"fmt"
	"math"
	"regexp"
	"strings"

	"railproof/netlist"
	"railproof/netlist/quantity"
)

// BipolarLaw is what the ratings of a bipolar transistor tell of its law at 25 degC: IC = IS exp(VBE/(NF VT)) and
// IB = IC/BF. A Darlington is taken as one transistor of two junctions.
type BipolarLaw struct {
	Polarity netlist.Polarity // Positive for NPN
	IS       float64          // A
	BF       float64          // current gain
	NF       float64          // 1; of a Darlington 2
	// LeastGain and MostGain are the ends of the gain, 0 where they are not known.
	LeastGain, MostGain float64
	Quality             string // how it was found, in words
	Confidence          string // of the gain
}

// The base-emitter voltage of a silicon transistor in V, at the fraction of its rated collector current at which it
// holds whatever the size of the die. Common practice.
const (
	baseEmitterVoltage  = 0.7
	baseEmitterFraction = 0.1
)

// Bipolar derives the law of a bipolar transistor, nil where the row has no polarity, collector current or gain.
func (r *Row) Bipolar() *BipolarLaw {
	rated, ok := r.Value(IC)
	if r.Role != netlist.RoleTransistor || r.Polarity == 0 || !ok {
		return nil
	}
	least, okLeast := r.Value(HFEmin)
	most, _ := r.Value(HFEmax)
	gain, okGain := r.Value(HFE)
	if !okGain {
		gain, okGain = least, okLeast
	}
	if !okGain {
		return nil
	}
	law := &BipolarLaw{Polarity: r.Polarity, BF: gain.Number, NF: 1, Confidence: gain.Confidence}
	junctions := "VBE"
	if r.Kind == "darlington" {
		law.NF, junctions = 2, "two junctions, VBE"
	}
	law.IS = baseEmitterFraction * rated.Number / math.Exp(baseEmitterVoltage/ThermalVoltage)
	law.LeastGain, law.MostGain = least.Number, most.Number
	symbol := HFE
	if okLeast && gain.Number == least.Number {
		symbol = HFEmin
	}
	law.Quality = fmt.Sprintf("%s with BF %.4g (%s) and %s %.3g V at %s (common practice)", PolarityWord(r.Polarity), law.BF, symbol, junctions,
		law.NF*baseEmitterVoltage, quantity.Format(baseEmitterFraction*rated.Number, quantity.Ampere, 3))
	return law
}

// PolarityWord names the polarity of a bipolar transistor.
func PolarityWord(p netlist.Polarity) string {
	if p == netlist.Negative {
		return "PNP"
	}
	return "NPN"
}

// gainRule is how a family of transistors marks its gain groups, each with its ends.
type gainRule struct {
	types  *regexp.Regexp // the numbers of the family
	groups map[string][2]float64
}

// Gain groups of Pro Electron transistors (from memory).
var gainRules = []gainRule{
	{regexp.MustCompile(`^BC(?:10[789]|54[6-9]|550|55[6-9]|560|84[6-9]|850|85[6-9]|860)$`), map[string][2]float64{"A": {110, 220}, "B": {200, 450}, "C": {420, 800}}},
	{regexp.MustCompile(`^BC17[789]$`), map[string][2]float64{"A": {125, 260}, "B": {240, 500}}},
	{regexp.MustCompile(`^BC(?:32[78]|33[78]|8[01]7)$`), map[string][2]float64{"16": {100, 250}, "25": {160, 400}, "40": {250, 630}}},
	{regexp.MustCompile(`^(?:BC(?:14[01]|16[01]|63[5-9]|640)|BD1(?:3[5-9]|40))$`), map[string][2]float64{"6": {40, 100}, "10": {63, 160}, "16": {100, 250}}},
}

var gainGroup = regexp.MustCompile(`^(B[CD]\d{3})-?([ABC]|\d{1,2})$`)

// groupName is the canonical name of a type of a gain group: BC547B, BC337-25; empty if the type has no such group.
func groupName(number, group string) string {
	for _, rule := range gainRules {
		if _, ok := rule.groups[group]; ok && rule.types.MatchString(number) {
			if group[0] <= '9' {
				return number + "-" + group
			}
			return number + group
		}
	}
	return ""
}

// ofGainGroup makes the row of a transistor of one gain group.
func (t *Table) ofGainGroup(name string) (*Row, bool) {
	m := gainGroup.FindStringSubmatch(name)
	if m == nil || groupName(m[1], m[2]) != name {
		return nil, false
	}
	base, ok := t.index[m[1]]
	if !ok {
		return nil, false
	}
	row := *base
	row.Type = name
	row.values = append([]entry(nil), base.values...)
	for _, rule := range gainRules {
		ends, ok := rule.groups[m[2]]
		if !ok || !rule.types.MatchString(m[1]) {
			continue
		}
		condition := "gain group " + m[2]
		if v, ok := base.Value(HFEmin); ok {
			condition = join(condition, v.Condition)
		}
		for _, end := range []struct {
			symbol netlist.Symbol
			number float64
			source string
		}{{HFEmin, ends[0], fromMemory}, {HFE, math.Sqrt(ends[0] * ends[1]), "calculated sqrt(hFEmin hFEmax); " + fromMemory}, {HFEmax, ends[1], fromMemory}} {
			row.set(end.symbol, CaseValue{Value: Value{Number: end.number, Unit: quantity.One, Source: end.source, Confidence: Memory, Condition: condition}})
		}
	}
	row.Note = join(row.Note, fmt.Sprintf("the ratings of %s with the gain of its group", base.Type))
	row.summarise()
	return &row, true
}

var (
	// What exporters and libraries put before a transistor's number.
	transistorPrefix = regexp.MustCompile(`^(?:_{0,2}(?:Q|TR|T|X)[_-]?(?:(?:NPN|PNP)[_-])?|_{1,2}|(?:NPN|PNP)[_-])`)
	// The JEDEC number in SOT-23 under the prefixes of several makers.
	surfaceMount = regexp.MustCompile(`^(?:PM|SM|FM)BT(\d{4})`)
	// A gain group, then plating, tape, package: another letter there is another type.
	behindTransistor = regexp.MustCompile(`^(?:[-_]?([ABC]|6|10|16|25|40))?[-_]?(?:G|AG|T|TU|STU|TA|TAR|TF|TFR|TR|TRG|BU|RL1G?|RLR[AMP]G?|ZL1G?|LT[13]G?|T1G?|T\d{3}|,\d{3})?(?:-(?:7|13)(?:-F)?|[/.+#()_-](?:[A-Z(][A-Z0-9-_/.+#()]*)?)?$`)
)

// transistorsOf lists the type numbers of the transistors among rows.
func transistorsOf(rows []*Row) map[string]bool {
	known := map[string]bool{}
	for _, row := range rows {
		if row.Role == netlist.RoleTransistor {
			known[row.Type] = true
		}
	}
	return known
}

// transistorNamed finds the canonical name of a transistor written as exporters and makers do: "QBC547B", "Q2N3055",
// "TIP31C_TO220", "BC337-25", "BD13916". Empty if it is none of the table.
func (t *Table) transistorNamed(name string) string {
	starts := []int{0}
	if m := transistorPrefix.FindStringIndex(name); m != nil {
		starts = append(starts, m[1])
	}
	for _, start := range starts {
		rest := name[start:]
		if m := surfaceMount.FindStringIndex(rest); m != nil {
			rest = "MMBT" + strings.TrimPrefix(rest[:m[1]], rest[:4]) + rest[m[1]:]
		}
		if strings.HasPrefix(rest, "P2N") {
			rest = "PN" + rest[3:]
		}
		for length := min(len(rest), longestNumber); length >= 4; length-- {
			number := rest[:length]
			if !t.transistors[number] {
				continue
			}
			m := behindTransistor.FindStringSubmatch(rest[length:])
			switch {
			case m == nil || m[1] == "" && another.MatchString(rest[length:]):
				return ""
			case m[1] == "":
				return number
			case groupName(number, m[1]) != "":
				return groupName(number, m[1])
			}
			return ""
		}
	}
	return ""
}
