package parts

import (
	"crypto/sha256"
	"embed"
	"fmt"
	"strings"
	"sync"

	"railproof/checks/parts/records"
	"railproof/netlist"
	"railproof/netlist/syntax"
)

//go:embed data/*.csv
var data embed.FS

// revision of the built-in tables; it grows whenever a value changes.
const revision = 2

// partFiles in the order in which their rows are listed.
var partFiles = []string{"rectifiers.csv", "bridges.csv", "zeners.csv", "regulators.csv", "transistors.csv"}

// Table is a set of part rows. It is not changed after it is made and may be shared.
type Table struct {
	rows    []*Row          // built-in, in the order of the files
	user    []*Row          // of the user's file, in its order; they win
	index   map[string]*Row // by folded type name, user rows winning
	numbers numbers         // of the built-in rectifiers and bridges
	// transistors are the type numbers of the built-in ones.
	transistors map[string]bool
	version     string
}

// Default is the built-in table.
func Default() *Table { return builtIn() }

var builtIn = sync.OnceValue(func() *Table {
	t, problems := readBuiltIn()
	if err := records.Join(problems); err != nil {
		panic("built-in parts tables: " + err.Error())
	}
	return t
})

func readBuiltIn() (*Table, []syntax.Diagnostic) {
	titles, problems := readTitles()
	t := &Table{index: map[string]*Row{}, version: fmt.Sprintf("%d-%s", revision, embeddedHash())}
	for _, name := range partFiles {
		rows, found := readRows(name, embedded(name), titles, true)
		problems = append(problems, found...)
		for _, row := range rows {
			row.Origin = "parts table"
			if _, twice := t.index[fold(row.Type)]; twice {
				problems = append(problems, syntax.Diagnostic{At: syntax.Position{File: name, Line: 1, Column: 1}, What: "type " + row.Type + " stands in two files"})
			}
			t.index[fold(row.Type)] = row
			t.rows = append(t.rows, row)
		}
	}
	t.numbers, t.transistors = numbersOf(t.rows), transistorsOf(t.rows)
	return t, problems
}

// embedded returns a built-in file; it must exist.
func embedded(name string) []byte {
	bytes, err := data.ReadFile("data/" + name)
	if err != nil {
		panic(err)
	}
	return bytes
}

// embeddedHash is the beginning of the hash of all built-in files, names included.
func embeddedHash() string {
	hash := sha256.New()
	entries, err := data.ReadDir("data") // sorted by name
	if err != nil {
		panic(err)
	}
	for _, entry := range entries {
		fmt.Fprintf(hash, "%s %d\n", entry.Name(), len(embedded(entry.Name())))
		hash.Write(embedded(entry.Name()))
	}
	return fmt.Sprintf("%x", hash.Sum(nil)[:4])
}

// readTitles reads what the source keys stand for.
func readTitles() (map[string]string, []syntax.Diagnostic) {
	table, problems := records.Read("sources.csv", embedded("sources.csv"), "key", "title")
	titles := map[string]string{}
	for _, record := range table.Records {
		titles[record.Text("key")] = record.Text("title")
	}
	return titles, problems
}

// Load adds the rows of a user's CSV file, which has the columns of the built-in files. They win over
// built-in rows of the same type. The error names every problem as file:line:col.
func (t *Table) Load(file string, text []byte) (*Table, error) {
	titles, problems := readTitles()
	rows, found := readRows(file, text, titles, false)
	problems = append(problems, found...)
	if err := records.Join(problems); err != nil {
		return nil, err
	}
	merged := &Table{rows: t.rows, numbers: t.numbers, transistors: t.transistors, index: map[string]*Row{}}
	for _, row := range t.rows {
		merged.index[fold(row.Type)] = row
	}
	for _, row := range t.user {
		if !hasType(rows, row.Type) {
			merged.user = append(merged.user, row)
		}
	}
	for _, row := range rows {
		row.Origin = file
		merged.user = append(merged.user, row)
	}
	for _, row := range merged.user {
		merged.index[fold(row.Type)] = row
	}
	merged.version = fmt.Sprintf("%s+%x", t.version, sha256.Sum256(text))[:len(t.version)+9]
	return merged, nil
}

// Load is the built-in table with the rows of a user's CSV file.
func Load(file string, text []byte) (*Table, error) { return Default().Load(file, text) }

func hasType(rows []*Row, name string) bool {
	for _, row := range rows {
		if fold(row.Type) == fold(name) {
			return true
		}
	}
	return false
}

// Rows lists all rows, the user's first, each type once.
func (t *Table) Rows() []*Row {
	list := append([]*Row(nil), t.user...)
	for _, row := range t.rows {
		if t.index[fold(row.Type)] == row {
			list = append(list, row)
		}
	}
	return list
}

// Version names the revision of the tables and the beginning of the hash of their bytes; a user's
// file adds its own.
func (t *Table) Version() string { return t.version }

// Lookup finds the row of a canonical type name, case aside: "7812", "1N4734A", "ZENER12". It knows the
// tolerance grades of zeners whose row stands for another grade ("1N4734", "BZX84B6V2") and zeners
// of which only the voltage is known ("ZENER5V1"). For names as people write them see Find.
func (t *Table) Lookup(typeName string) (*Row, bool) {
	if row, ok := t.index[fold(typeName)]; ok {
		return row, true
	}
	if row, ok := t.graded(fold(typeName)); ok {
		return row, true
	}
	if row, ok := t.ofGainGroup(fold(typeName)); ok {
		return row, true
	}
	return genericZener(fold(typeName))
}

// Recognise implements netlist.Library.
func (t *Table) Recognise(typeName string) (netlist.KnownPart, bool) {
	row, ok := t.Find(typeName)
	if !ok {
		return netlist.KnownPart{}, false
	}
	return row.Known(), true
}

// Named implements netlist.Library.
func (t *Table) Named(typeName string) (netlist.KnownPart, bool) {
	if row, ok := t.Lookup(typeName); ok {
		return row.Known(), true
	}
	return t.Recognise(typeName)
}

var _ netlist.Library = (*Table)(nil)

// fold makes type names comparable.
func fold(name string) string { return strings.ToUpper(name) }

// resolve turns source keys separated by "; " into titles, empty when one of them has none.
func resolve(titles map[string]string, keys string) string {
	var list []string
	for _, key := range strings.Split(keys, "; ") {
		if titles[key] == "" {
			return ""
		}
		list = append(list, titles[key])
	}
	return strings.Join(list, "; ")
}
