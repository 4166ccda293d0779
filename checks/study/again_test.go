package study

import (
	"context"
	"math"
	"testing"

	"railproof/checks/parts"
	"railproof/netlist"
)

// supplyOf reads a netlist and a duty sheet given as text.
func supplyOf(t *testing.T, deck, duty string) *Supply {
	t.Helper()
	c, d, faults := netlist.Parse("case.cir", []byte("case\n"+deck+"\n.end\n"), []byte(duty+"\n"), parts.Default())
	if len(faults) > 0 {
		t.Fatal(faults)
	}
	return NewSupply(c, d, parts.Default())
}

// Whatever condition was the worst of a stress - steady, cold, line off, an output shorted - solving it again on
// the same supply gives the stress again.
func TestAgainIsTheSame(t *testing.T) {
	if testing.Short() {
		t.Skip("takes long; held by the full run")
	}
	s := supplyOf(t, `V1 a 0 SIN(0 20 50)
RW a b 0.5
D1 b raw 1N4004
C1 raw 0 470u
X1 raw 0 out LM7812
C2 out 0 1u
R2 raw ref 1k
DZ1 0 ref 1N4740A
RL out 0 120`, "winding V1 as-drawn\nload RL 120Ohm..open\nambient 0C..40C\nprofile 10V 5s")
	table := Worst(context.Background(), s, 1)
	held := map[string]bool{}
	for _, want := range table.Stresses {
		if math.IsNaN(want.Value) || want.Unproven != "" {
			continue
		}
		once, ok := table.Again(context.Background(), s, want.Condition)
		if !ok {
			t.Errorf("%s %s cannot be solved again: %+v", want.Element, want.Quantity, want.Condition)
			continue
		}
		got, ok := once.Get(want.Element, want.Quantity)
		if !ok {
			t.Errorf("%s %s is missing, %s", want.Element, want.Quantity, want.Condition.Name)
			continue
		}
		if diff := math.Abs(got.Value - want.Value); diff > 2e-3*math.Abs(want.Value)+want.Error+got.Error+1e-6 {
			t.Errorf("%s %s: %g again, was %g in %s", want.Element, want.Quantity, got.Value, want.Value, want.Condition.Name)
		}
		held[want.Condition.Start+" "+want.Condition.Load] = true
		held[string(want.Quantity)] = true
	}
	for _, kind := range []string{"cold full", "steady full", "steady light", "steady shorted", string(MinHeadroom), string(DischargeTime)} {
		if !held[kind] {
			t.Errorf("no stress of the kind %q was solved again", kind)
		}
	}
}

// Twice the reservoir has about half the ripple; a tolerance that only the changed part has stays nominal.
func TestAgainOnAnotherValue(t *testing.T) {
	const duty = "winding V1 as-drawn\nload RL 100Ohm..1kOhm"
	deck := func(farads string) string {
		return "V1 a 0 SIN(0 20 50)\nRW a b 0.1\nD1 b out 1N4004\nC1 out 0 " + farads + "\nRL out 0 100"
	}
	s, larger, tiny := supplyOf(t, deck("4700u"), duty), supplyOf(t, deck("9400u"), duty), supplyOf(t, deck("4.7u"), duty)
	table := Worst(context.Background(), s, 1)
	ripple, ok := table.Get("node:out", RipplePeakToPeak)
	if !ok {
		t.Fatal("no ripple")
	}
	again := func(table *Table, s *Supply, c Condition) float64 {
		once, ok := table.Again(context.Background(), s, c)
		if !ok {
			t.Fatal("not solved again")
		}
		r, ok := once.Get("node:out", RipplePeakToPeak)
		if !ok {
			t.Fatal("no ripple")
		}
		return r.Value
	}
	if ratio := again(table, larger, ripple.Condition) / ripple.Value; ratio < 0.48 || ratio > 0.58 {
		t.Errorf("twice the reservoir leaves %.3g of the ripple", ratio)
	}
	// 4.7 uF has no tolerance of its own: the condition of the small one puts the large one at its nominal value.
	small := Worst(context.Background(), tiny, 1)
	least, _ := small.Get("node:out", RipplePeakToPeak)
	if nominal := again(small, s, least.Condition); nominal >= ripple.Value*(1-0.1) {
		t.Errorf("ripple %g V at the nominal value, %g V at the low end", nominal, ripple.Value)
	}
}

// A condition that is only words, or the netlist as written, is not solved again.
func TestAgainOfWords(t *testing.T) {
	s := supplyOf(t, "V1 a 0 10\nR1 a 0 1k", "")
	nominal := Nominal(context.Background(), s, false)
	for _, c := range []Condition{{Name: "ambient 40 degC"}, nominal.Stresses[0].Condition} {
		if _, ok := nominal.Again(context.Background(), s, c); ok {
			t.Errorf("%+v was solved", c)
		}
	}
}
