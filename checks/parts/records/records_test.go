package records

import (
	"bytes"
	"math"
	"strings"
	"testing"
)

func TestReadKeepsPlaces(t *testing.T) {
	table, problems := Read("t.csv", []byte("\ufeff# remark\r\na, b ,c\r\n1,\"x, µ\", 3 \r\n\r\n4\r\n"), "a")
	if len(problems) > 0 {
		t.Fatal(problems)
	}
	if len(table.Records) != 2 || strings.Join(table.Columns, " ") != "a b c" {
		t.Fatalf("%+v", table)
	}
	first := table.Records[0]
	if first.Text("b") != "x, µ" || first.Text("c") != "3" || first.Text("d") != "" {
		t.Errorf("fields %q %q %q", first.Text("b"), first.Text("c"), first.Text("d"))
	}
	if at := first.Place("b").String(); at != "t.csv:3:3" {
		t.Errorf("b stands at %s", at)
	}
	if at := table.Records[1].Place("c").String(); at != "t.csv:5:1" {
		t.Errorf("a field that is not there stands at %s, want that of the record", at)
	}
	if value, ok, err := first.Number("c"); value != 3 || !ok || err != nil {
		t.Errorf("c = %g %v %v", value, ok, err)
	}
	if _, ok, err := table.Records[1].Number("c"); ok || err != nil {
		t.Errorf("an empty field is no number and no error: %v %v", ok, err)
	}
}

func TestNumbersAreFiniteDecimals(t *testing.T) {
	for text, want := range map[string]float64{"1": 1, "-2.5e-3": -0.0025, ".5": 0.5, "1E6": 1e6} {
		if got, err := ParseNumber(text); err != nil || got != want {
			t.Errorf("%q = %g, %v", text, got, err)
		}
	}
	for _, text := range []string{"", "inf", "NaN", "0x10", "1_000", "1e999", "1,5", "5V", "1p3"} {
		if got, err := ParseNumber(text); err == nil {
			t.Errorf("%q was read as %g", text, got)
		}
	}
	if math.MaxFloat64 != mustNumber(t, "1.7976931348623157e308") {
		t.Error("the largest number is lost")
	}
}

func mustNumber(t *testing.T, text string) float64 {
	t.Helper()
	value, err := ParseNumber(text)
	if err != nil {
		t.Fatal(err)
	}
	return value
}

func TestTooLargeATableIsRefused(t *testing.T) {
	_, problems := Read("t.csv", bytes.Repeat([]byte("a"), MaxBytes+1), "a")
	if len(problems) != 1 || !strings.Contains(problems[0].Error(), "at most 8388608") {
		t.Error(problems)
	}
}
