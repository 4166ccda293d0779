package netlist

import (
	"math"
	"testing"
)

// expressionOf reads the formula of a source and evaluates it at probe values.
func expressionOf(t *testing.T, card string, probes ...float64) (float64, []float64) {
	t.Helper()
	c, _, faults := Parse("t.cir", []byte("title\nV1 a 0 1\nV2 b 0 1\nR1 a 0 1\n"+card+"\nRO o 0 1\n"), nil, nil)
	if len(faults) > 0 {
		t.Fatal(faults)
	}
	for _, e := range c.Elements {
		if d, ok := e.Device.(Behavioural); ok {
			gradient := make([]float64, len(d.Expression.Probes()))
			return d.Expression.Evaluate(probes, 0, gradient), gradient
		}
	}
	t.Fatalf("%s: no formula was read: %+v", card, c.Elements)
	return 0, nil
}

// Forms of E, G and B by hand: at V(a) = 3, V(b) = 2.
func TestFormulaForms(t *testing.T) {
	for _, c := range []struct {
		card     string
		probes   []float64
		value    float64
		gradient []float64
	}{
		{"E1 o 0 POLY(1) a 0 1 2 3", []float64{3}, 1 + 2*3 + 3*9, []float64{2 + 6*3}},
		{"E1 o 0 POLY(1) a 0 5", []float64{3}, 15, []float64{5}},
		{"E1 o 0 POLY(2) a 0 b 0 0 1 1", []float64{3, 2}, 5, []float64{1, 1}},
		{"E1 o 0 POLY(2) (a,0) (b,0) 0 0 0 0 1", []float64{3, 2}, 6, []float64{2, 3}},
		{"G1 o 0 TABLE {V(a)} = (0,0) (2,4) (4,5)", []float64{3}, 4.5, []float64{0.5}},
		{"E1 o 0 VALUE={V(a)*V(b)^2}", []float64{3, 2}, 12, []float64{4, 12}},
		{"B1 o 0 V=min(V(a), 2*V(b)) + sqrt(V(b)+2)", []float64{3, 2}, 5, []float64{1, 0.25}},
		{"B1 o 0 I={V(a) > 2 ? exp(V(b)) : 0}", []float64{3, 2}, math.Exp(2), []float64{0, math.Exp(2)}},
	} {
		v, g := expressionOf(t, c.card, c.probes...)
		if math.Abs(v-c.value) > 1e-12*math.Abs(c.value) {
			t.Errorf("%s: %g, want %g", c.card, v, c.value)
		}
		// A probe that first stands in a condition only has no slope; compare those that have one.
		sum, want := 0.0, 0.0
		for _, x := range g {
			sum += x
		}
		for _, x := range c.gradient {
			want += x
		}
		if math.Abs(sum-want) > 1e-9*(1+math.Abs(want)) {
			t.Errorf("%s: slopes %v, want %v", c.card, g, c.gradient)
		}
	}
}
