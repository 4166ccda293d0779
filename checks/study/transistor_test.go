package study

import (
	"context"
	"math"
	"strings"
	"testing"

	"railproof/checks/parts"
	"railproof/netlist"
)

func namedSupply(t *testing.T, text string) *Supply {
	t.Helper()
	c, d, faults := netlist.Parse("t.cir", []byte(text), nil, parts.Default())
	if len(faults) > 0 {
		t.Fatal(faults)
	}
	return NewSupply(c, d, parts.Default())
}

// A follower behind its type number alone. BD139: BF = sqrt(40 x 250) = 100, 0.7 V at 150 mA. 9.29 V across 50 ohm are
// 186 mA, VBE = 0.7 V + 25.9 mV x ln(186/150) = 0.706 V at 27 degC: 10 V - 0.71 V = 9.29 V. The PNP pair mirrors it.
// TIP122: two junctions, 1.4 V at 0.5 A: at 172 mA 1.4 V - 2 x 25.9 mV x ln(500/172) = 1.345 V, so 8.65 V.
func TestFollowerByTypeNumber(t *testing.T) {
	for _, c := range []struct {
		name, sign, kind string
		volts            float64
	}{{"BD139", "", "NPN", 9.29}, {"BD140-10", "-", "PNP", 9.29}, {"QTIP122", "", "NPN", 8.65}, {"TIP127", "-", "PNP", 8.65}} {
		s := namedSupply(t, "x\nV1 in 0 "+c.sign+"20\nVB b 0 "+c.sign+"10\nQ1 in b out "+c.name+"\nRL out 0 50\n")
		within(t, Nominal(context.Background(), s, false), "RL", PeakVoltage, c.volts, 0.005)
		if text := assumptionsOf(NewPlan(s), "Q1"); !strings.Contains(text, "no model for "+c.name+": "+c.kind) || !strings.Contains(text, "from memory") {
			t.Errorf("%s: assumed %q", c.name, text)
		}
	}
}

func assumptionsOf(p *Plan, about string) string {
	var list []string
	for _, a := range p.Assumptions() {
		if strings.HasPrefix(a.About, about) {
			list = append(list, a.Value+" ("+a.Source+")")
		}
	}
	return strings.Join(list, "; ")
}

// Base current of a Darlington with a gain of 1000: 173 mA/1001 = 0.17 mA; of a BC547B at its group's middle, 300:
// 10 V - 0.64 V across 1 kohm are 9.36 mA, the base takes 9.36 mA/301 = 31.1 uA.
func TestGainOfTheTypeNumber(t *testing.T) {
	for _, c := range []struct {
		name, load string
		amperes    float64
	}{{"TIP122", "50", 0.173 / 1001}, {"BC547B", "1k", 9.3e-3 / 301}} {
		table := Nominal(context.Background(), namedSupply(t, "x\nV1 in 0 20\nVB b 0 10\nQ1 in b out "+c.name+"\nRL out 0 "+c.load+"\n"), false)
		within(t, table, "VB", PeakCurrent, c.amperes, 0.02)
	}
}

// The model card states the polarity even where the type is known as another; an empty one takes gain and VBE from
// the table. `part` takes an unknown type for one of the table.
func TestModelCardWinsOverTypeNumber(t *testing.T) {
	const circuit = "x\nV1 in 0 20\nVB b 0 10\nQ1 in b out BC557\nRL out 0 1k\n"
	full := namedSupply(t, circuit+".model BC557 NPN(IS=1e-14 BF=50)\n")
	within(t, Nominal(context.Background(), full, false), "VB", PeakCurrent, 9.29e-3/51, 0.01)
	if text := assumptionsOf(NewPlan(full), "Q1"); !strings.Contains(text, "NPN by its model card, though BC557 is PNP") {
		t.Errorf("assumed %q", text)
	}
	bare := namedSupply(t, circuit+".model BC557 NPN\n")
	within(t, Nominal(context.Background(), bare, false), "VB", PeakCurrent, 9.3e-3/(1+math.Sqrt(110*800)), 0.01)
	named := namedSupply(t, strings.Replace(circuit, "BC557", "XY99", 1)+"*: part Q1 BD139\n")
	within(t, Nominal(context.Background(), named, false), "VB", PeakCurrent, 9.38e-3/101, 0.01)
}

// Without a card and without a row nothing tells NPN from PNP, or N from P channel: what hangs on it is not solved.
func TestUnknownTransistorBlocksItsIsland(t *testing.T) {
	for card, want := range map[string]string{
		"Q1 in b out XY99":    "may be NPN or PNP",
		"Q1 b b out XY99":     "part Q1 TYPE",
		"Q1 in b out IRF540":  ".model IRF540 NPN",
		"Q1 in b out 1N4007":  "may be NPN or PNP",
		"M1 in b out IRF9540": "it may be of N or P channel",
		"M1 in b out BC547":   ".model BC547 NMOS(VTO",
	} {
		s := namedSupply(t, "x\nV1 in 0 20\nVB b 0 10\n"+card+"\nRL out 0 50\nV2 c 0 5\nR2 c 0 5\n")
		for _, table := range []*Table{Nominal(context.Background(), s, true), Worst(context.Background(), s, 1)} {
			found, ok := table.Get("RL", PeakVoltage)
			if !ok || !strings.Contains(found.Unproven, want) {
				t.Errorf("%s: RL %+v, want %q", card, found, want)
			}
			if other, _ := table.Get("R2", PeakVoltage); other.Unproven != "" {
				t.Errorf("%s blocks R2: %s", card, other.Unproven)
			}
		}
	}
}

// A name that says nothing but the polarity is taken at its word: with IS 1e-16 A, VBE = 25.9 mV x ln(9.2 mA/1e-16 A) = 0.83 V.
func TestPolarityInTheName(t *testing.T) {
	for name, sign := range map[string]string{"NPN": "", "QNPN": "", "Q_NPN_BCE": "", "pnp": "-", "Q_PNP": "-"} {
		s := namedSupply(t, "x\nV1 in 0 "+sign+"20\nVB b 0 "+sign+"10\nQ1 in b out "+name+"\nRL out 0 1k\n")
		within(t, Nominal(context.Background(), s, false), "RL", PeakVoltage, 9.17, 0.002)
		if text := assumptionsOf(NewPlan(s), "Q1"); !strings.Contains(text, "by the name "+name) {
			t.Errorf("%s: assumed %q", name, text)
		}
	}
}

// The gain spreads over the published ends: BC547B 200..450 about 300, -33 %..+50 %; of a TIP122 only the least, 1000,
// is known.
func TestGainSpread(t *testing.T) {
	for name, want := range map[string][2]float64{"BC547B": {-1. / 3, 0.5}, "TIP122": {0, 1}} {
		p := NewPlan(namedSupply(t, "x\nV1 in 0 20\nVB b 0 10\nQ1 in b out "+name+"\nRL out 0 1k\n"))
		found := false
		for _, q := range p.Parameters {
			if q.Symbol != symbolGain {
				continue
			}
			found = true
			if math.Abs(q.Low-want[0]) > 1e-3 || math.Abs(q.High-want[1]) > 1e-3 {
				t.Errorf("%s: %+.3g..%+.3g, want %v", name, q.Low, q.High, want)
			}
		}
		if !found {
			t.Errorf("%s: the gain does not vary", name)
		}
	}
}

// An emitter without a load follows its base: with no emitter current exp(VBE/VT) = 1/(1 + BF), of BF = 100 a VBE of
// -25.9 mV x ln(101) = -0.12 V, and no more, however high the collector.
func TestOpenEmitterFollowsTheBase(t *testing.T) {
	s := namedSupply(t, "x\nV1 in 0 20\nVB b 0 10\nQ1 in b out BD139\nRL out 0 50\n*: load RL 50Ohm..open\n")
	table := Worst(context.Background(), s, 1)
	v, ok := table.Get("Q1", MaxVEB)
	if !ok || v.Unproven != "" || v.Value < 0.05 || v.Value > 0.3 {
		t.Errorf("VEB of an unloaded follower: %+v, want 0.12 V", v)
	}
}
