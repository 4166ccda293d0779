// Package records reads the CSV tables of parts and of derating policies: a header line names the
// columns, every other line is a record, and each field keeps the place it was read from.
//
// Lines that begin with # are comments. Fields are trimmed of surrounding blanks.
package records

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"
	"unicode/utf8"

	"railproof/netlist/syntax"
)

// Limits of a table. They stop a wrong file early.
const (
	MaxBytes   = 8 << 20 // of the whole file
	MaxProblem = 50      // problems reported for one file
)

// Table is a CSV file with a header.
type Table struct {
	File    string
	Columns []string // as in the header, in order
	Records []Record
	index   map[string]int // of Columns
}

// Record is one line of a Table.
type Record struct {
	At     syntax.Position
	fields []field
	table  *Table
}

type field struct {
	text string
	at   syntax.Position
}

// Text is the field of a column, empty where the file has no such column.
func (r Record) Text(column string) string { return r.field(column).text }

// Place is the place of a field; of the record where the file has no such column.
func (r Record) Place(column string) syntax.Position { return r.field(column).at }

func (r Record) field(column string) field {
	if i, ok := r.table.index[column]; ok && i < len(r.fields) {
		return r.fields[i]
	}
	return field{at: r.At}
}

// Number reads the field as a finite decimal number. ok is false for an empty field.
func (r Record) Number(column string) (value float64, ok bool, err error) {
	f := r.field(column)
	if f.text == "" {
		return 0, false, nil
	}
	value, err = ParseNumber(f.text)
	if err != nil {
		return 0, false, syntax.Diagnostic{At: f.at, What: fmt.Sprintf("%s: %q is not a number", column, f.text), Expected: "a number in SI units, such as 0.0083 or 1e-6"}
	}
	return value, true, nil
}

// ParseNumber reads a finite decimal number; hexadecimal forms, infinities and NaN are refused.
func ParseNumber(text string) (float64, error) {
	if strings.ContainsAny(text, "xXpP_") {
		return 0, strconv.ErrSyntax
	}
	value, err := strconv.ParseFloat(text, 64)
	if err != nil {
		return 0, err
	}
	if math.IsInf(value, 0) || math.IsNaN(value) {
		return 0, strconv.ErrRange
	}
	return value, nil
}

// Read reads a table. Required columns must be in the header. It stops at the first line that is not
// CSV and returns what it read up to there together with all problems found.
func Read(file string, data []byte, required ...string) (*Table, []syntax.Diagnostic) {
	t := &Table{File: file, index: map[string]int{}}
	start := syntax.Position{File: file, Line: 1, Column: 1}
	if len(data) > MaxBytes {
		return t, []syntax.Diagnostic{{At: start, What: fmt.Sprintf("the table has %d bytes", len(data)), Expected: fmt.Sprintf("at most %d", MaxBytes)}}
	}
	data = bytes.TrimPrefix(data, []byte("\ufeff"))
	if !utf8.Valid(data) {
		return t, []syntax.Diagnostic{{At: start, What: "the table is not UTF-8", Expected: "UTF-8 text"}}
	}
	lines := bytes.Split(data, []byte("\n"))
	reader := csv.NewReader(bytes.NewReader(data))
	reader.Comment = '#'
	reader.FieldsPerRecord = -1
	reader.TrimLeadingSpace = true
	position := func(index int) syntax.Position {
		line, column := reader.FieldPos(index)
		return characters(file, lines, line, column)
	}
	header, err := reader.Read()
	if errors.Is(err, io.EOF) {
		return t, []syntax.Diagnostic{{At: start, What: "the table is empty", Expected: "a header line that names the columns"}}
	}
	if err != nil {
		return t, []syntax.Diagnostic{broken(file, lines, err)}
	}
	var problems []syntax.Diagnostic
	for i, name := range header {
		name = strings.TrimSpace(name)
		if _, twice := t.index[name]; twice {
			problems = append(problems, syntax.Diagnostic{At: position(i), What: fmt.Sprintf("column %q stands twice in the header", name), Expected: "each column once"})
		}
		t.index[name] = len(t.Columns)
		t.Columns = append(t.Columns, name)
	}
	for _, name := range required {
		if _, ok := t.index[name]; !ok {
			problems = append(problems, syntax.Diagnostic{At: position(0), What: fmt.Sprintf("the header has no column %q", name), Expected: "the columns " + strings.Join(required, ", ")})
		}
	}
	if len(problems) > 0 {
		return t, problems
	}
	for {
		texts, err := reader.Read()
		if errors.Is(err, io.EOF) {
			return t, problems
		}
		if err != nil {
			return t, append(problems, broken(file, lines, err))
		}
		record := Record{table: t, At: position(0)}
		for i, text := range texts {
			record.fields = append(record.fields, field{strings.TrimSpace(text), position(i)})
		}
		if len(texts) > len(t.Columns) {
			problems = append(problems, syntax.Diagnostic{At: position(len(t.Columns)), What: fmt.Sprintf("%d fields", len(texts)), Expected: fmt.Sprintf("at most the %d of the header", len(t.Columns))})
		} else {
			t.Records = append(t.Records, record)
		}
		if len(problems) >= MaxProblem {
			return t, problems
		}
	}
}

// characters turns a byte column of the CSV reader into a column in characters.
func characters(file string, lines [][]byte, line, column int) syntax.Position {
	if line >= 1 && line <= len(lines) {
		text := lines[line-1]
		if end := column - 1; end >= 0 && end <= len(text) {
			column = utf8.RuneCount(text[:end]) + 1
		}
	}
	return syntax.Position{File: file, Line: line, Column: column}
}

func broken(file string, lines [][]byte, err error) syntax.Diagnostic {
	var parse *csv.ParseError
	if errors.As(err, &parse) {
		return syntax.Diagnostic{At: characters(file, lines, parse.Line, parse.Column), What: "not a CSV line: " + parse.Err.Error(), Expected: "fields separated by commas, text with commas in double quotes"}
	}
	return syntax.Diagnostic{At: syntax.Position{File: file, Line: 1, Column: 1}, What: err.Error()}
}

// Join makes one error of several diagnostics, nil of none. At most MaxProblem are kept.
func Join(problems []syntax.Diagnostic) error {
	var all []error
	for i, problem := range problems {
		if i == MaxProblem {
			break
		}
		all = append(all, problem)
	}
	return errors.Join(all...)
}
