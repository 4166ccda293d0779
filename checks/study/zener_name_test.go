package study

import (
	"context"
	"math"
	"strings"
	"testing"
)

// A zener of which only the name tells the voltage holds it: from 20 V through 1 kohm about the 5.1 V, whatever the
// spelling. (20 V - 5.1 V)/1 kohm = 14.9 mA flow.
func TestZenerByTheVoltageInItsName(t *testing.T) {
	for _, name := range strings.Fields("MMSZ5V1 MM3Z5V1 TZMC5V1 SMAZ5V1 PDZ5.1B UDZS5.1B 1SMB5918BT3G 1N5918B RD5.1E 5V1 5.1V") {
		s := namedSupply(t, "x\nV1 in 0 20\nR1 in z 1k\nD1 0 z "+name+"\nR2 z 0 1meg\n")
		table := Nominal(context.Background(), s, false)
		v := value(t, table, "R2", PeakVoltage)
		if math.Abs(v-5.1) > 0.2 {
			t.Errorf("%s holds %g V, want 5.1 V", name, v)
		}
		if text := assumptionsOf(NewPlan(s), "D1"); !strings.Contains(text, "a zener of 5.1 V (type name") {
			t.Errorf("%s: assumed %q", name, text)
		}
		if !s.IsZener(2) || !s.Circuit.IsZener(2) {
			t.Errorf("%s is no zener", name)
		}
	}
}

// A zener's name without a voltage is not solved as a plain diode: what hangs on it is unproven until VZ is stated.
func TestZenerWithoutAVoltage(t *testing.T) {
	for _, card := range []string{"HZ5C2", "MMSZ4678", "DZ1", "1N4099", "HZ5C2\n.model HZ5C2 D"} {
		deck := "x\nV1 in 0 20\nR1 in z 1k\nD1 0 z " + card + "\nR2 z 0 1meg\n"
		table := Nominal(context.Background(), namedSupply(t, deck), true)
		if found, ok := table.Get("R2", PeakVoltage); !ok || !strings.Contains(found.Unproven, "`rate D1 VZ=...V`") {
			t.Errorf("%s: %+v", card, found)
		}
		stated := Nominal(context.Background(), namedSupply(t, deck+"*: rate D1 VZ=5.1V\n"), true)
		if v := value(t, stated, "R2", PeakVoltage); math.Abs(v-5.1) > 0.2 {
			t.Errorf("%s with VZ stated holds %g V", card, v)
		}
	}
	// A card with parameters counts as written, and that it has no breakdown is said.
	s := namedSupply(t, "x\nV1 in 0 20\nR1 in z 1k\nD1 0 z DZ1\nR2 z 0 1meg\n.model DZ1 D(IS=1n)\n")
	within(t, Nominal(context.Background(), s, false), "R2", PeakVoltage, 19.98, 0.001)
	if text := assumptionsOf(NewPlan(s), "D1"); !strings.Contains(text, "without breakdown") {
		t.Errorf("assumed %q", text)
	}
}
