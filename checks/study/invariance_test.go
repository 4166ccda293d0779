package study

import (
	"context"
	"fmt"
	"math"
	"sort"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"railproof/checks/parts"
	"railproof/netlist"
)

// solveText solves a netlist exactly as written.
func solveText(t interface{ Fatalf(string, ...any) }, text string) *Table {
	c, d, faults := netlist.Parse("test.cir", []byte(text), nil, parts.Default())
	if len(faults) > 0 {
		t.Fatalf("%v\n%s", faults, text)
	}
	return Nominal(context.Background(), NewSupply(c, d, parts.Default()), false)
}

// value reads one stress that must have been solved.
func value(t interface{ Fatalf(string, ...any) }, table *Table, element string, q Quantity) float64 {
	s, ok := table.Get(element, q)
	if !ok || s.Unproven != "" {
		t.Fatalf("%s %s: %v", element, q, s)
	}
	return s.Value
}

// bridgeText is a bridge supply: amplitude V, source resistance and load ohm, reservoir F.
func bridgeText(amplitude, source, reservoir, load float64) []string {
	return []string{
		fmt.Sprintf("V1 a b SIN(0 %g 50)", amplitude),
		fmt.Sprintf("RS a c %g", source),
		"D1 c out DX", "D2 b out DX", "D3 0 c DX", "D4 0 b DX",
		fmt.Sprintf("C1 out 0 %g", reservoir),
		fmt.Sprintf("RL out 0 %g", load),
	}
}

const sharpModel = ".model DX D(IS=1n N=0.02)\n"
const plainModel = ".model DX D(IS=5n N=1.8)\n"

// Scaling every impedance by one factor leaves voltages alone and divides currents by it: with diodes so near
// to ideal that their drop does not count.
func TestImpedanceScaling(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		factor := rapid.Float64Range(0.2, 5).Draw(t, "factor")
		load := rapid.Float64Range(20, 200).Draw(t, "load")
		c := rapid.Float64Range(100e-6, 2000e-6).Draw(t, "reservoir")
		a := solveText(t, "title\n"+strings.Join(bridgeText(50, 0.02*load, c, load), "\n")+"\n"+sharpModel)
		b := solveText(t, "title\n"+strings.Join(bridgeText(50, 0.02*load*factor, c/factor, load*factor), "\n")+"\n"+sharpModel)
		close := func(what string, x, y, tolerance float64) {
			if math.Abs(x-y) > tolerance*math.Abs(x) {
				t.Fatalf("%s: %g and %g", what, x, y)
			}
		}
		close("crest", value(t, a, "C1", MaxVoltage), value(t, b, "C1", MaxVoltage), 1e-3)
		close("trough", value(t, a, "C1", MinVoltage), value(t, b, "C1", MinVoltage), 1e-3)
		close("diode RMS", value(t, a, "D1", RMSCurrent), factor*value(t, b, "D1", RMSCurrent), 5e-3)
		close("reverse", value(t, a, "D1", PeakReverseVoltage), value(t, b, "D1", PeakReverseVoltage), 1e-3)
	})
}

// Reordering the cards and renaming nodes and elements changes nothing.
func TestOrderAndNames(t *testing.T) {
	lines := bridgeText(21.2, 0.8, 2200e-6, 33)
	base := solveText(t, "title\n"+strings.Join(lines, "\n")+"\n"+plainModel)
	rapid.Check(t, func(t *rapid.T) {
		shuffled := rapid.Permutation(lines).Draw(t, "order")
		text := strings.Join(shuffled, "\n")
		for _, r := range [][2]string{{" a ", " N$1 "}, {" b ", " +AC "}, {" c ", " Net-(D1-K) "}, {" out ", " raw "}} {
			text = strings.ReplaceAll(text, r[0], r[1])
		}
		other := solveText(t, "title\n"+text+"\n"+plainModel)
		for _, s := range base.Stresses {
			if strings.HasPrefix(s.Element, "node:") || s.Element == "V1" {
				continue
			}
			found := value(t, other, s.Element, s.Quantity)
			if math.Abs(found-s.Value) > 1e-6*math.Abs(s.Value)+1e-9 {
				t.Fatalf("%s %s: %g and %g", s.Element, s.Quantity, s.Value, found)
			}
		}
	})
}

// The choice of the ground node changes no stress of an element, and neither does the phase of the source.
func TestGroundAndPhase(t *testing.T) {
	lines := bridgeText(21.2, 0.8, 2200e-6, 33)
	base := solveText(t, "title\n"+strings.Join(lines, "\n")+"\n"+plainModel)
	variants := map[string]string{
		"ground at the output":  strings.ReplaceAll(strings.ReplaceAll(strings.Join(lines, "\n"), " 0 ", " low "), " out ", " 0 "),
		"ground at the winding": strings.ReplaceAll(strings.ReplaceAll(strings.Join(lines, "\n")+"\n", " 0 ", " low "), " b ", " 0 "),
		"phase 77 degrees":      strings.Replace(strings.Join(lines, "\n"), "21.2 50)", "21.2 50 0 0 77)", 1),
		"delayed by 3 ms":       strings.Replace(strings.Join(lines, "\n"), "21.2 50)", "21.2 50 3m)", 1),
	}
	names := make([]string, 0, len(variants))
	for name := range variants {
		names = append(names, name)
	}
	sort.Strings(names)
	for _, name := range names {
		other := solveText(t, "title\n"+variants[name]+"\n"+plainModel)
		for _, element := range []string{"D1", "D2", "D3", "D4", "C1", "RL", "RS"} {
			for _, s := range base.Stresses {
				if s.Element != element {
					continue
				}
				found := value(t, other, s.Element, s.Quantity)
				if math.Abs(found-s.Value) > 2e-3*math.Abs(s.Value)+1e-4 {
					t.Errorf("%s: %s %s: %g and %g", name, s.Element, s.Quantity, s.Value, found)
				}
			}
		}
	}
}

// A larger reservoir never lowers the trough.
func TestReservoirAndTrough(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		load := rapid.Float64Range(10, 300).Draw(t, "load")
		c := rapid.Float64Range(50e-6, 5000e-6).Draw(t, "reservoir")
		more := c * rapid.Float64Range(1.05, 4).Draw(t, "factor")
		a := value(t, solveText(t, "title\n"+strings.Join(bridgeText(21.2, 0.8, c, load), "\n")+"\n"+plainModel), "C1", MinVoltage)
		b := value(t, solveText(t, "title\n"+strings.Join(bridgeText(21.2, 0.8, more, load), "\n")+"\n"+plainModel), "C1", MinVoltage)
		if b < a-1e-3*a {
			t.Fatalf("trough %g V with %g F, %g V with %g F", a, c, b, more)
		}
	})
}

// Identical supplies in one netlist have identical stresses, and those of one alone.
func TestIdenticalIslands(t *testing.T) {
	one := solveText(t, "title\n"+strings.Join(bridgeText(21.2, 0.8, 2200e-6, 33), "\n")+"\n"+plainModel)
	var text strings.Builder
	text.WriteString("title\n.subckt supply out\n" + strings.Join(bridgeText(21.2, 0.8, 2200e-6, 33), "\n") + "\n" + plainModel + ".ends\n")
	for k := range 5 {
		fmt.Fprintf(&text, "X%d o%d supply\n", k, k)
	}
	many := solveText(t, text.String())
	for k := range 5 {
		for _, q := range []Quantity{PeakReverseVoltage, RMSCurrent, MeanPower} {
			a, b := value(t, one, "D1", q), value(t, many, fmt.Sprintf("X%d.D1", k), q)
			if math.Abs(a-b) > 1e-9*math.Abs(a) {
				t.Errorf("X%d.D1 %s: %g, alone %g", k, q, b, a)
			}
		}
	}
}

// No charge gathers: the mean current of each capacitor over a period is zero, whatever the circuit; so the
// mean of each diode pair of a bridge is half the load current.
func TestChargeBalance(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		load := rapid.Float64Range(10, 300).Draw(t, "load")
		c := rapid.Float64Range(50e-6, 5000e-6).Draw(t, "reservoir")
		table := solveText(t, "title\n"+strings.Join(bridgeText(21.2, 0.8, c, load), "\n")+"\n"+plainModel)
		half := value(t, table, "C1", MeanVoltage) / load / 2
		if found := value(t, table, "D1", MeanCurrent); math.Abs(found-half) > 2e-3*half {
			t.Fatalf("mean diode current %g A, half the load current is %g A", found, half)
		}
	})
}
