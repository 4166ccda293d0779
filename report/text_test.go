package report

import (
	"bytes"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"
	"unicode/utf8"
)

// golden compares bytes with a file beside the tests; RAILPROOF_GOLDEN=write writes it anew.
func golden(t *testing.T, name string, got []byte) {
	t.Helper()
	path := filepath.Join("testdata", name)
	if os.Getenv("RAILPROOF_GOLDEN") == "write" {
		if err := os.MkdirAll("testdata", 0o777); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(path, got, 0o666); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(got, want) {
		t.Errorf("%s differs; got:\n%s", path, got)
	}
}

func written(t testing.TB, r *Report, format string, s Style) []byte {
	t.Helper()
	var b bytes.Buffer
	if err := r.Write(&b, format, s); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

func TestText(t *testing.T) { golden(t, "supply.txt", written(t, benchReport(t), "text", Style{})) }

var escape = regexp.MustCompile("\x1b\\[[0-9;]*m")

// Colour changes no letter, and the ledger keeps to 80 columns.
func TestTextColourAndWidth(t *testing.T) {
	plain := string(written(t, benchReport(t), "text", Style{}))
	painted := string(written(t, benchReport(t), "text", Style{Colour: true}))
	if !strings.Contains(painted, "\x1b[") {
		t.Error("no colour where it was asked for")
	}
	if escape.ReplaceAllString(painted, "") != plain {
		t.Error("the painted ledger says something else than the plain one")
	}
	for _, line := range strings.Split(plain, "\n") {
		if utf8.RuneCountInString(line) > width {
			t.Errorf("%d columns: %s", utf8.RuneCountInString(line), line)
		}
	}
	for _, word := range []string{"CRITICAL", "MAJOR", "MINOR", "UNPROVEN", "STOPPED"} {
		if !strings.Contains(plain, word) {
			t.Errorf("without colour the ledger does not say %s", word)
		}
	}
}

// A name from a netlist can neither colour the terminal nor break a line.
func TestTextHostileNames(t *testing.T) {
	r := benchResult(t)
	r.Title = "evil\x1b[2J\rtitle"
	r.Findings[0].Element = "D1\x1b]0;x\a"
	r.RailMap[0] += "\x1b[31m"
	r.Assumptions[0].Value = "a\nb"
	got := written(t, New([]Input{{File: "x\x1b.cir", Result: r}}, Options{Now: day}), "text", Style{})
	if bytes.ContainsAny(got, "\x1b\r\a") {
		t.Errorf("control characters pass through: %q", got)
	}
}

func TestTextOfUnreadFilesIsSilent(t *testing.T) {
	r := New([]Input{{File: "gone.cir", Failure: os.ErrNotExist}, {File: "bench/supply.cir", Result: benchResult(t)}}, Options{Gate: gateAt(t, "critical"), Now: day})
	got := string(written(t, r, "text", Style{}))
	if !strings.Contains(got, "1 of 2 files checked") || !strings.Contains(got, "NOT CHECKED") {
		t.Errorf("the ledger does not say that a file is missing:\n%s", got)
	}
}
