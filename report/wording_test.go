package report

import (
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"railproof/checks"
	"railproof/netlist/quantity"
)

func contains(text, part string) bool { return strings.Contains(text, part) }

func TestFoldNames(t *testing.T) {
	for in, want := range map[string]string{
		"D1 D2 D3 D4": "D1..D4", "D1 D2": "D1 D2", "D1 D3 D5": "D1 D3 D5", "D9 D10 D11": "D9..D11",
		"D01 D02 D03": "D01 D02 D03", "X1.D1 X1.D2 X1.D3": "X1.D1..X1.D3", "A B C": "A B C", "D1 D2 D3 R4 R5 R6": "D1..D3 R4..R6",
	} {
		if got := strings.Join(foldNames(strings.Fields(in)), " "); got != want {
			t.Errorf("%s became %s, want %s", in, got, want)
		}
	}
}

func TestFoldOfABridge(t *testing.T) {
	entries := fold(benchReport(t).Files[0].Findings)
	k := slices.IndexFunc(entries, func(f Folded) bool { return f.Check == "diode-reverse-voltage" })
	if k < 0 || entries[k].Name() != "D1..D4" || len(entries[k].Places) != 4 {
		t.Fatalf("the four diodes are not one entry: %+v", entries)
	}
	// A diode whose stress differs in the third digit stands alone.
	r := benchResult(t)
	r.Findings[2].Stress.Value = 43
	entries = fold(New([]Input{{File: r.File, Result: r}}, Options{Now: day}).Files[0].Findings)
	names := ""
	for _, e := range entries {
		if e.Check == "diode-reverse-voltage" {
			names += e.Name() + ";"
		}
	}
	if names != "D1 D2 D4;D3;" {
		t.Errorf("entries %s", names)
	}
}

// Two values are written with as many digits as tell them apart.
func TestPair(t *testing.T) {
	for _, c := range []struct {
		a, b   float64
		wa, wb string
	}{
		{1.42, 2, "1.42 V", "2.00 V"}, {28.314, 28.3, "28.31 V", "28.30 V"}, {28.30001, 28.3, "28.30001 V", "28.30000 V"},
		{40, 40, "40.0 V", "40.0 V"}, {-23.7, 0.5, "-23.7 V", "500 mV"}, {0, 0.02, "0 V", "20.0 mV"},
	} {
		if a, b := pair(c.a, c.b, quantity.Volt); a != c.wa || b != c.wb {
			t.Errorf("%g and %g became %s and %s, want %s and %s", c.a, c.b, a, b, c.wa, c.wb)
		}
	}
}

// What a part must be rated is rounded to the safe side.
func TestUpward(t *testing.T) {
	for _, c := range []struct {
		v     float64
		floor bool
		want  string
	}{
		{77.32, false, "77.4 V"}, {77.3, false, "77.3 V"}, {77.38, true, "77.3 V"}, {0.0200001, false, "20.1 mV"}, {0, false, "0 V"},
	} {
		if got := upward(c.v, quantity.Volt, c.floor); got != c.want {
			t.Errorf("%g became %s, want %s", c.v, got, c.want)
		}
	}
}

func TestWrap(t *testing.T) {
	got := wrap("one two   three four", 10)
	if strings.Join(got, "|") != "one two|three four" {
		t.Errorf("%q", got)
	}
	if got := wrap("C1 at +20 %, R1", 9); strings.Join(got, "|") != "C1 at|+20 %, R1" {
		t.Errorf("a per cent sign is torn from its number: %q", got)
	}
	if got := wrap("unbreakablelongword next", 8); strings.Join(got, "|") != "unbreakablelongword|next" {
		t.Errorf("%q", got)
	}
}

// The severest demand of several checks on one rating stands, and parts with the same demand share a line.
func TestNeeded(t *testing.T) {
	need := func(element, check string, v, next float64) checks.Finding {
		return checks.Finding{Check: check, Element: element, Verdict: checks.Unproven, Needs: &checks.Needs{Symbol: "UR", Value: v, Unit: quantity.Volt, NextStandard: next}}
	}
	f := File{}
	for _, x := range []checks.Finding{need("C1", "a", 20, 25), need("C1", "b", 30, 35), need("C2", "a", 30, 35), need("C2", "b", 20, 25), need("C3", "a", 30, 35), need("C3", "output-short", 300, 350)} {
		f.Findings = append(f.Findings, Finding{Finding: x})
	}
	list := f.Needed()
	if len(list) != 2 || list[0].Name() != "C1 C2" || list[0].Bound() != "at least 30 V" || list[0].NextStep() != "35 V" || list[1].Name() != "C3" {
		t.Errorf("%+v", list)
	}
}

func TestPrintable(t *testing.T) {
	if got := printable("a\x1b[31mb\u202ec\x00\nd\xff"); strings.ContainsAny(got, "\x1b\u202e\x00\n") || !contains(got, "a") {
		t.Errorf("%q", got)
	}
}

// Wrapped lines keep to the limit unless one word is longer, and no word is lost.
func TestWrapKeepsWords(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		words := rapid.SliceOfN(rapid.StringMatching(`[a-zµ]{1,12}`), 1, 40).Draw(rt, "words")
		limit := rapid.IntRange(4, 30).Draw(rt, "limit")
		lines := wrap(strings.Join(words, " "), limit)
		for _, line := range lines {
			if columns(line) > limit && strings.Contains(line, " ") {
				rt.Fatalf("%q is wider than %d", line, limit)
			}
		}
		if got := strings.Join(lines, " "); got != strings.Join(words, " ") {
			rt.Fatalf("%q became %q", words, lines)
		}
	})
}

// A title of a megabyte is laid out at once: 16 words of five columns a line.
func TestWrapIsLinear(t *testing.T) {
	if n := len(wrap(strings.Repeat("word ", 1<<18), 80)); n != (1<<18)/16 {
		t.Errorf("%d lines", n)
	}
}

// What a part must be rated is provisional while the stress behind it proves nothing.
func TestProvisionalNeed(t *testing.T) {
	r := benchResult(t)
	for k := range r.Findings {
		if r.Findings[k].Check == "capacitor-voltage" {
			r.Findings[k].Stress.Unproven = "the source resistance is unknown"
		}
	}
	rep := New([]Input{{File: r.File, Result: r}}, Options{Now: day})
	text := string(written(t, rep, "text", Style{}))
	for _, want := range []string{"UR, so far at least 25.4 V", "the stress is not proven yet: the source resistance is unknown", "at least 25.4 V ?", "may turn out worse"} {
		if !contains(text, want) {
			t.Errorf("the ledger does not say %q:\n%s", want, text)
		}
	}
	if err := validate(schemaOf(t, "report-1"), written(t, rep, "json", Style{})); err != nil {
		t.Error(err)
	}
}
