package study

import (
	"context"
	"strings"
	"testing"

	"railproof/checks/parts"
	"railproof/netlist"
)

// A run that is called off ends at once and proves nothing.
func TestCalledOff(t *testing.T) {
	c, d, faults := netlist.Parse("t.cir", []byte("t\n"+strings.Join(bridgeText(21.2, 0.8, 2200e-6, 33), "\n")+"\n"+plainModel), nil, parts.Default())
	if len(faults) > 0 {
		t.Fatal(faults)
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	table := Worst(ctx, NewSupply(c, d, parts.Default()), 2)
	s, ok := table.Get("C1", MaxVoltage)
	if !ok || s.Unproven == "" {
		t.Errorf("%+v", s)
	}
}
