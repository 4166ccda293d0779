package study

import (
	"testing"

	"railproof/checks/parts"
	"railproof/netlist"
)

// Ratings on a model card count where no sheet, no card and no row of the parts table says otherwise.
func TestRatingsOnAModelCard(t *testing.T) {
	const text = "t\nV1 a 0 SIN(0 10 50)\nD1 a b DQ\nD2 a b D1N4004\nRL b 0 100\n.model DQ D(IS=1n Vpk=250 Iave=2)\n.model D1N4004 D(IS=1n Vpk=250)\n"
	c, d, faults := netlist.Parse("t.cir", []byte(text), nil, parts.Default())
	if len(faults) > 0 {
		t.Fatal(faults)
	}
	s := NewSupply(c, d, parts.Default())
	for _, want := range []struct {
		element netlist.ElementID
		symbol  netlist.Symbol
		value   float64
	}{{1, "VRRM", 250}, {1, "IFAV", 2}, {2, "VRRM", 400}} {
		if p, ok := s.Property(want.element, want.symbol); !ok || p.Value() != want.value {
			t.Errorf("%s %s: %+v, expected %g", c.Elements[want.element].Name, want.symbol, p, want.value)
		}
	}
}
