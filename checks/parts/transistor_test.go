package parts

import (
	"math"
	"strings"
	"testing"

	"railproof/netlist"
)

// In a family of transistors the voltages climb and the rest is that of one die.
func TestTransistorSeriesAreMonotone(t *testing.T) {
	for _, names := range [][]string{
		split("TIP29 TIP29A TIP29B TIP29C"), split("TIP32 TIP32A TIP32B TIP32C"), split("TIP35 TIP35A TIP35B TIP35C"), split("TIP42 TIP42A TIP42B TIP42C"), split("TIP47 TIP48 TIP49 TIP50"),
		split("TIP110 TIP111 TIP112"), split("TIP120 TIP121 TIP122"), split("TIP125 TIP126 TIP127"), split("TIP140 TIP141 TIP142"),
		split("BD135 BD137 BD139"), split("BD136 BD138 BD140"), split("BC635 BC637 BC639"), split("BC636 BC638 BC640"), split("BD233 BD235 BD237"), split("BD435 BD437 BD439 BD441"), split("BD676 BD678 BD680 BD682"),
		split("BD241 BD241A BD241B BD241C"), split("BD244 BD244A BD244B BD244C"), split("BDX33 BDX33A BDX33B BDX33C"), split("BC548 BC547 BC546"), split("BC558 BC557 BC556"), split("BC848 BC847 BC846"), split("BC328 BC327"), split("BC338 BC337"),
		split("2N2222 2N2222A"), split("2N2907 2N2907A"), split("2N3440 2N3439"), split("2N5885 2N5886"),
	} {
		for i := 1; i < len(names); i++ {
			if !(number(t, names[i], VCEO) > number(t, names[i-1], VCEO)) {
				t.Errorf("VCEO of %s is not above that of %s", names[i], names[i-1])
			}
			for _, same := range []netlist.Symbol{IC, PD, Tj, HFEmin} {
				if number(t, names[i], same) != number(t, names[i-1], same) {
					t.Errorf("%s of %s differs from %s", same, names[i], names[i-1])
				}
			}
		}
	}
}

// Complementary pairs are of one size: same current, power and voltage, opposite polarity.
func TestComplementaryPairs(t *testing.T) {
	for _, pair := range split("BC547/BC557 BC546/BC556 BC337/BC327 BC639/BC640 BD139/BD140 BD237/BD238 BD243C/BD244C TIP31C/TIP32C TIP41A/TIP42A TIP122/TIP127 TIP142/TIP147 TIP3055/TIP2955 BDX53C/BDX54C 2N6284/2N6287 2N3773/2N6609 2N5886/2N5884 BC817/BC807") {
		npn, pnp, _ := strings.Cut(pair, "/")
		if mustFind(t, npn).Polarity != netlist.Positive || mustFind(t, pnp).Polarity != netlist.Negative {
			t.Errorf("%s: polarity %d and %d, want NPN and PNP", pair, mustFind(t, npn).Polarity, mustFind(t, pnp).Polarity)
		}
		for _, same := range []netlist.Symbol{VCEO, IC, PD, Tj} {
			if number(t, npn, same) != number(t, pnp, same) {
				t.Errorf("%s: %s differs", pair, same)
			}
		}
	}
}

// The derating line of PD is the thermal resistance: (Tj - TPD)/PD = Rth from the junction to where PD is stated.
func TestTransistorRatingsAgreeWithThePhysics(t *testing.T) {
	for _, row := range Default().Rows() {
		if row.Role != netlist.RoleTransistor {
			continue
		}
		if row.Polarity == 0 || row.Bipolar() == nil {
			t.Errorf("%s has no law", row.Type)
			continue
		}
		where, _ := row.Value(TPD)
		symbol, letters := RthJC, "TC"
		if where.Condition == "ambient" {
			symbol, letters = RthJA, "TA"
		}
		pd, _ := row.Value(PD)
		if !strings.HasPrefix(pd.Condition, letters) {
			t.Errorf("%s: PD holds for %q and TPD for the %s", row.Type, pd.Condition, where.Condition)
		}
		slope := (number(t, row.Type, Tj) - where.Number) / pd.Number
		if r := number(t, row.Type, symbol); math.Abs(r/slope-1) > 0.03 {
			t.Errorf("%s: %s %g K/W, but PD falls by one watt each %.3g K", row.Type, symbol, r, slope)
		}
		if ja, ok := row.Value(RthJA); ok {
			if jc, ok := row.Value(RthJC); ok && jc.Number >= ja.Number {
				t.Errorf("%s: RthJC %g is not below RthJA %g", row.Type, jc.Number, ja.Number)
			}
		}
		if v := number(t, row.Type, VEBO); v < 5 || v > 10 {
			t.Errorf("%s: VEBO %g", row.Type, v)
		}
		if least := number(t, row.Type, HFEmin); (least >= 500) != (row.Kind == "darlington") {
			t.Errorf("%s is a %s with a gain of %g", row.Type, row.Kind, least)
		}
	}
}

// Registered and widely printed values.
func TestTransistorSpotValues(t *testing.T) {
	for _, c := range []struct {
		name   string
		symbol netlist.Symbol
		want   float64
	}{
		{"2N3055", VCEO, 60}, {"2N3055", VCBO, 100}, {"2N3055", IC, 15}, {"2N3055", PD, 115}, {"2N3055", HFEmin, 20}, {"2N3055", HFEmax, 70},
		{"2N3773", VCEO, 140}, {"2N2222A", VCEO, 40}, {"2N2222A", VCBO, 75}, {"2N3904", IC, 0.2}, {"2N5551", VCEO, 160}, {"BC547", VCEO, 45}, {"BC547B", HFEmin, 200}, {"BC547B", HFEmax, 450}, {"BC547B", VCEO, 45},
		{"BC337-25", HFEmin, 160}, {"BD139", VCEO, 80}, {"BD139", IC, 1.5}, {"BD139", PD, 12.5}, {"BD139-16", HFEmin, 100}, {"TIP31C", VCEO, 100}, {"TIP31C", IC, 3}, {"TIP42C", PD, 65}, {"TIP122", HFEmin, 1000},
	} {
		if got := number(t, c.name, c.symbol); got != c.want {
			t.Errorf("%s %s = %g, want %g", c.name, c.symbol, got, c.want)
		}
	}
	if _, ok := Default().Lookup("BD139-25"); ok {
		t.Error("BD139 has no gain group 25")
	}
}

// BC547B: BF = sqrt(200 x 450) = 300, and 0.7 V at a tenth of 0.1 A: IS = 10 mA/exp(0.7 V/25.693 mV) = 10 mA/6.797e11 = 1.47e-14 A.
// TIP122: 0.5 A at 1.4 V through two junctions; only its least gain, 1000, is known.
func TestBipolarLaw(t *testing.T) {
	law := mustFind(t, "BC547B").Bipolar()
	if math.Abs(law.BF-300) > 0.01 || math.Abs(law.IS/1.471e-14-1) > 0.005 || law.NF != 1 || law.Polarity != netlist.Positive {
		t.Errorf("BC547B: %+v", law)
	}
	if law.LeastGain != 200 || law.MostGain != 450 || law.Confidence != Memory {
		t.Errorf("BC547B: gain %g..%g, %s", law.LeastGain, law.MostGain, law.Confidence)
	}
	pair := mustFind(t, "TIP127").Bipolar()
	if pair.BF != 1000 || pair.LeastGain != 1000 || pair.MostGain != 0 || !strings.Contains(pair.Quality, "hFEmin") || pair.Polarity != netlist.Negative {
		t.Errorf("TIP127: %+v", pair)
	}
	if v := pair.NF * ThermalVoltage * math.Log(0.5/pair.IS); math.Abs(v-1.4) > 1e-9 {
		t.Errorf("TIP127: VBE %g V at 0.5 A, want 1.4 V", v)
	}
	user, err := Load("own.csv", []byte("type,kind,VCEO,IC,hFE,source\nXF1,transistor,60,5,40,own\n"))
	if err != nil {
		t.Fatal(err)
	}
	if row, _ := user.Find("XF1"); row.Bipolar() != nil {
		t.Error("a row without polarity gives no law")
	}
	if _, err := Load("own.csv", []byte("type,kind,polarity,VCEO,source\nXF1,transistor,positive,60,own\n")); err == nil || !strings.Contains(err.Error(), "npn or pnp") {
		t.Errorf("polarity of a transistor: %v", err)
	}
	if _, err := Load("own.csv", []byte("type,kind,polarity,VOUT,source\nXF1,fixed,npn,5,own\n")); err == nil || !strings.Contains(err.Error(), "positive or negative") {
		t.Errorf("polarity of a regulator: %v", err)
	}
}
