package parts

import (
	"os"
	"strings"
	"testing"

	"railproof/netlist"
)

func TestUserRowsWin(t *testing.T) {
	text := "# our stock\ntype,kind,polarity,VOUT,VDO,IVDO,VI,IO,RthJA,source,confidence,note\n" +
		"7812,fixed,positive,12,1.8,0.5,40,1.5,TO-220=60; DPAK=80,\"data book 9, page 4; revised\",,\n" +
		"REG-33X,fixed,negative,3.3 @ at 25 degC,0.4,0.2,10,0.3,,house[VOUT],seen; memory[VDO],\n"
	table, err := Load("stock.csv", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	row, ok := table.Find("LM7812CT")
	if !ok || row.Origin != "stock.csv" {
		t.Fatalf("LM7812CT: %+v", row)
	}
	if v, _ := row.Value(VI); v.Number != 40 || v.Confidence != Stated || v.Source != "data book 9, page 4; revised" {
		t.Errorf("VI: %+v", v)
	}
	if v, _ := row.Value(VDO); v.Condition != "IVDO = 0.5" {
		t.Errorf("VDO: %+v", v)
	}
	if cases := row.Cases(RthJA); len(cases) != 2 || cases[1].Case != "DPAK" || cases[1].Number != 80 {
		t.Errorf("RthJA: %+v", cases)
	}
	row, ok = table.Find("reg-33x")
	if !ok || row.Polarity != netlist.Negative || row.String() != "stock.csv REG-33X" {
		t.Fatalf("reg-33x: %+v", row)
	}
	if v, _ := row.Value(VOUT); v.Source != "house" || v.Confidence != Seen || v.Condition != "at 25 degC" {
		t.Errorf("VOUT: %+v", v)
	}
	if v, _ := row.Value(VDO); v.Confidence != Memory {
		t.Errorf("VDO: %+v", v)
	}
	if _, ok := table.Find("1N4007"); !ok {
		t.Error("the built-in rows are gone")
	}
	if built, _ := Default().Lookup("7812"); built.Origin != "parts table" {
		t.Error("the built-in table was changed")
	}
	if table.Version() == Default().Version() || !strings.HasPrefix(table.Version(), Default().Version()+"+") {
		t.Errorf("version %q", table.Version())
	}
	count := 0
	for _, r := range table.Rows() {
		if r.Type == "7812" {
			count++
		}
	}
	if count != 1 || table.Rows()[0].Type != "7812" {
		t.Errorf("7812 is listed %d times, first row %s", count, table.Rows()[0].Type)
	}
}

func TestFaultsOfAUserFileAreNamedWithTheirPlace(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"", "p.csv:1:1: the table is empty"},
		{"kind,VRRM\nrectifier,50\n", `p.csv:1:1: the header has no column "type"`},
		{"type,kind,vrrm\nX1,rectifier,50\n", `p.csv:1:1: unknown column "vrrm"; expected a rating symbol, such as VRRM`},
		{"type,kind,VRRM,VRRM\nX1,rectifier,50,50\n", `p.csv:1:16: column "VRRM" stands twice`},
		{"type,kind,VRRM\nX 1,rectifier,50\n", `p.csv:2:1: type name "X 1"`},
		{"type,kind,VRRM\nX1,diode,50\n", `p.csv:2:4: unknown kind "diode"; expected one of rectifier`},
		{"type,kind,VRRM\nX1,rectifier,fifty\n", `p.csv:2:14: VRRM: "fifty" is not a number`},
		{"type,kind,VRRM\nµX1,rectifier,50\n", `p.csv:2:1: type name`},
		{"type,kind,note,VRRM\nX1,rectifier,\"ü, ö\",fifty\n", `p.csv:2:21: VRRM`},
		{"type,kind,VRRM\nX1,rectifier,0.05\n", "p.csv:2:14: VRRM = 0.05 is outside 10 to 2000"},
		{"type,kind,VRRM\nX1,rectifier,inf\n", "p.csv:2:14: VRRM"},
		{"type,kind,VRRM\nX1,rectifier,50\nx1,rectifier,60\n", "p.csv:3:1: type x1 stands twice"},
		{"type,kind,VRRM\nX1,rectifier,\n", "p.csv:2:1: type X1 has no rating"},
		{"type,kind,IZT\nZ1,zener,0.005\n", "p.csv:2:1: Z1 is a zener without VZ"},
		{"type,kind,VZmin,VZ\nZ1,zener,12,11\n", "p.csv:2:13: VZ of Z1 is less than its VZmin"},
		{"type,kind,VRRM,confidence\nX1,rectifier,50,sure\n", `p.csv:2:17: confidence "sure"`},
		{"type,kind,VRRM,IFAV,source\nX1,rectifier,50,,a[IFAV]\n", "p.csv:2:18: a names IFAV, which has no value here"},
		{"type,kind,polarity,VOUT\nR1,fixed,plus,5\n", `p.csv:2:10: polarity "plus"`},
		{"type,kind,VRRM\nX1,rectifier,50,1\n", "p.csv:2:17: 4 fields"},
		{"type,kind,VRRM\n\"X1,rectifier,50\n", "p.csv:2:"},
		{"type,kind,VRRM\n\xff,rectifier,50\n", "p.csv:1:1: the table is not UTF-8"},
	} {
		_, err := Load("p.csv", []byte(c.text))
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%q: error %v, want %s", c.text, err, c.want)
		}
	}
}

// The document for users of --parts names every column there is.
func TestEveryColumnIsDocumented(t *testing.T) {
	text, err := os.ReadFile("TABLES.md")
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range vocabulary {
		if !strings.Contains(string(text), "| `"+string(c.symbol)+"` |") {
			t.Errorf("TABLES.md does not name %s", c.symbol)
		}
	}
	for _, k := range kinds {
		if !strings.Contains(string(text), k.kind) {
			t.Errorf("TABLES.md does not name kind %s", k.kind)
		}
	}
	// Its example is a file that loads.
	var example []string
	for _, line := range strings.Split(string(text), "\n") {
		if rest, ok := strings.CutPrefix(line, "    "); ok {
			example = append(example, rest)
		}
	}
	if _, err := Load("example.csv", []byte(strings.Join(example, "\n"))); err != nil {
		t.Errorf("the example of TABLES.md: %v", err)
	}
}

func TestManyFaultsAreCut(t *testing.T) {
	text := "type,kind,VRRM\n" + strings.Repeat("X1,diode,1\n", 200)
	_, err := Load("p.csv", []byte(text))
	if err == nil || strings.Count(err.Error(), "\n") != 49 {
		t.Errorf("want 50 problems, got %d", strings.Count(err.Error(), "\n")+1)
	}
}

func FuzzLoad(f *testing.F) {
	f.Add([]byte("type,kind,VRRM,source\n1N4007,rectifier,1000 @ x,a[VRRM]; b\n"))
	f.Add([]byte("type,kind,RthJA\nQ1,transistor,TO-220=60; DPAK=80\n"))
	f.Add([]byte("\ufefftype,kind,VZ\n# c\nZ1,zener,12\n"))
	f.Fuzz(func(t *testing.T, text []byte) {
		table, err := Load("f.csv", text)
		if err != nil {
			if !strings.HasPrefix(err.Error(), "f.csv:") {
				t.Fatalf("error without a place: %v", err)
			}
			return
		}
		for _, row := range table.Rows() {
			if len(row.Symbols()) == 0 {
				t.Fatalf("%s has no value", row.Type)
			}
		}
	})
}
