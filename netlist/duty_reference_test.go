package netlist

import (
	"os"
	"strings"
	"testing"

	"railproof/netlist/syntax"
)

// symbolRow is the row of a symbol in the reference.
func symbolRow(m Meaning) string {
	value := m.Unit.String()
	switch {
	case m.FreeWord:
		value = "a word"
	case m.TakesWord():
		value = strings.Join(m.Words, ", ")
	case value == "":
		value = "ratio"
	}
	if m.Range {
		value += " or range"
	}
	return "| `" + string(m.Symbol) + "` | " + m.Kinds.String() + " | " + value + " | " + m.Description + " |"
}

// The reference lists every symbol and statement, and each of its examples is read.
func TestReference(t *testing.T) {
	raw, err := os.ReadFile("DUTY.md")
	if err != nil {
		t.Fatal(err)
	}
	text := string(raw)
	for _, m := range meanings {
		if !strings.Contains(text, symbolRow(m)+"\n") {
			t.Errorf("missing:\n%s", symbolRow(m))
		}
	}
	for _, keyword := range syntax.DutyKeywords() {
		if !strings.Contains(text, "### `"+keyword+"`") {
			t.Errorf("no section on %s", keyword)
		}
	}
	for _, p := range StoredChargeProfiles {
		if !strings.Contains(text, "| `"+p.Name+"` |") {
			t.Errorf("profile %s is missing", p.Name)
		}
	}
	examples := 0
	for i, block := range strings.Split(text, "```") {
		if i%2 == 0 {
			continue
		}
		// Each block by itself: alternatives contradict one another.
		for _, line := range strings.Split(strings.TrimSpace(block), "\n") {
			c := build(t, dutyCircuit+"\nRN aux e 10\nC3 P 0 1u")
			examples++
			if d, faults := interpretDuty(c, statements{sheets: sheets{FromSheet: DutyLines("DUTY.md", line)}}); len(faults) > 0 {
				t.Errorf("%s: %v", line, faults)
			} else if strings.Contains(remarksOf(d), "unused") {
				t.Errorf("%s: %s", line, remarksOf(d))
			}
		}
	}
	if examples < 20 {
		t.Errorf("only %d examples", examples)
	}
}
