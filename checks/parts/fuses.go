package parts

import (
	"math"
	"strings"
	"sync"

	"railproof/checks/parts/records"
	"railproof/netlist/quantity"
	"railproof/netlist/syntax"
)

// FuseFamily is a standard sheet of IEC 60127-2, 5 x 20 mm: speed and breaking capacity.
type FuseFamily string

// The families.
const (
	TimeLagLow   FuseFamily = "T-L" // sheet 3: time-lag, low breaking capacity
	TimeLagHigh  FuseFamily = "T-H" // sheet 5: time-lag, high breaking capacity
	QuickLow     FuseFamily = "F-L" // sheet 2: quick acting, low breaking capacity
	QuickHigh    FuseFamily = "F-H" // sheet 1: quick acting, high breaking capacity
	noFuseFamily FuseFamily = ""
)

// FuseFamilyOf reads what stands on a fuse: "T", "TL-250V", "T-250V", "T500mAH250V", "FH". A speed without a
// breaking capacity is taken as low. ok is false for the speeds FF, M and TT, of which no sheet is built in.
func FuseFamilyOf(marking string) (FuseFamily, bool) {
	text := strings.ToUpper(strings.TrimSpace(marking))
	if text == "" {
		return noFuseFamily, false
	}
	speed := text[:1]
	rest := text[1:]
	if speed != "T" && speed != "F" || strings.HasPrefix(rest, speed) {
		return noFuseFamily, false
	}
	rest = strings.NewReplacer("MA", "", "A", "", "V", "", "C", "").Replace(rest)
	rest = strings.Trim(rest, "0123456789.-_ /")
	switch rest {
	case "", "L":
		return FuseFamily(speed + "-L"), true
	case "H":
		return FuseFamily(speed + "-H"), true
	}
	return noFuseFamily, false
}

// FuseGate is how long a fuse of a family carries a multiple of its rated current.
type FuseGate struct {
	Multiple float64 // of the rated current
	AtLeast  float64 // s before it may open; 0: no lower limit
	AtMost   float64 // s by which it has opened; +Inf: no upper limit
	Source   string
	Confidence,
	Note string
}

type fuseGate struct {
	family     FuseFamily
	over, upto float64 // rated currents, both ends included
	gate       FuseGate
}

type fuseMelting struct {
	family  FuseFamily
	current float64
	melting Value
	cold    Value
}

type fuseTables struct {
	gates   []fuseGate
	melting []fuseMelting
}

var fuses = sync.OnceValue(func() fuseTables {
	tables, problems := readFuses()
	if err := records.Join(problems); err != nil {
		panic("built-in fuse tables: " + err.Error())
	}
	return tables
})

func readFuses() (fuseTables, []syntax.Diagnostic) {
	titles, problems := readTitles()
	var tables fuseTables
	origin := func(record records.Record) (string, string) {
		confidence := record.Text(columnConfidence)
		if confidence == Memory {
			return fromMemory, confidence
		}
		title := titles[record.Text(columnSource)]
		if title == "" {
			problems = append(problems, syntax.Diagnostic{At: record.Place(columnSource), What: "source key without title"})
		}
		return title, confidence
	}
	number := func(record records.Record, column string, absent float64) float64 {
		value, ok, err := record.Number(column)
		if err != nil {
			problems = append(problems, syntax.Diagnostic{At: record.Place(column), What: err.Error()})
		}
		if !ok {
			return absent
		}
		return value
	}
	table, found := records.Read("fuse_gates.csv", embedded("fuse_gates.csv"), "family", "multiple")
	problems = append(problems, found...)
	for _, record := range table.Records {
		g := FuseGate{Multiple: number(record, "multiple", 0), AtLeast: number(record, "t_min", 0), AtMost: number(record, "t_max", math.Inf(1)), Note: record.Text(columnNote)}
		g.Source, g.Confidence = origin(record)
		tables.gates = append(tables.gates, fuseGate{FuseFamily(record.Text("family")), number(record, "IN_over", 0), number(record, "IN_upto", math.Inf(1)), g})
	}
	table, found = records.Read("fuse_melting.csv", embedded("fuse_melting.csv"), "family", "IN")
	problems = append(problems, found...)
	for _, record := range table.Records {
		source, confidence := origin(record)
		// The smaller of the two published integrals: a fuse must survive a surge.
		integral := math.Min(number(record, "I2t_10ms", math.Inf(1)), number(record, "I2t_10IN", math.Inf(1)))
		tables.melting = append(tables.melting, fuseMelting{
			FuseFamily(record.Text("family")), number(record, "IN", 0),
			Value{integral, quantity.AmpereSquaredSecond, source, confidence, "typical melting integral, the smaller of that at 10 ms and at 10 IN"},
			Value{number(record, "Rcold", 0), quantity.Ohm, source, confidence, "cold, typical"},
		})
	}
	return tables, problems
}

// FuseGates lists the gates of a fuse of a family and rated current in amperes, by rising multiple.
func FuseGates(family FuseFamily, rated float64) []FuseGate {
	var list []FuseGate
	for _, g := range fuses().gates {
		if g.family == family && rated >= g.over*(1-slack) && rated <= g.upto*(1+slack) {
			list = append(list, g.gate)
		}
	}
	return list
}

// FuseMelting is the typical melting integral and the cold resistance of a fuse of a family and rated
// current in amperes. ok is false where that rating is not published; nothing is interpolated, since
// the construction changes between ratings.
func FuseMelting(family FuseFamily, rated float64) (integral, cold Value, ok bool) {
	for _, m := range fuses().melting {
		if m.family == family && math.Abs(m.current-rated) <= slack*rated {
			return m.melting, m.cold, true
		}
	}
	return Value{}, Value{}, false
}
