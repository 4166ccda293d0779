package netlist

import (
	"math"
	"strings"
	"testing"

	"railproof/netlist/quantity"
)

// A symbol means one thing on a kind of part, and no two are told apart by upper and lower case alone.
func TestSymbolTable(t *testing.T) {
	spelt := make(map[string]Symbol)
	for _, m := range meanings {
		fold := strings.ToLower(string(m.Symbol))
		if other, ok := spelt[fold]; ok && other != m.Symbol {
			t.Errorf("%s and %s differ by case alone", m.Symbol, other)
		}
		spelt[fold] = m.Symbol
		if m.Description == "" || m.Kinds == KindNone {
			t.Errorf("%s: no description or no kinds", m.Symbol)
		}
		for kind := KindRectifier; kind <= KindLoad; kind <<= 1 {
			count := 0
			for _, other := range meanings {
				if other.Symbol == m.Symbol && other.Kinds&kind != 0 {
					count++
				}
			}
			if count > 1 {
				t.Errorf("%s means %d things on a %s", m.Symbol, count, kind)
			}
		}
	}
	for _, c := range []struct {
		text string
		want Symbol
	}{{"vrrm", "VRRM"}, {"PIV", "VRRM"}, {"IF(AV)", "IFAV"}, {"I²t", "I2t"}, {"rthja", "RthJA"}, {"Ptot", "PD"}, {"polarized", "polarised"}} {
		if got, ok := FindSymbol(c.text); !ok || got != c.want {
			t.Errorf("FindSymbol(%q) = %q, %v", c.text, got, ok)
		}
	}
}

// What exporters and catalogues write on a card, and the rating it means.
func TestFieldRatings(t *testing.T) {
	for _, f := range []struct {
		card   string
		symbol Symbol
		want   float64
		unit   quantity.Unit
	}{
		{"C1 a 0 2200u V=50", "UR", 50, quantity.Volt},
		{"C1 a 0 2200u UR=35", "UR", 35, quantity.Volt},
		{"C1 a 0 2200u UR=35V", "UR", 35, quantity.Volt},
		{"C1 a 0 2200u Irms=130m", "IR", 0.13, quantity.Ampere},
		{"C1 a 0 2200u Rser=.05", "ESR", 0.05, quantity.Ohm},
		{"C1 a 0 2200u tol=20", "tolerance", 0.2, quantity.One},
		{"C1 a 0 2200u tolerance=-20%..+50%", "tolerance", 0.5, quantity.One},
		{"R1 a 0 100 pwr=0.5", "P70", 0.5, quantity.Watt},
		{"R1 a 0 100 P70=2W", "P70", 2, quantity.Watt},
		{"R1 a 0 100 tol=1", "tolerance", 0.01, quantity.One},
		{"R1 a 0 100 tol=5%", "tolerance", 0.05, quantity.One},
		{"L1 a 0 1m Rser=0.2", "Rcu", 0.2, quantity.Ohm},
		{"L1 a 0 1m Ipk=3", "Isat", 3, quantity.Ampere},
		{"D1 a 0 DX Vpk=400", "VRRM", 400, quantity.Volt},
		{"D1 a 0 DX Iave=1", "IFAV", 1, quantity.Ampere},
	} {
		c := build(t, f.card)
		ratings, unread := c.FieldRatings(0)
		if len(ratings) != 1 || len(unread) != 0 {
			t.Errorf("%s: %+v %+v", f.card, ratings, unread)
			continue
		}
		if r := ratings[0]; r.Symbol != f.symbol || math.Abs(r.Value.High-f.want) > 1e-12 || r.Value.Unit != f.unit || !strings.HasSuffix(r.Written, " on the card") {
			t.Errorf("%s: %+v", f.card, r)
		}
		if free := FieldRatings(c.Elements[0]); len(free) != 1 || free[0].Element != -1 || free[0].Value != ratings[0].Value {
			t.Errorf("%s: on its own %+v", f.card, free)
		}
	}
	c := build(t, "C1 a 0 2200u mfg=Somebody pn=123 V=0 Irms=much type=Al_electrolytic")
	ratings, unread := c.FieldRatings(0)
	if len(ratings) != 1 || ratings[0].Text != "electrolytic" || len(unread) != 1 || unread[0].Key != "Irms" {
		t.Errorf("%+v %+v", ratings, unread)
	}
	c.Elements[0].Device = Diode{Model: &DiodeModel{Name: "DX", Ratings: []Field{{Key: "Vpk", Value: "200"}, {Key: "mfg", Value: "x"}}}}
	c.Elements[0].Fields = nil
	if ratings, _ := c.ModelRatings(0); len(ratings) != 1 || ratings[0].Symbol != "VRRM" || ratings[0].Written != "Vpk=200 on model DX" {
		t.Errorf("%+v", ratings)
	}
}
