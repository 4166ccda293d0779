package checks

import (
	"bufio"
	"context"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"

	"railproof/netlist"
)

// demos holds, for each check, a netlist that passes and one that does not. What is to be found stands in
// comments of the netlist, worked out by hand beside it:
//
//   - finds ELEMENT VERDICT[/SEVERITY] [QUANTITY VALUE TOLERANCE%]
//   - finds ELEMENT not VERDICT
//   - finds nothing [VERDICT]
//
// The element of a finding that names none is "-". Findings that are neither listed nor proven are errors.
const demos = "../testdata/checks"

func TestDemoNetlists(t *testing.T) {
	for _, c := range Catalogue() {
		for _, which := range []string{"pass", "fail"} {
			t.Run(c.Name+"/"+which, func(t *testing.T) {
				t.Parallel()
				file := filepath.Join(demos, c.Name, which+".cir")
				expected := expectations(t, file)
				result, diagnostics, err := Run(context.Background(), Options{Source: netlist.Source{File: file}, Only: []string{c.Name}, Jobs: 1})
				for _, d := range diagnostics {
					t.Error(d)
				}
				if err != nil || result == nil {
					t.Fatal(err)
				}
				compare(t, expected, result.Findings)
				distinct(t, result.Findings)
			})
		}
	}
}

// distinct holds that a finding is known by its check, element and quantity.
func distinct(t *testing.T, found []Finding) {
	t.Helper()
	seen := map[string]bool{}
	for _, f := range found {
		if f.Stress == nil {
			continue
		}
		key := f.Check + " " + f.Element + " " + string(f.Stress.Quantity)
		if seen[key] {
			t.Errorf("%s stands twice", key)
		}
		seen[key] = true
	}
}

type expectation struct {
	text                                 string
	element, verdict, severity, quantity string
	not                                  bool
	value, tolerance                     float64
}

func expectations(t *testing.T, file string) []expectation {
	t.Helper()
	f, err := os.Open(file)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	var list []expectation
	for lines := bufio.NewScanner(f); lines.Scan(); {
		text, ok := strings.CutPrefix(lines.Text(), "* finds ")
		if !ok {
			continue
		}
		e, err := parseExpectation(text)
		if err != nil {
			t.Fatalf("%s: %q: %v", file, text, err)
		}
		list = append(list, e)
	}
	if len(list) == 0 {
		t.Fatalf("%s says not what is to be found", file)
	}
	return list
}

func parseExpectation(text string) (expectation, error) {
	words := strings.Fields(text)
	e := expectation{text: text, element: words[0]}
	words = words[1:]
	if len(words) > 0 && words[0] == "not" {
		e.not, words = true, words[1:]
	}
	if len(words) > 0 {
		e.verdict, e.severity, _ = strings.Cut(words[0], "/")
		words = words[1:]
	}
	switch len(words) {
	case 0:
		return e, nil
	case 3:
	default:
		return e, fmt.Errorf("expected QUANTITY VALUE TOLERANCE%%")
	}
	e.quantity = words[0]
	var err error
	if e.value, err = strconv.ParseFloat(words[1], 64); err != nil {
		return e, err
	}
	percent, err := strconv.ParseFloat(strings.TrimSuffix(words[2], "%"), 64)
	e.tolerance = percent / 100
	return e, err
}

func (e expectation) matches(f Finding) bool {
	element := f.Element
	if element == "" {
		element = "-"
	}
	if !strings.EqualFold(element, e.element) {
		return false
	}
	if e.not == (string(f.Verdict) == e.verdict) || e.severity != string(f.Severity) && !e.not {
		return false
	}
	if e.quantity == "" {
		return true
	}
	return f.Stress != nil && string(f.Stress.Quantity) == e.quantity && math.Abs(f.Stress.Value-e.value) <= e.tolerance*math.Abs(e.value)
}

func compare(t *testing.T, expected []expectation, found []Finding) {
	t.Helper()
	left := slices.Clone(found)
	for _, e := range expected {
		if e.element == "nothing" {
			for _, f := range found {
				if e.verdict == "" || string(f.Verdict) == e.verdict {
					t.Errorf("found %s, expected nothing %s", show(f), e.verdict)
				}
			}
			left = nil
			continue
		}
		i := slices.IndexFunc(left, e.matches)
		if i < 0 {
			t.Errorf("did not find %q", e.text)
			continue
		}
		left = slices.Delete(left, i, i+1)
	}
	for _, f := range left {
		if f.Verdict != Proven {
			t.Errorf("found %s as well", show(f))
		}
	}
	if t.Failed() {
		for _, f := range found {
			t.Log(show(f))
		}
	}
}

func show(f Finding) string {
	text := fmt.Sprintf("%s %s/%s", f.Element, f.Verdict, f.Severity)
	if f.Stress != nil {
		text += fmt.Sprintf(" %s %.5g", f.Stress.Quantity, f.Stress.Value)
	}
	return text + " | " + f.Note + " | " + f.Reason
}
