package parts

import (
	"strings"
	"testing"

	"railproof/netlist"
)

// Names as exporters, libraries and people write them, and the row that each means.
func TestFindAcceptsTradeNames(t *testing.T) {
	accepted := map[string]string{
		// rectifiers
		"1N4007": "1N4007", "1n4007": "1N4007", "D1N4007": "1N4007", "D1n4001rl": "1N4001", "DI_1N4007": "1N4007",
		"1N4007G": "1N4007", "1N4007GP-E3/54": "1N4007", "1N4007-T": "1N4007", "1N4007_DO41": "1N4007", "X_1N4007": "1N4007",
		"__1N4007": "1N4007", "DIODE_1N4002": "1N4002", "XD_1N4007": "", "1N4148W-7-F": "1N4148", "1N4148WS": "1N4148", "1N914B": "1N914",
		"1N5822": "1N5822", "1N5819HW": "1N5819", "1N5404-G": "1N5404", "UF4007": "UF4007", "DUF4004": "UF4004", "MUR120RLG": "MUR120",
		"BYV27-200": "BYV27-200", "BYV27_200": "BYV27-200", "BYV27200": "BYV27-200", "BYV26C-TAP": "BYV26C", "BY255": "BY255",
		"S1M": "S1M", "S1M-13-F": "S1M", "US1G": "US1G", "SS14": "SS14", "P600J": "P600J", "6A10": "P600M", "6A05G": "P600A",
		// bridges
		"KBP307": "KBP307", "KBP307G": "KBP307", "KBPC3510": "KBPC3510", "KBPC3510W": "KBPC3510", "GBU8J": "GBU8J", "GBU8J-BP": "GBU8J",
		"DB107S": "DB107", "W04M": "W04", "W10G": "W10", "2KBP06M": "2KBP06", "KBP206G": "2KBP06", "KBP2005": "2KBP005", "BR_DB107": "DB107", "GBPC2510W": "GBPC2510",
		// zeners
		"1N4734A": "1N4734A", "1N4734A-T": "1N4734A", "DI_1N4734A": "1N4734A", "D1N4734A": "1N4734A", "1N4734ATR": "1N4734A", "1N4734": "1N4734",
		"1N4734G": "1N4734", "1N4734CTR": "1N4734C", "1N4764A": "1N4764A", "1N750": "1N750", "1N750A": "1N750A", "D1N750": "1N750", "1N5231B": "1N5231B", "1N5231BTR": "1N5231B",
		"1N5349BRLG": "1N5349B", "1N5349": "1N5349",
		"BZX84C6V2L": "BZX84C6V2", "BZX84-C6V2": "BZX84C6V2", "BZX84C12LT1G": "BZX84C12", "BZX84B12": "BZX84B12", "BZX85C5V1": "BZX85C5V1", "BZX85C3V0": "BZX85C3V0",
		"BZX85C3": "BZX85C3V0", "BZX85C5.1": "BZX85C5V1", "BZX55C12-TAP": "BZX55C12", "BZX55-C5V6": "BZX55C5V6", "BZX85-12": "BZX85D12",
		"BZX79C12": "ZENER12C", "BZX79-B5V1": "ZENER5V1B", "BZV85C6V8": "ZENER6V8C", "BZT52C3V3": "ZENER3V3C", "BZX85C150": "ZENER150C",
		"ZENER_12": "ZENER12", "ZENER12": "ZENER12", "ZENER_5V1": "ZENER5V1", "ZENER-5.1": "ZENER5V1", "ZENER_5.1V": "ZENER5V1", "ZENER_3V": "ZENER3", "X_ZENER_12": "ZENER12", "DZ5V1": "ZENER5V1", "MMSZ5231B": "ZENER5V1C", "MMBZ5242BLT1G": "ZENER12C", "ZMM5V1": "ZENER5V1", "ZPD12": "ZENER12", "ZPY6.8": "ZENER6V8", "ZD12V": "ZENER12", "5V1_ZENER": "ZENER5V1",
		// regulators
		"7812": "7812", "LM7812": "7812", "LM7812CT": "7812", "L7805CV": "7805", "MC7805BTG": "7805", "uA7812": "7812", "µA7805": "7805", "UA7805CKCS": "7805",
		"KA7809": "7809", "NJM7805FA": "7805", "L7805CD2T-TR": "7805", "LM7805_TO220": "7805", "LM7812C/TO220": "7812", "X_LM7805": "7805", "7805A": "7805", "LM7812ACT": "7812",
		"78L05": "78L05", "78L05ACZ": "78L05", "LM78L12ACM": "78L12", "78M05": "78M05", "MC78M15BTG": "78M15", "78L12": "78L12",
		"7912": "7912", "LM7912": "7912", "LM7905CT": "7905", "LM79L05ACZ": "79L05", "79M12": "79M12",
		"LM340T-12": "7812", "LM340-5.0": "7805", "LM340T-5": "7805", "LM340K-15": "7815",
		"LM317": "317", "LM317T": "317", "LM317LZ": "317L", "LM317L": "317L", "LM317MDT": "317M", "LM317K": "317", "LM317_TO220": "317", "317": "",
		"LM337": "337", "LM337T": "337", "LM338K": "338", "LM350AT": "350",
		"TL431": "431", "TL431A": "431A", "TL431ACLP": "431A", "TL431BIDBZR": "431B", "TL431CLP": "431", "KA431AZ": "431A",
		"LM1117-3.3": "LM1117-3.3", "LM1117MPX-5.0": "LM1117-5", "LM1117T-ADJ": "LM1117-ADJ", "AMS1117-3.3": "1117-3.3", "LM1117_3V3": "LM1117-3.3", "LD1117V33": "",
		"LM1086CT-3.3": "1086-3.3", "LM1085IT-12": "1085-12", "LM2940CT-12": "2940-12", "LM2940-5.0": "2940-5", "LP2950CZ-5.0": "2950-5", "LM2931Z-5.0": "2931-5",
		// zeners of which only the voltage is known; the steps of E24 are counted from the first number of a series
		"MMSZ5V1": "ZENER5V1", "MMSZ5V1T1G": "ZENER5V1", "SZMMSZ12T1G": "ZENER12", "MM3Z5V1": "ZENER5V1", "MM3Z5V1T1G": "ZENER5V1", "MM3Z12VT1": "ZENER12", "TZMC5V1": "ZENER5V1C", "TZMB12-GS08": "ZENER12B", "TZMC5V1-GS08": "ZENER5V1C",
		"SMAZ5V1": "ZENER5V1", "SMAZ5V1-13-F": "ZENER5V1", "SMAZ12": "ZENER12", "PDZ5.1B": "ZENER5V1", "PDZ5.1B,115": "", "UDZS5.1B": "ZENER5V1", "UDZVTE-175.1B": "ZENER5V1", "UDZV5.1B": "ZENER5V1", "RLZ5.1B": "ZENER5V1", "RLZTE-115.1B": "ZENER5V1", "DDZ5V1B": "ZENER5V1",
		"RD5.1E": "ZENER5V1", "RD12EB2": "ZENER12", "RD5.1E-B2": "ZENER5V1", "MTZJ5.1B": "ZENER5V1", "ZMY5V1": "ZENER5V1",
		"1SMB5918": "ZENER5V1M", "1SMB5918BT3G": "ZENER5V1C", "1SMA5929B": "ZENER15C", "1N5918B": "ZENER5V1C", "1N5913B": "ZENER3V3C", "1N5925A": "ZENER10D", "1N5956B": "ZENER200C", "1N5949B": "ZENER100C", "1N957B": "ZENER6V8C", "1N963BTR": "ZENER12C", "1N992B": "ZENER200C", "1N3022B": "ZENER12C", "1N3051B": "ZENER200C",
		// transistors
		"BC547": "BC547", "BC547B": "BC547B", "bc547c": "BC547C", "QBC547": "BC547", "QBC547B": "BC547B", "Q_BC547": "BC547", "Q_NPN_BC547": "BC547", "BC547BTA": "BC547B", "BC547TA": "BC547", "BC546BU": "BC546",
		"BC547_TO92": "BC547", "BC557B-AP": "BC557B", "BC560C": "BC560C", "BC337-25": "BC337-25", "BC33725": "BC337-25", "BC327-40TA": "BC327-40", "BC337": "BC337", "BC847BLT1G": "BC847B", "BC847B,215": "BC847B", "BC857C-7-F": "BC857C",
		"BD139": "BD139", "BD139-16": "BD139-16", "BD13910": "BD139-10", "BD140G": "BD140", "XBD139": "BD139", "BC640-10": "BC640-10", "BD237": "BD237", "BD243C": "BD243C", "BD244B": "BD244B", "BD911": "BD911", "BDX53C": "BDX53C",
		"2N3055": "2N3055", "Q2N3055": "2N3055", "2n3055g": "2N3055", "2N2222": "2N2222", "2N2222A": "2N2222A", "Q2N2222A": "2N2222A", "PN2222A": "PN2222A", "P2N2222A": "PN2222A", "PN2222ATA": "PN2222A", "2N3904": "2N3904", "2N3904TA": "2N3904", "2N3904-TAP": "2N3904",
		"2N3906BU": "2N3906", "MMBT3904": "MMBT3904", "PMBT3904": "MMBT3904", "SMBT3906": "MMBT3906", "MMBT3904LT1G": "MMBT3904", "MMBT3904-7-F": "MMBT3904", "2N5551": "2N5551", "2N3773": "2N3773",
		"TIP31": "TIP31", "TIP31C": "TIP31C", "TIP31CG": "TIP31C", "tip31c_TO220": "TIP31C", "QTIP42C": "TIP42C", "TIP120": "TIP120", "TIP127TU": "TIP127", "TIP3055": "TIP3055", "TIP2955G": "TIP2955",
	}
	for _, name := range sortedKeys(accepted) {
		want := accepted[name]
		row, ok := Default().Find(name)
		if want == "" {
			if ok {
				t.Errorf("%q was read as %s, want refusal", name, row.Type)
			}
			continue
		}
		if !ok {
			t.Errorf("%q was refused, want %s", name, want)
		} else if row.Type != want {
			t.Errorf("%q was read as %s, want %s", name, row.Type, want)
		}
	}
}

// Names that mean something else, or may: finding a part in them would prove what is not known.
func TestFindRefusesOtherNames(t *testing.T) {
	refused := []string{
		"", " ", "D", "D1", "DX", "DZ", "DZ1", "DZ12", "D12", "DMOD", "Default", "Q1", "X1", "N4001", "4001", "4007", "1N", "1N4", "1N400", "1N40071", "1N400X", "11N4007", "MY1N4007", "1N4007X2", "1N4007_X4",
		"N$12", "Net-(D1-K)", "VCC", "+5V", "R7805", "780", "78", "7800", "78XX", "7801", "7805V5X12345678901", "780512", "78051", "17805", "78S05", "78H05", "LM78T05", "LM7805-12", "LM7805-3.3", "AB7805", "7705", "TL7705",
		"LM317HV", "LM317HVT", "LM317-12", "LM3177", "LM117", "LM1117", "LM1117-4.1", "TLV1117-3.3", "LM337L", "LM337MT", "LM350M", "1317", "431", "TLV431", "TL432", "LM4310", "TL4311", "LM2595", "LM2940", "LM2940-7", "LM723",
		"M1", "M7", "M4", "W1", "W100", "W011", "DS1M", "S1", "S1C", "DW04", "KBP308", "KBP3070", "GBU8", "GBU8Z", "DB108", "2KBP3",
		"MMSZ5C", "MMSZ5", "MMSZ4678", "MM3Z14", "PDZ5B", "HZ5C2", "HZ12B1", "RD5", "RD5.1", "RD14E", "1N5912B", "1N5957B", "1N956B", "1N993B", "1N3015B", "1N3052B", "1SMB5912", "1N4099", "1N4614", "1N5918X2", "P6KE12A", "SMAJ12A", "SMBJ12CA",
		"1N4727", "1N4765", "1N4734B", "1N5220B", "1N5282B", "1N5389B", "1N745", "1N760", "BZX84", "BZX84C", "BZX84C0V5", "BZX85C999",
		"ZENER", "ZENER_2", "ZENER_5", "ZENER_1", "ZENER_0", "ZENER_999V", "ZENER_14", "ZMM", "ZPD0.7", "MMSZ5299B", "MMSZ5C", "Z5", "Z12", "ZD5", "12V", "5V1",
		"2N3056", "2N2222B", "2N3055X2", "2N3055-X4", "TIP31D", "TIP41E", "TIP", "TIP3", "BC547D", "BC5478", "BC337-6", "BC337-10", "BC1470", "BC847BS", "BC847PN", "BD139C", "BD139-40", "BC", "BD13",
		"IP31", "C547", "N3904", "QNPN", "Q2N", "NPN", "MMBT3", "MMBT39041", "MJ29555", "IRF9540", "IRF540N", "BS170", "BC548X", strings.Repeat("1N4007", 20),
	}
	for _, name := range refused {
		if row, ok := Default().Find(name); ok {
			t.Errorf("%q was read as %s, want refusal", name, row.Type)
		}
	}
}

func TestRecogniseGivesRolePolarityAndPins(t *testing.T) {
	type want struct {
		role     netlist.Role
		polarity netlist.Polarity
		pins     []netlist.Pin
	}
	in, ref, out := netlist.PinIn, netlist.PinReference, netlist.PinOut
	cbe := []netlist.Pin{netlist.PinCollector, netlist.PinBase, netlist.PinEmitter}
	for _, c := range []struct {
		name string
		want want
	}{
		// Netlist lines of fixed regulators run IN GND OUT, of negative ones too.
		{"LM7805", want{netlist.RoleRegulator, netlist.Positive, []netlist.Pin{in, ref, out}}},
		{"LM7912CT", want{netlist.RoleRegulator, netlist.Negative, []netlist.Pin{in, ref, out}}},
		{"LM317T", want{netlist.RoleAdjustable, netlist.Positive, []netlist.Pin{in, ref, out}}},
		{"LM337T", want{netlist.RoleAdjustable, netlist.Negative, []netlist.Pin{in, ref, out}}},
		{"TL431", want{netlist.RoleShunt, netlist.Positive, []netlist.Pin{ref, netlist.PinAnode, netlist.PinCathode}}},
		{"KBP307", want{netlist.RoleBridge, 0, []netlist.Pin{netlist.PinAC1, netlist.PinAC2, netlist.PinPlus, netlist.PinMinus}}},
		{"1N4007", want{netlist.RoleRectifier, 0, []netlist.Pin{netlist.PinAnode, netlist.PinCathode}}},
		{"BC547B", want{netlist.RoleTransistor, netlist.Positive, cbe}},
		{"TIP42C", want{netlist.RoleTransistor, netlist.Negative, cbe}},
		{"ZENER_12", want{netlist.RoleZener, 0, []netlist.Pin{netlist.PinAnode, netlist.PinCathode}}},
	} {
		part, ok := Default().Recognise(c.name)
		if !ok || part.Role != c.want.role || part.Polarity != c.want.polarity || len(part.Pins) != len(c.want.pins) {
			t.Errorf("%s: got %+v, want %+v", c.name, part, c.want)
			continue
		}
		for i, pin := range part.Pins {
			if pin != c.want.pins[i] {
				t.Errorf("%s: pin %d is %d, want %d", c.name, i, pin, c.want.pins[i])
			}
		}
	}
	if row, _ := Default().Find("1N4734A"); !row.PinsDoubtful {
		t.Error("the pins of a zener drawn as a subcircuit call must be doubtful")
	}
	if row, _ := Default().Find("7805"); row.PinsDoubtful {
		t.Error("the pins of a fixed regulator are customary, not doubtful")
	}
}

// Every row that may be recognised is found by its own name, and by no other row's.
func TestEveryRowIsFoundByItsName(t *testing.T) {
	bare := map[string]bool{"317": true, "317L": true, "317M": true, "337": true, "338": true, "350": true, "431": true, "431A": true, "431B": true}
	for _, row := range Default().Rows() {
		found, ok := Default().Find(row.Type)
		switch {
		case tooShort.MatchString(row.Type) || bare[row.Type]:
			if ok {
				t.Errorf("%s is too short a name to be recognised, read as %s", row.Type, found.Type)
			}
		case !ok || found != row:
			t.Errorf("%s is not found by its own name", row.Type)
		}
		if listed, ok := Default().Lookup(row.Type); !ok || listed != row {
			t.Errorf("Lookup does not know %s", row.Type)
		}
	}
}

func FuzzFind(f *testing.F) {
	for _, seed := range []string{"1N4007", "DI_1N4734A", "BZX84C6V2L", "LM7812CT", "ZENER_5V1", "TL431ACLP", "LM1117-3.3", "KBPC3510W", "µA7805", "1N\x00", "78L05#", "\xff1N4007"} {
		f.Add(seed)
	}
	f.Fuzz(func(t *testing.T, name string) {
		row, ok := Default().Find(name)
		if !ok {
			return
		}
		again, known := Default().Lookup(row.Type)
		if !known || again.Type != row.Type {
			t.Fatalf("%q gave %q, which Lookup does not know", name, row.Type)
		}
		if len(row.Symbols()) == 0 {
			t.Fatalf("%q gave a row without values", name)
		}
		if !strings.ContainsAny(name, "0123456789") {
			t.Fatalf("%q has no number in it and was read as %s", name, row.Type)
		}
		spaced, ok := Default().Find("  " + strings.ToLower(name) + " ")
		if upper := strings.ToUpper(name); upper == strings.ToUpper(strings.ToLower(upper)) && (!ok || spaced.Type != row.Type) {
			t.Fatalf("%q depends on case or blanks", name)
		}
	})
}

// What only zeners are called is no plain diode, even where its voltage cannot be read.
func TestNamesZener(t *testing.T) {
	for _, name := range split("HZ5C2 HZ12B1 MMSZ5C MMSZ4678 PDZ5B BZX84 BZX84C0V5 DZ1 ZD5 Z12 RD14E 1N4099 1N4627 1N829 ZENER DZENER my_zener mmsz4678t1g") {
		if !NamesZener(name) {
			t.Errorf("%q is not known as a zener's name", name)
		}
	}
	for _, name := range split("1N4007 1N4148 D DMOD DX D1 RD1 R1 BAT54 BYV27-200 SS14 MUR120 SMAJ12A P6KE12A UF4007 Q1 HER108 RDIODE BZT 1N5817 1N5408 1N914") {
		if NamesZener(name) {
			t.Errorf("%q is taken for a zener's name", name)
		}
	}
}
