package parts

import (
	"math"
	"sort"
	"strings"
	"testing"

	"railproof/netlist"
	"railproof/netlist/quantity"
)

func sortedKeys(m map[string]string) []string {
	var keys []string
	for key := range m {
		keys = append(keys, key)
	}
	sort.Strings(keys)
	return keys
}

func number(t *testing.T, name string, symbol netlist.Symbol) float64 {
	t.Helper()
	row, ok := Default().Lookup(name)
	if !ok {
		t.Fatalf("no row %s", name)
	}
	v, ok := row.Value(symbol)
	if !ok {
		t.Fatalf("%s has no %s", name, symbol)
	}
	return v.Number
}

// The built-in files have no unknown column, no value outside the bounds of its unit, no duplicate, no
// contradiction inside a row, and no source key without a title: readRows reports all of these.
func TestBuiltInTablesAreClean(t *testing.T) {
	table, problems := readBuiltIn()
	for _, problem := range problems {
		t.Error(problem)
	}
	count := map[string]int{}
	for _, row := range table.Rows() {
		count[row.Kind]++
		for _, symbol := range row.Symbols() {
			for _, v := range row.Cases(symbol) {
				if v.Source == "" {
					t.Errorf("%s %s has no source", row.Type, symbol)
				}
				if v.Confidence != Seen && v.Confidence != Memory {
					t.Errorf("%s %s: confidence %q", row.Type, symbol, v.Confidence)
				}
				if v.Confidence == Memory && !strings.Contains(v.Source, fromMemory) {
					t.Errorf("%s %s is from memory but names %q as its source", row.Type, symbol, v.Source)
				}
				if c, _ := columnOf(symbol); v.Unit != c.unit {
					t.Errorf("%s %s has unit %d", row.Type, symbol, v.Unit)
				}
			}
		}
	}
	for kind, least := range map[string]int{"rectifier": 50, "bridge": 100, "zener": 270, "fixed": 70, "adjustable": 8, "shunt": 3, "transistor": 160, "darlington": 50} {
		if count[kind] < least {
			t.Errorf("%d rows of kind %s, want at least %d", count[kind], kind, least)
		}
	}
}

// In a numbered series the rating climbs with the number, and the other ratings are those of one family.
func TestSeriesAreMonotone(t *testing.T) {
	rectifiers := [][]string{
		split("1N4001 1N4002 1N4003 1N4004 1N4005 1N4006 1N4007"),
		split("1N5400 1N5401 1N5402 1N5403 1N5404 1N5405 1N5406 1N5407 1N5408"),
		split("1N4933 1N4934 1N4935 1N4936 1N4937"),
		split("UF4001 UF4002 UF4003 UF4004 UF4005 UF4006 UF4007"),
		split("1N5391 1N5392 1N5393 1N5395 1N5397 1N5398 1N5399"),
		split("S1A S1B S1D S1G S1J S1K S1M"), split("M1 M2 M3 M4 M5 M6 M7"), split("US1A US1B US1D US1G US1J US1K US1M"),
		split("1N5817 1N5818 1N5819"), split("1N5820 1N5821 1N5822"), split("SS12 SS14 SS16"),
		split("P600A P600B P600D P600G P600J P600K P600M"),
		split("W005 W01 W02 W04 W06 W08 W10"), split("DB101 DB102 DB103 DB104 DB105 DB106 DB107"),
		split("KBP301 KBP302 KBP303 KBP304 KBP305 KBP306 KBP307"), split("GBU4A GBU4B GBU4D GBU4G GBU4J GBU4K GBU4M"),
		split("GBPC35005 GBPC3501 GBPC3502 GBPC3504 GBPC3506 GBPC3508 GBPC3510"),
	}
	for _, names := range rectifiers {
		for i := 1; i < len(names); i++ {
			if !(number(t, names[i], VRRM) > number(t, names[i-1], VRRM)) {
				t.Errorf("VRRM of %s is not above that of %s", names[i], names[i-1])
			}
			for _, same := range []netlist.Symbol{IFAV, IFSM} {
				if number(t, names[i], same) != number(t, names[i-1], same) {
					t.Errorf("%s of %s differs from %s", same, names[i], names[i-1])
				}
			}
		}
	}
	// Zener series in the order of the file: VZ climbs, IZT and IZM do not.
	last := map[string]*Row{}
	for _, row := range Default().Rows() {
		if row.Role != netlist.RoleZener {
			continue
		}
		series := row.Type[:4]
		if strings.HasPrefix(row.Type, "BZX") {
			series = row.Type[:5]
		}
		if before := last[series]; before != nil {
			compare := func(symbol netlist.Symbol, climbs bool) {
				a, ok1 := before.Value(symbol)
				b, ok2 := row.Value(symbol)
				if ok1 && ok2 && (climbs && b.Number <= a.Number || !climbs && b.Number > a.Number*1.0001) {
					t.Errorf("%s of %s is %g after %g of %s", symbol, row.Type, b.Number, a.Number, before.Type)
				}
			}
			compare(VZ, true)
			compare(VZmin, true)
			compare(VZmax, true)
			compare(IZT, false)
			compare(IZM, false)
		}
		last[series] = row
	}
	for _, family := range []string{"78", "78L", "78M", "79", "79L", "79M"} {
		volts := 0.0
		for _, row := range Default().Rows() {
			if strings.TrimRight(row.Type, "0123456789") != strings.TrimRight(family, "0123456789") || !strings.HasPrefix(row.Type, family[:2]) || row.Kind != "fixed" || len(row.Type) != len(family)+2 {
				continue
			}
			v, _ := row.Value(VOUT)
			if v.Number <= volts {
				t.Errorf("VOUT of %s does not climb", row.Type)
			}
			volts = v.Number
			if code := row.Type[len(row.Type)-2:]; math.Abs(v.Number-atoi(code)) > 0.01 {
				t.Errorf("%s puts out %g V", row.Type, v.Number)
			}
		}
	}
}

func split(text string) []string { return strings.Fields(text) }

func atoi(text string) float64 {
	value := 0.0
	for _, r := range text {
		value = 10*value + float64(r-'0')
	}
	return value
}

// VRRM stands in the steps that rectifiers are sold in, or between them for the families that have
// odd members; the type number of the BZX, 78 and zener rows says the voltage.
func TestValuesAgreeWithThePhysics(t *testing.T) {
	odd := map[float64]bool{20: true, 30: true, 40: true, 60: true, 150: true, 300: true, 500: true, 1250: true, 1300: true}
	for _, row := range Default().Rows() {
		if v, ok := row.Value(VRRM); ok {
			up, found := NextUp(VRRMSteps, v.Number)
			standard := found && up == v.Number
			if row.Kind == "bridge" && !standard || !standard && !odd[v.Number] || row.Kind != "schottky" && v.Number < 50 {
				t.Errorf("%s: VRRM %g is no step that rectifiers are made in", row.Type, v.Number)
			}
		}
		// A half sine of crest I and length t carries I^2 t/2; a printed I2t above it contradicts IFSM.
		if i2t, ok := row.Value(I2t); ok {
			crest, _ := row.Value(IFSM)
			length, _ := row.Value(TIFSM)
			if most := crest.Number * crest.Number * length.Number / 2; i2t.Number > 1.05*most {
				t.Errorf("%s: I2t %g exceeds IFSM^2 t/2 = %g", row.Type, i2t.Number, most)
			}
		}
		if izt, ok := row.Value(IZT); ok {
			// The test current of a zener stays within its power rating.
			vz, _ := row.Value(VZ)
			if pd, ok := row.Value(PD); ok && izt.Number*vz.Number > pd.Number {
				t.Errorf("%s: IZT x VZ = %g W exceeds PD = %g W", row.Type, izt.Number*vz.Number, pd.Number)
			}
			if izm, ok := row.Value(IZM); ok && izm.Number*vz.Number > 1.02*number(t, row.Type, PD) {
				t.Errorf("%s: IZM x VZ = %g W exceeds PD", row.Type, izm.Number*vz.Number)
			}
			if izk, ok := row.Value(IZK); ok && izk.Number >= izt.Number {
				t.Errorf("%s: knee current %g is not below the test current %g", row.Type, izk.Number, izt.Number)
			}
		}
		if strings.HasPrefix(row.Type, "BZX") {
			code := strings.Replace(row.Type[6:], "V", ".", 1)
			if vz := number(t, row.Type, VZ); strings.TrimSuffix(code, ".0") != trim(vz) {
				t.Errorf("%s has VZ %g", row.Type, vz)
			}
		}
		// The derating line of a zener does not reach zero below its junction limit.
		if k, ok := row.Value(KPD); ok {
			pd, tpd, tj := number(t, row.Type, PD), number(t, row.Type, TPD), number(t, row.Type, Tj)
			if zero := tpd + pd/k.Number; zero < tj-1 {
				t.Errorf("%s: derating reaches zero at %g, below Tj %g", row.Type, zero, tj)
			}
		}
		if row.Role == netlist.RoleRegulator {
			if low, ok := row.Value(VImin); ok {
				if have, need := low.Number-number(t, row.Type, VOUT), number(t, row.Type, VDO); have > need+1.01 || have < 0.3 {
					t.Errorf("%s: VImin is %g V above VOUT and VDO %g", row.Type, have, need)
				}
			}
		}
	}
}

func trim(v float64) string {
	return strings.Replace(voltCode(v), "V", ".", 1)
}

// Spot values against the publications themselves (JEDEC-registered and data sheet numbers).
func TestSpotValues(t *testing.T) {
	for _, c := range []struct {
		name   string
		symbol netlist.Symbol
		want   float64
	}{
		{"1N4001", VRRM, 50}, {"1N4004", VRRM, 400}, {"1N4007", VRRM, 1000}, {"1N4007", IFAV, 1}, {"1N4007", IFSM, 30}, {"1N4007", IFAVcap, 0.8}, {"1N4007", TIFAV, 75},
		{"1N5408", IFSM, 200}, {"1N5819", VRRM, 40}, {"GBU8J", IFAV, 8},
		{"1N4733A", VZ, 5.1}, {"1N4733A", IZT, 0.049}, {"1N4742A", VZ, 12}, {"1N4742A", IZM, 0.076}, {"1N4742A", PD, 1}, {"BZX84C6V2", VZmax, 6.6},
		{"1N4734", VZmin, 5.04}, {"1N4734C", VZmax, 5.712}, {"BZX84B12", VZmin, 11.76}, {"ZENER12", VZ, 12},
		{"7812", VOUT, 12}, {"7812", VI, 35}, {"7824", VI, 40}, {"7805", IQ, 0.008}, {"7805", RthJA, 65}, {"7805", RthJC, 5}, {"7812", IO, 1}, {"78L05", IO, 0.1}, {"78M12", IO, 0.5},
		{"7912", VOUT, 12}, {"317", VREF, 1.25}, {"317", VIO, 40}, {"317", IOmin, 0.01}, {"338", VIO, 35}, {"431", VREF, 2.495}, {"LM1117-3.3", VI, 20}, {"1117-3.3", VI, 15},
		{"W04", I2t, 6.64}, // 40^2 x 8.3 ms / 2
	} {
		if got := number(t, c.name, c.symbol); math.Abs(got-c.want) > 1e-9*math.Abs(c.want) {
			t.Errorf("%s %s = %g, want %g", c.name, c.symbol, got, c.want)
		}
	}
	if v, _ := mustFind(t, "7805").Value(RthJA); v.Condition != "TO-220" || v.Unit != quantity.KelvinPerWatt {
		t.Errorf("RthJA of 7805: %+v, want the customary case named", v)
	}
	if cases := mustFind(t, "7805").Cases(RthJA); len(cases) != 6 || cases[3].Case != "DPAK" || cases[3].Number != 92 {
		t.Errorf("cases of RthJA of 7805: %+v", cases)
	}
	// 62 dB is a ratio of 10^(62/20) = 1258.9.
	if v, _ := mustFind(t, "7805").Value(PSRRmin); math.Abs(v.Number-1258.925) > 0.01 || !strings.Contains(v.Condition, "62 dB") {
		t.Errorf("PSRRmin of 7805: %+v", v)
	}
	if v, _ := mustFind(t, "7809").Value(IQ); v.Confidence != Memory {
		t.Errorf("IQ of 7809 is from memory, got %+v", v)
	}
	if v, _ := mustFind(t, "7809").Value(PSRR); v.Confidence != Seen || !strings.Contains(v.Source, "MC7809AC") {
		t.Errorf("PSRR of 7809: %+v", v)
	}
}

func mustFind(t *testing.T, name string) *Row {
	t.Helper()
	row, ok := Default().Lookup(name)
	if !ok {
		t.Fatalf("no row %s", name)
	}
	return row
}

func TestLegOfABridgeCarriesHalf(t *testing.T) {
	bridge := mustFind(t, "GBU4J")
	leg := bridge.Leg()
	if v, _ := leg.Value(IFAV); v.Number != 2 || !strings.Contains(v.Condition, "half") {
		t.Errorf("IFAV of a leg of GBU4J is %+v, want 2 A", v)
	}
	if v, _ := leg.Value(VRRM); v.Number != 600 {
		t.Errorf("VRRM of a leg is %g, want 600", v.Number)
	}
	if _, ok := leg.Value(RthJA); ok {
		t.Error("a leg must not have the thermal resistance of the whole case")
	}
	if v, _ := bridge.Value(IFAV); v.Number != 4 {
		t.Errorf("the bridge itself changed: IFAV %g", v.Number)
	}
	if rectifier := mustFind(t, "1N4007"); rectifier.Leg() != rectifier {
		t.Error("the leg of a diode is the diode")
	}
}

func TestVersionNamesTheBytes(t *testing.T) {
	version := Default().Version()
	if again, _ := readBuiltIn(); again.Version() != version {
		t.Errorf("two readings give %s and %s", version, again.Version())
	}
	if len(version) != len("1-01234567") {
		t.Errorf("version %q", version)
	}
}
