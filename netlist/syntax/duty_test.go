package syntax

import (
	"strings"
	"testing"
	"unicode/utf8"
)

// What each statement prints as, in its canonical form.
func TestPrintDuty(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"line 230V -10%..+10% 50Hz   # label", "line 230V -10%..+10% 50Hz"},
		{"LINE V1 230V", "line V1 230V"},
		{"winding V2 12V 1.5A regulation = 12%", "winding V2 12V 1.5A regulation=12%"},
		{"winding V2 as-drawn", "winding V2 as-drawn"},
		{"ambient 0C..45C", "ambient 0C..45C"},
		{"load RL open", "load RL open"},
		{"load RL 20Ohm..open", "load RL 20Ohm..open"},
		{"part U1 7812 pins=in,gnd,out", "part U1 7812 pins=in,gnd,out"},
		{`rate "D1,D3"  VRRM=400V	IFAV=1A`, `rate "D1,D3" VRRM=400V IFAV=1A`},
		{"rate X#1 UR=25V#no", "rate X#1 UR=25V#no"}, // # begins a comment only behind a blank
		{"cooling U1 6K/W", "cooling U1 6K/W"},
		{"rail +12V 12V -5%..+5% ripple=10mV", "rail +12V 12V -5%..+5% ripple=10mV"},
		{"policy common", "policy common"},
		{"life 40000h", "life 40000h"},
		{"profile laboratory", "profile laboratory"},
		{"profile 60V 2s", "profile 60V 2s"},
		{`concession stored-charge C1 up to 80V until 2027-03-31 "label on the case"`, `concession stored-charge C1 up to 80V until 2027-03-31 "label on the case"`},
	} {
		s, fault := ParseDuty(c.text, Position{File: "a.duty", Line: 3, Column: 5})
		if fault != nil {
			t.Errorf("%s: %v", c.text, fault)
			continue
		}
		if got := PrintDuty(s); got != c.want {
			t.Errorf("%s: prints %s", c.text, got)
		}
		if at := s.Place(); at != (Position{File: "a.duty", Line: 3, Column: 5}) {
			t.Errorf("%s: at %v", c.text, at)
		}
	}
	for _, text := range []string{"", "   ", "# comment", "\t# comment", "\r"} {
		if s, fault := ParseDuty(text, Position{}); s != nil || fault != nil {
			t.Errorf("%q: %v %v", text, s, fault)
		}
	}
}

func TestDutyUsage(t *testing.T) {
	for _, keyword := range DutyKeywords() {
		if !strings.HasPrefix(DutyUsage(keyword), keyword+" ") {
			t.Errorf("usage of %s: %q", keyword, DutyUsage(keyword))
		}
		_, fault := ParseDuty(keyword, Position{File: "a.duty", Line: 1, Column: 1})
		if fault == nil || fault.What != "the statement ends too early" || fault.At.Column != len(keyword)+1 {
			t.Errorf("%s alone: %v", keyword, fault)
		}
	}
}

func TestNearest(t *testing.T) {
	words := []string{"line", "winding", "rate", "rail", "V1", "D10"}
	for _, c := range []struct{ word, want string }{
		{"lien", "line"}, {"widning", "winding"}, {"RATE", "rate"}, {"ral", "rail"}, {"v2", "V1"}, {"zzzz", ""}, {"D1", "V1"},
	} {
		if got, _ := Nearest(c.word, words); got != c.want {
			t.Errorf("Nearest(%q) = %q, want %q", c.word, got, c.want)
		}
	}
}

func FuzzDuty(f *testing.F) {
	for _, seed := range []string{
		"line 230V -10%..+10% 50Hz", "winding V2 12V 1.5A regulation=12%", "winding \"as-drawn\" as-drawn", "rate D1..D4 VRRM=400V # x",
		"load RL open", `part U1 "78 12" pins=in,gnd,out`, `concession a "b" up to 1V until 2027-03-31 "c"`, "rail +5V 5V -1%..1%", "=\"", "profile \"60V\"", "line \xff",
	} {
		f.Add(seed)
	}
	f.Fuzz(func(t *testing.T, text string) {
		at := Position{File: "a.duty", Line: 7, Column: 3}
		s, fault := ParseDuty(text, at)
		if fault != nil {
			if c := fault.At.Column - at.Column; fault.At.Line != 7 || fault.At.File != "a.duty" || c < 0 || c > utf8.RuneCountInString(text) {
				t.Fatalf("%q: %v lies outside the line", text, fault)
			}
			return
		}
		if s == nil {
			return
		}
		printed := PrintDuty(s)
		again, fault := ParseDuty(printed, at)
		if fault != nil {
			t.Fatalf("%q prints as %q: %v", text, printed, fault)
		}
		if twice := PrintDuty(again); twice != printed {
			t.Fatalf("%q prints as %q and then as %q", text, printed, twice)
		}
	})
}
