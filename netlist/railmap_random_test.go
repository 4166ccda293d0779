package netlist

import (
	"fmt"
	"reflect"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

// Whatever is connected to whatever, the graph is walked in bounded time, without a panic, and the same
// way twice; what it names is in the circuit.
func TestAnyCircuit(t *testing.T) {
	values := map[string][]string{
		"R": {"1", "100", "2meg"}, "C": {"1u", "100u", "100n"}, "L": {"1m"}, "V": {"SIN(0 17 50)", "0", "12", "SIN(0 325 50)"},
		"I": {"0.1"}, "D": {"1N4007", "1N4742A", "DX", "DZ BV=12"}, "Q": {"NPN", "PNP"}, "U": {"7812", "7912", "TL431", "NONE"}, "E": {"0.1"},
	}
	letters := []string{"D", "D", "R", "C", "V", "L", "I", "Q", "U", "E"}
	rapid.Check(t, func(t *rapid.T) {
		count := rapid.IntRange(1, 24).Draw(t, "count")
		node := rapid.SampledFrom([]string{"0", "a", "b", "c", "d", "e", "f"})
		var cards []string
		for i := range count {
			letter := rapid.SampledFrom(letters).Draw(t, "letter")
			pins := map[string]int{"Q": 3, "U": 3, "E": 4}[letter]
			card := fmt.Sprintf("%s%d", letter, i)
			for range max(2, pins) {
				card += " " + node.Draw(t, "node")
			}
			cards = append(cards, card+" "+rapid.SampledFrom(values[letter]).Draw(t, "value"))
		}
		text := strings.Join(cards, "\n")
		describe := func() ([]string, []Fact, []ElementID, []ZenerFeed, []Island, []byte) {
			c := build(t, text)
			d, _ := interpretDuty(c, statements{sheets: sheets{FromSheet: nil}})
			var rails []string
			for _, r := range c.RailMap(d) {
				rails = append(rails, r.String())
			}
			if len(rails) > maxChains {
				t.Fatalf("%d rails", len(rails))
			}
			return rails, c.Structure(d), c.FindLoads(d), c.ZenerFeeds(), c.Islands(), Draft(c, d, nil)
		}
		a1, a2, a3, a4, a5, a6 := describe()
		b1, b2, b3, b4, b5, b6 := describe()
		if !reflect.DeepEqual([]any{a1, a2, a3, a4, a5, a6}, []any{b1, b2, b3, b4, b5, b6}) {
			t.Fatal("described differently the second time")
		}
	})
}
