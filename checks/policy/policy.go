// Package policy holds derating policies: what part of a rating a design may use.
//
// A policy says something about the quantities it has rows for, and nothing about the others: there
// the check falls back on the rating itself and says so. Each row keeps where it is known from. No
// value from memory stands under the name of a standard.
package policy

import (
	"crypto/sha256"
	"embed"
	"fmt"
	"math"
	"path"
	"strconv"
	"strings"

	"railproof/checks/parts/records"
	"railproof/netlist/syntax"
)

// Key names what is derated.
type Key string

// The keys. Temperatures are in degC, offsets in kelvin or volts.
const (
	VRRM                         Key = "vrrm"
	IFAV                         Key = "ifav"
	IFRM                         Key = "ifrm"
	IFSM                         Key = "ifsm"
	I2t                          Key = "i2t"
	DiodeJunctionTemperature     Key = "diode-junction-temperature"
	ZenerPower                   Key = "zener-power"
	ZenerCurrent                 Key = "zener-current"
	ZenerJunctionTemperature     Key = "zener-junction-temperature"
	ElectrolyticVoltage          Key = "electrolytic-voltage"
	ElectrolyticTemperature      Key = "electrolytic-temperature"
	FilmVoltage                  Key = "film-voltage"
	FilmTemperature              Key = "film-temperature"
	CeramicVoltage               Key = "ceramic-voltage"
	CeramicTemperature           Key = "ceramic-temperature"
	TantalumVoltage              Key = "tantalum-voltage"
	TantalumTemperature          Key = "tantalum-temperature"
	CapacitorTemperature         Key = "capacitor-temperature" // of any capacitor without a row of its own
	RippleCurrent                Key = "ripple-current"
	ResistorPower                Key = "resistor-power"
	ResistorVoltage              Key = "resistor-voltage"
	JunctionTemperature          Key = "junction-temperature" // of any semiconductor without a row of its own
	HeadroomReserve              Key = "headroom-reserve"     // the offset is the reserve in volts
	RegulatorInputVoltage        Key = "regulator-input-voltage"
	RegulatorOutputCurrent       Key = "regulator-output-current"
	RegulatorJunctionTemperature Key = "regulator-junction-temperature"
	TransistorVoltage            Key = "transistor-voltage"
	TransistorCurrent            Key = "transistor-current"
	TransistorPower              Key = "transistor-power"
	TransistorJunctionTemp       Key = "transistor-junction-temperature"
	WindingCurrent               Key = "winding-current"
	FuseCurrent                  Key = "fuse-current"
)

// form is how a quantity is derated.
type form uint8

const (
	byFactor      form = iota // limit = rating x factor
	byTemperature             // limit = rating - offset, and not above at_most
	byReserve                 // at least offset volts are kept
)

// keys in the order in which a policy is printed.
var keys = []struct {
	key     Key
	form    form
	general Key // the row that stands in where there is none
}{
	{VRRM, byFactor, ""}, {IFAV, byFactor, ""}, {IFRM, byFactor, ""}, {IFSM, byFactor, ""}, {I2t, byFactor, ""},
	{DiodeJunctionTemperature, byTemperature, JunctionTemperature},
	{ZenerPower, byFactor, ""}, {ZenerCurrent, byFactor, ""},
	{ZenerJunctionTemperature, byTemperature, JunctionTemperature},
	{ElectrolyticVoltage, byFactor, ""}, {ElectrolyticTemperature, byTemperature, CapacitorTemperature},
	{FilmVoltage, byFactor, ""}, {FilmTemperature, byTemperature, CapacitorTemperature},
	{CeramicVoltage, byFactor, ""}, {CeramicTemperature, byTemperature, CapacitorTemperature},
	{TantalumVoltage, byFactor, ""}, {TantalumTemperature, byTemperature, CapacitorTemperature},
	{CapacitorTemperature, byTemperature, ""},
	{RippleCurrent, byFactor, ""}, {ResistorPower, byFactor, ""}, {ResistorVoltage, byFactor, ""},
	{JunctionTemperature, byTemperature, ""}, {HeadroomReserve, byReserve, ""},
	{RegulatorInputVoltage, byFactor, ""}, {RegulatorOutputCurrent, byFactor, ""},
	{RegulatorJunctionTemperature, byTemperature, JunctionTemperature},
	{TransistorVoltage, byFactor, ""}, {TransistorCurrent, byFactor, ""}, {TransistorPower, byFactor, ""},
	{TransistorJunctionTemp, byTemperature, JunctionTemperature},
	{WindingCurrent, byFactor, ""}, {FuseCurrent, byFactor, ""},
}

// How sure a row is.
const (
	Seen           = "seen"            // read in the publication
	SecondHand     = "second-hand"     // read in a reproduction of it
	CommonPractice = "common practice" // a rule of thumb of the trade
	Memory         = "memory"          // from memory
	Stated         = "stated"          // by the user, or by the rating itself
)

// Row says how one quantity is derated. The limit is Factor x rating - Offset, and not above AtMost.
type Row struct {
	Quantity   Key
	Factor     float64 // of the rating; 1 where only an offset or a ceiling is stated
	Offset     float64 // K below the rating of a temperature; V of reserve for headroom
	AtMost     float64 // degC; +Inf where no ceiling is stated
	Note       string
	Source     string
	Confidence string
}

// Limit is what the policy allows of a rating: the highest stress, or for headroom-reserve, whose
// rating is 0 V, the least reserve.
func (r Row) Limit(rating float64) float64 {
	if r.Quantity == HeadroomReserve {
		return rating + r.Offset
	}
	return math.Min(r.Factor*rating-r.Offset, r.AtMost)
}

// Rule puts the derating in words: "rating x 0.8", "rating - 25 K", "at most 115 degC", "0.5 V reserve".
func (r Row) Rule() string {
	if r.Quantity == HeadroomReserve {
		return fmt.Sprintf("%s V reserve", figure(r.Offset))
	}
	var parts []string
	switch {
	case r.Factor != 1:
		parts = append(parts, "rating x "+figure(r.Factor))
	case r.Offset != 0:
		parts = append(parts, "rating - "+figure(r.Offset)+" K")
	case math.IsInf(r.AtMost, 1):
		parts = append(parts, "the rating itself")
	}
	if !math.IsInf(r.AtMost, 1) {
		parts = append(parts, "at most "+figure(r.AtMost)+" degC")
	}
	return strings.Join(parts, ", ")
}

func figure(v float64) string { return strconv.FormatFloat(v, 'g', 6, 64) }

// Policy is a table of derating rows.
type Policy struct {
	Name    string
	version string
	rows    []Row // in the order of keys
}

// Version names the policy and the beginning of the hash of its bytes: "common 3f2a9c01".
func (p *Policy) Version() string { return p.version }

// Rows lists the rows in a fixed order.
func (p *Policy) Rows() []Row { return append([]Row(nil), p.rows...) }

// Row finds how a quantity is derated. A junction or capacitor temperature without a row of its own
// takes the general one. ok is false where the policy says nothing.
func (p *Policy) Row(key Key) (row Row, ok bool) {
	for _, r := range p.rows {
		if r.Quantity == key {
			return r, true
		}
	}
	for _, k := range keys {
		if k.key == key && k.general != "" {
			return p.Row(k.general)
		}
	}
	return Row{}, false
}

//go:embed data/*.csv
var data embed.FS

// Default is the name of the policy that is used unless another is stated.
const Default = "common"

// Names lists the built-in policies.
func Names() []string {
	entries, err := data.ReadDir("data") // sorted by name
	if err != nil {
		panic(err)
	}
	var names []string
	for _, entry := range entries {
		names = append(names, strings.TrimSuffix(entry.Name(), ".csv"))
	}
	return names
}

// IsFile reports whether the name of a policy is that of a CSV file, not of a built-in one.
func IsFile(name string) bool { return strings.HasSuffix(strings.ToLower(name), ".csv") }

// Named is a built-in policy. The error of an unknown name lists those there are.
func Named(name string) (*Policy, error) {
	for _, known := range Names() {
		if known == name {
			text, err := data.ReadFile(path.Join("data", name+".csv"))
			if err != nil {
				return nil, err
			}
			return FromCSV(name, text)
		}
	}
	return nil, fmt.Errorf("no policy %q; expected one of %s, or the path of a CSV file", name, strings.Join(Names(), ", "))
}

// FromCSV reads a policy: columns quantity, factor, offset (K or V), at_most (degC), source, confidence
// and note. The error names every problem as name:line:col.
func FromCSV(name string, text []byte) (*Policy, error) {
	table, problems := records.Read(name, text, "quantity")
	for _, column := range table.Columns {
		switch column {
		case "quantity", "factor", "offset", "at_most", "source", "confidence", "note", "":
		default:
			problems = append(problems, syntax.Diagnostic{At: syntax.Position{File: name, Line: 1, Column: 1}, What: fmt.Sprintf("unknown column %q", column), Expected: "quantity, factor, offset, at_most, source, confidence or note"})
		}
	}
	found := map[Key]Row{}
	for _, record := range table.Records {
		row, faults := readRow(record)
		if _, twice := found[row.Quantity]; twice {
			faults = append(faults, syntax.Diagnostic{At: record.At, What: fmt.Sprintf("quantity %s stands twice", row.Quantity), Expected: "each quantity once"})
		}
		problems = append(problems, faults...)
		found[row.Quantity] = row
	}
	if len(problems) == 0 && len(found) == 0 {
		problems = append(problems, syntax.Diagnostic{At: syntax.Position{File: name, Line: 1, Column: 1}, What: "the policy has no row", Expected: "at least one quantity"})
	}
	if err := records.Join(problems); err != nil {
		return nil, err
	}
	p := &Policy{Name: name, version: fmt.Sprintf("%s %x", path.Base(name), sha256.Sum256(text))[:len(path.Base(name))+9]}
	for _, k := range keys {
		if row, ok := found[k.key]; ok {
			p.rows = append(p.rows, row)
		}
	}
	return p, nil
}

func readRow(record records.Record) (Row, []syntax.Diagnostic) {
	var problems []syntax.Diagnostic
	fault := func(column, what, expected string) {
		problems = append(problems, syntax.Diagnostic{At: record.Place(column), What: what, Expected: expected})
	}
	number := func(column string, absent float64) (float64, bool) {
		value, ok, err := record.Number(column)
		if err != nil {
			fault(column, fmt.Sprintf("%s %q is not a number", column, record.Text(column)), "a number")
		}
		if !ok || err != nil {
			return absent, false
		}
		return value, true
	}
	row := Row{Quantity: Key(strings.ToLower(record.Text("quantity"))), Note: record.Text("note"), Source: record.Text("source"), Confidence: record.Text("confidence")}
	kind, known := formOf(row.Quantity)
	if !known {
		fault("quantity", fmt.Sprintf("unknown quantity %q", row.Quantity), "one of "+keyNames())
		return row, problems
	}
	var hasFactor, hasOffset, hasCeiling bool
	row.Factor, hasFactor = number("factor", 1)
	row.Offset, hasOffset = number("offset", 0)
	row.AtMost, hasCeiling = number("at_most", math.Inf(1))
	switch kind {
	case byFactor:
		if !hasFactor || hasOffset || hasCeiling {
			fault("quantity", fmt.Sprintf("%s is derated by a factor alone", row.Quantity), "a factor, and neither offset nor at_most")
		}
	case byTemperature:
		if hasFactor || !hasOffset && !hasCeiling {
			fault("quantity", fmt.Sprintf("%s is derated by kelvins below the rating or to a ceiling", row.Quantity), "an offset in K or an at_most in degC, and no factor")
		}
	case byReserve:
		if hasFactor || hasCeiling || !hasOffset {
			fault("quantity", fmt.Sprintf("%s is a reserve in volts", row.Quantity), "an offset in V alone")
		}
	}
	if row.Factor <= 0 || row.Factor > 1 {
		fault("factor", fmt.Sprintf("factor %g", row.Factor), "above 0, at most 1")
	}
	if row.Offset < 0 || row.Offset > 200 {
		fault("offset", fmt.Sprintf("offset %g", row.Offset), "0 to 200 K, or V of reserve")
	}
	if hasCeiling && (row.AtMost < 0 || row.AtMost > 250) {
		fault("at_most", fmt.Sprintf("at_most %g", row.AtMost), "0 to 250 degC")
	}
	switch row.Confidence {
	case "":
		row.Confidence = Stated
	case Seen, SecondHand, CommonPractice, Memory, Stated:
	default:
		fault("confidence", fmt.Sprintf("confidence %q", row.Confidence), strings.Join([]string{Seen, SecondHand, CommonPractice, Memory, Stated}, ", "))
	}
	if row.Source == "" {
		row.Source = "policy " + record.At.File
	}
	return row, problems
}

func formOf(key Key) (form, bool) {
	for _, k := range keys {
		if k.key == key {
			return k.form, true
		}
	}
	return 0, false
}

func keyNames() string {
	var names []string
	for _, k := range keys {
		names = append(names, string(k.key))
	}
	return strings.Join(names, ", ")
}
