package netlist

import (
	"strings"
	"testing"
)

// regulators is a library that knows a few type names.
type regulators struct{}

func (r regulators) Named(name string) (KnownPart, bool) { return r.Recognise(name) }

func (regulators) Recognise(name string) (KnownPart, bool) {
	pins := []Pin{PinIn, PinReference, PinOut}
	switch name {
	case "LM7812":
		return KnownPart{Type: "7812", Role: RoleRegulator, Polarity: Positive, Pins: pins}, true
	case "ZENER_12":
		return KnownPart{Type: "zener 12 V", Role: RoleZener}, true
	case "DB107":
		return KnownPart{Type: "DB107", Role: RoleBridge}, true
	case "BD139":
		return KnownPart{Type: "BD139", Role: RoleTransistor, Polarity: Positive, Pins: []Pin{PinCollector, PinBase, PinEmitter}}, true
	case "LM317":
		return KnownPart{Type: "317", Role: RoleAdjustable, Polarity: Positive, Pins: pins}, true
	}
	if name == "TL431" {
		return KnownPart{Type: "431", Role: RoleShunt, Pins: []Pin{PinReference, PinAnode, PinCathode}}, true
	}
	return KnownPart{}, false
}

// The divider shows the reference of a shunt reference, the sign of the supply which of the others is the cathode.
func TestShuntPinsFromTopology(t *testing.T) {
	positive := "t\nV1 in 0 12\nR1 in k 100\nR2 k ref 10k\nR3 ref 0 10k\nRL k 0 1k\n"
	negative := "t\nV1 0 in 12\nR1 in a 100\nR2 a ref 10k\nR3 ref 0 10k\nRL a 0 1k\n"
	tied := "t\nV1 in 0 12\nR1 in k 100\n"
	open := "t\nV1 in 0 12\nV2 out 0 12\nR1 in k 100\nR2 out ref 10k\nR3 ref 0 10k\n"
	for card, want := range map[string]string{
		positive + "X1 ref 0 k TL431": "k ref 0", positive + "X1 k ref 0 TL431": "k ref 0", positive + "X1 ref k 0 TL431": "k ref 0",
		positive + "X1 k 0 ref TL431": "k ref 0", positive + "X1 0 k ref TL431": "k ref 0", positive + "X1 0 ref k TL431": "k ref 0",
		negative + "X1 ref a 0 TL431": "0 ref a", negative + "X1 0 ref a TL431": "0 ref a", negative + "X1 a 0 ref TL431": "0 ref a",
		tied + "X1 k k 0 TL431": "k k 0", tied + "X1 0 k k TL431": "k k 0", tied + "X1 k 0 k TL431": "k k 0",
		open + "X1 ref 0 k TL431": "k ref 0", open + "X1 k 0 ref TL431": "ref k 0",
	} {
		c, _, faults := Parse("t.cir", []byte(card+"\n"), nil, regulators{})
		if len(faults) > 0 {
			t.Fatal(faults)
		}
		id, _ := c.Find("X1")
		var names []string
		for _, n := range c.Elements[id].Nodes {
			names = append(names, c.Nodes[n].Name)
		}
		if got := strings.Join(names, " "); got != want {
			t.Errorf("%s: pins %s, want %s", card[strings.LastIndex(card, "X1"):], got, want)
		}
	}
}

// Whatever the order on the card, the pins are those that ground and the rectifier show; only a changed order is
// remarked as inferred.
func TestPinsFromTopology(t *testing.T) {
	supply := "title\nV1 a 0 SIN(0 24 50)\nD1 a raw DX\nC1 raw 0 1m\nRL out 0 100\n.model DX D\n"
	adjustable := supply + "R1 out adj 240\nR2 adj 0 2k\n"
	for card, inferred := range map[string]bool{
		supply + "X1 raw 0 out LM7812":                                    false,
		supply + "X1 raw out 0 LM7812":                                    true,
		supply + "X1 0 raw out LM7812":                                    true,
		supply + "X1 0 out raw LM7812":                                    true,
		supply + "X1 out 0 raw LM7812":                                    true,
		supply + "X1 out raw 0 LM7812":                                    true,
		adjustable + "X1 raw adj out LM317":                               false,
		adjustable + "X1 out adj raw LM317":                               true,
		adjustable + "X1 adj raw out LM317":                               true,
		adjustable + "X1 adj out raw LM317":                               true,
		adjustable + "D8 out raw DX\nD9 adj out DX\nX1 adj out raw LM317": true,
		adjustable + "D8 out raw DX\nD9 adj out DX\nX1 raw adj out LM317": false,
		supply + "D8 out raw DX\nX1 out 0 raw LM7812":                     true,
		supply + "D8 out raw DX\nX1 raw 0 out LM7812":                     false,
	} {
		c, _, faults := Parse("t.cir", []byte(card+"\n"), nil, regulators{})
		if len(faults) > 0 {
			t.Fatal(faults)
		}
		id, _ := c.Find("X1")
		var names []string
		for _, n := range c.Elements[id].Nodes {
			names = append(names, c.Nodes[n].Name)
		}
		want := "raw 0 out"
		if strings.Contains(card, "LM317") {
			want = "raw adj out"
		}
		last := card[strings.LastIndex(card, "X1"):]
		if got := strings.Join(names, " "); got != want {
			t.Errorf("%s: pins %s, want %s", last, got, want)
		}
		said := false
		for _, r := range c.Remarks {
			said = said || r.Element == "X1" && strings.Contains(r.Text, "inferred from the circuit")
		}
		if said != inferred {
			t.Errorf("%s: remarked as inferred: %v, want %v", last, said, inferred)
		}
	}
}
