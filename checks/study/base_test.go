package study

import (
	"context"
	"math"
	"strings"
	"testing"

	"railproof/checks/parts"
	"railproof/netlist"
)

func worstOfText(t *testing.T, text string) *Table {
	t.Helper()
	c, d, faults := netlist.Parse("t.cir", []byte(text), nil, parts.Default())
	if len(faults) > 0 {
		t.Fatal(faults)
	}
	return Worst(context.Background(), NewSupply(c, d, parts.Default()), 0)
}

// Supplies side by side on one ground have the stresses that each has alone, and are solved in the conditions of
// the one that needs most: no load of one is varied against those of another.
func TestSuppliesSideBySide(t *testing.T) {
	a := strings.Split(`V1 a1 b1 SIN(0 17 50)
D1 a1 p1 1N4004
D2 b1 p1 1N4004
D3 0 a1 1N4004
D4 0 b1 1N4004
C1 p1 0 1000u
R1 p1 0 100
*: winding V1 11V 1A regulation=10%
*: load R1 100Ohm..open`, "\n")
	b := strings.Split(`V2 s2 0 SIN(0 30 50)
D5 s2 p2 1N4004
C2 p2 0 470u
R2 p2 o2 10
C3 o2 0 470u
IL2 p2 0 0.05
RL3 o2 0 1k
*: winding V2 20V 0.5A regulation=10%
*: load IL2 0A..0.05A
*: load RL3 1kOhm..open`, "\n")
	together := worstOfText(t, "t\n"+strings.Join(append(append([]string{}, a...), b...), "\n")+"\n")
	compared := 0
	for _, part := range [][]string{a, b} {
		alone := worstOfText(t, "t\n"+strings.Join(part, "\n")+"\n")
		for _, s := range alone.Stresses {
			found, ok := together.Get(s.Element, s.Quantity)
			if !ok {
				t.Errorf("%s has no %s beside the other", s.Element, s.Quantity)
				continue
			}
			compared++
			if same := math.IsNaN(s.Value) && math.IsNaN(found.Value); !same && math.Abs(found.Value-s.Value) > 1e-3*math.Abs(s.Value)+s.Error+found.Error+trifle(s.Unit) {
				t.Errorf("%s %s: %.7g alone in %s %v, %.7g beside the other in %s %v", s.Element, s.Quantity, s.Value, s.Condition.Name, s.Condition.Also, found.Value, found.Condition.Name, found.Condition.Also)
			}
		}
	}
	if compared < 80 {
		t.Errorf("only %d stresses compared", compared)
	}
	if n := len(together.Plan.baseSettings()); n != 8 { // two ends of the line, and 2 x 2 loads of the second supply
		t.Errorf("%d base conditions", n)
	}
}

// Of many loads of one part each is varied alone; all light and all full come first.
func TestCombinations(t *testing.T) {
	if list := combinations(2); len(list) != 4 || list[0][0]+list[0][1] != 0 || list[3][0]+list[3][1] != 2 {
		t.Errorf("%v", list)
	}
	list := combinations(6)
	if len(list) != 14 {
		t.Fatalf("%d", len(list))
	}
	for k, loads := range list {
		sum := 0.0
		for _, x := range loads {
			sum += x
		}
		want := []float64{0, 6}
		if k > 1 {
			want = []float64{1, 5}
		}
		if sum != want[k%2] {
			t.Errorf("%d: %v", k, loads)
		}
	}
}
