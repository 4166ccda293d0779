package study

import (
	"context"
	"math"
	"testing"

	"railproof/checks/parts"
	"railproof/netlist"
)

// worstText studies a netlist with a duty sheet in every condition.
func worstText(t *testing.T, text, duty string) *Table {
	t.Helper()
	c, d, faults := netlist.Parse("test.cir", []byte(text), []byte(duty), parts.Default())
	if len(faults) > 0 {
		t.Fatal(faults)
	}
	return Worst(context.Background(), NewSupply(c, d, parts.Default()), 2)
}

// The dissipation of a regulator behind a resistance, I (V0 - VOUT - I R), is largest at I = (V0 - VOUT)/(2 R): with
// 26 V, 5 V and 30 ohm at 0.35 A, where it is (V0 - VOUT)^2/(4 R) = 3.675 W, against 3.0 W at the full 0.5 A.
func TestDissipationInsideTheLoadRange(t *testing.T) {
	table := worstText(t, `regulator behind a resistance
V1 in 0 26
R1 in raw 30
C1 raw 0 1u
X1 raw 0 out REG
ILOAD out 0 0.5
`, `rate X1 VOUT=5V VDO=1V IQ=1uA
part X1 7805 pins=in,gnd,out
line 26V 26V..26V
load ILOAD 0A..0.5A
ambient 27C..27C
rate R1 tolerance=0.001%
rate C1 tolerance=0.001%
`)
	s, ok := table.Get("X1", MeanPower)
	if !ok || s.Unproven != "" {
		t.Fatal(s)
	}
	if want := 21.0 * 21 / 120; math.Abs(s.Value-want) > 2e-3*want {
		t.Errorf("%.4g W in %s; expected %.4g W", s.Value, s.Condition.Name, want)
	}
	t.Log(s.Condition.Name, s.Condition.Also)
}
