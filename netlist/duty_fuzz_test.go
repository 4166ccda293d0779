package netlist

import (
	"strings"
	"testing"
	"unicode/utf8"
)

// Whatever a sheet holds, its faults and remarks lie inside it, and it is read the same way twice.
func FuzzInterpretDuty(f *testing.F) {
	for _, seed := range []string{
		"line V1 230V 207V..253V 50Hz\nwinding V2 12V 1.5A regulation=12%", "rate D* VRRM=400V\nrate D5 PD=1W", "part U1 7912 pins=out,in,gnd\nrate U2 VOUT=-12V",
		"load R* 1Ohm..open\nrail OUT 12V -5%..5% ripple=10mV", "cooling D1..D5 6K/W\r\nlife 1h\nprofile 1V 1s", `concession a "D1,D2" up to 1% until 2027-01-01 "x"`,
		"rate R* VRRM=70A000", "part D1 1N4742A pins=k,a\nrate \"D1\" VZ=1V..2V",
	} {
		f.Add(seed)
	}
	f.Fuzz(func(t *testing.T, text string) {
		lines := DutyLines("a.duty", text)
		first, faults := interpretDuty(build(t, dutyCircuit), statements{sheets: sheets{FromSheet: lines}})
		for _, fault := range faults {
			if fault.At.Line < 1 || fault.At.Line > len(lines) {
				t.Fatalf("%v lies outside the sheet", fault)
			}
			if width := utf8.RuneCountInString(lines[fault.At.Line-1].Text); fault.At.Column < 1 || fault.At.Column > width+1 {
				t.Fatalf("%v lies outside its line %q", fault, lines[fault.At.Line-1].Text)
			}
		}
		again, _ := interpretDuty(build(t, dutyCircuit), statements{sheets: sheets{FromSheet: lines}})
		if len(again.Ratings) != len(first.Ratings) || remarksOf(again) != remarksOf(first) {
			t.Fatal("read differently the second time")
		}
		// What is no mistake in a netlist's own sheet is none in the shared one.
		_, shared := interpretDuty(build(t, dutyCircuit), statements{sheets: sheets{FromSharedSheet: lines}})
		if len(faults) == 0 && len(shared) > 0 {
			t.Fatalf("a fault of the shared sheet alone: %v", shared[0])
		}
	})
}

func remarksOf(d *Duty) string {
	var all []string
	for _, r := range d.Remarks {
		all = append(all, r.Text)
	}
	return strings.Join(all, "\n")
}
