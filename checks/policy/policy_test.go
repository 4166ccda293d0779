package policy

import (
	"math"
	"strings"
	"testing"
)

func named(t *testing.T, name string) *Policy {
	t.Helper()
	p, err := Named(name)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

func TestBuiltInPoliciesAreClean(t *testing.T) {
	want := "common navy-rectifier-normal-1 navy-rectifier-normal-2 navy-rectifier-protected-1 navy-rectifier-protected-2 navy-rectifier-severe-1 navy-rectifier-severe-2 rating two-level-benign two-level-severe"
	if got := strings.Join(Names(), " "); got != want {
		t.Errorf("policies %s, want %s", got, want)
	}
	for _, name := range Names() {
		for _, row := range named(t, name).Rows() {
			if row.Source == "" || row.Confidence == Memory {
				t.Errorf("%s %s: source %q, confidence %q", name, row.Quantity, row.Source, row.Confidence)
			}
			if row.Confidence == CommonPractice && row.Source != "common practice" {
				t.Errorf("%s %s is a rule of thumb under the name of %q", name, row.Quantity, row.Source)
			}
		}
	}
}

// Published numbers, and the rules they make of a rating.
func TestLimits(t *testing.T) {
	for _, c := range []struct {
		policy string
		key    Key
		rating float64
		limit  float64
		rule   string
	}{
		{"rating", VRRM, 400, 400, "the rating itself"},
		{"rating", RegulatorJunctionTemperature, 125, 125, "the rating itself"},
		{"rating", HeadroomReserve, 0, 0, "0 V reserve"},
		{"common", VRRM, 400, 320, "rating x 0.8"},
		{"common", ElectrolyticVoltage, 25, 20, "rating x 0.8"},
		{"common", ZenerPower, 1, 0.6, "rating x 0.6"},
		{"common", DiodeJunctionTemperature, 150, 125, "rating - 25 K"}, // by the general row
		{"common", HeadroomReserve, 0, 0.5, "0.5 V reserve"},
		{"common", RegulatorInputVoltage, 35, 29.75, "rating x 0.85"},
		// RAC/RIAC two-level guide: rectifier VR 70/80 %, Tj 95/115 degC, electrolytics 70/80 % and Tmax - 20.
		{"two-level-severe", VRRM, 1000, 700, "rating x 0.7"},
		{"two-level-benign", VRRM, 1000, 800, "rating x 0.8"},
		{"two-level-severe", DiodeJunctionTemperature, 150, 95, "at most 95 degC"},
		{"two-level-benign", ZenerJunctionTemperature, 200, 115, "at most 115 degC"},
		{"two-level-benign", ZenerJunctionTemperature, 100, 100, "at most 115 degC"}, // never above the rating
		{"two-level-severe", ElectrolyticVoltage, 50, 35, "rating x 0.7"},
		{"two-level-severe", ElectrolyticTemperature, 105, 85, "rating - 20 K"},
		// SD-18 table 1A, power rectifier, severe: QL1 IF 90 VR 85 Tj 125; QL2 60 / 30 / 70.
		{"navy-rectifier-severe-1", IFAV, 1, 0.9, "rating x 0.9"},
		{"navy-rectifier-severe-1", VRRM, 100, 85, "rating x 0.85"},
		{"navy-rectifier-severe-2", VRRM, 100, 30, "rating x 0.3"},
		{"navy-rectifier-normal-2", DiodeJunctionTemperature, 150, 85, "at most 85 degC"},
	} {
		row, ok := named(t, c.policy).Row(c.key)
		if !ok {
			t.Errorf("%s has no row for %s", c.policy, c.key)
			continue
		}
		if got := row.Limit(c.rating); math.Abs(got-c.limit) > 1e-12 {
			t.Errorf("%s %s of %g: limit %g, want %g", c.policy, c.key, c.rating, got, c.limit)
		}
		if row.Rule() != c.rule {
			t.Errorf("%s %s: rule %q, want %q", c.policy, c.key, row.Rule(), c.rule)
		}
	}
}

func TestSilenceOfAPolicyIsKnown(t *testing.T) {
	for _, c := range []struct {
		policy string
		key    Key
	}{
		{"navy-rectifier-normal-1", ElectrolyticVoltage}, {"navy-rectifier-normal-1", RegulatorJunctionTemperature},
		{"two-level-benign", IFSM}, {"two-level-benign", HeadroomReserve}, {"common", ResistorVoltage}, {"common", "no-such-quantity"},
	} {
		if row, ok := named(t, c.policy).Row(c.key); ok {
			t.Errorf("%s speaks of %s: %+v", c.policy, c.key, row)
		}
	}
}

func TestUnknownNameListsThePolicies(t *testing.T) {
	_, err := Named("navy")
	if err == nil || !strings.Contains(err.Error(), "two-level-benign") || !strings.Contains(err.Error(), "common") {
		t.Errorf("error %v", err)
	}
}

func TestVersionFollowsTheBytes(t *testing.T) {
	a := named(t, "common").Version()
	if !strings.HasPrefix(a, "common ") || len(a) != len("common ")+8 {
		t.Errorf("version %q", a)
	}
	b, err := FromCSV("common", []byte("quantity,factor\nvrrm,0.5\n"))
	if err != nil || b.Version() == a {
		t.Errorf("another table has version %q, error %v", b.Version(), err)
	}
}

func TestUserFile(t *testing.T) {
	p, err := FromCSV("dir/house.csv", []byte("# our own\nquantity,factor,offset,at_most,source,confidence\nVRRM,0.75,,,house rule 4,\njunction-temperature,,40,110,house rule 5,\n"))
	if err != nil {
		t.Fatal(err)
	}
	if row, ok := p.Row(VRRM); !ok || row.Factor != 0.75 || row.Confidence != Stated || row.Source != "house rule 4" {
		t.Errorf("vrrm: %+v %v", row, ok)
	}
	// The lower of 175 - 40 and 110.
	if row, _ := p.Row(TransistorJunctionTemp); row.Limit(175) != 110 || row.Limit(125) != 85 || row.Rule() != "rating - 40 K, at most 110 degC" {
		t.Errorf("junction temperature: %+v, %s", row, row.Rule())
	}
}

func TestFaultsAreNamedWithTheirPlace(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"", "p.csv:1:1: the table is empty"},
		{"factor\n1\n", `p.csv:1:1: the header has no column "quantity"`},
		{"quantity,factor\n", "p.csv:1:1: the policy has no row"},
		{"quantity,factor,colour\nvrrm,0.8,red\n", `p.csv:1:1: unknown column "colour"`},
		{"quantity,factor\nvrrm,0.8\nvrm,0.8\n", `p.csv:3:1: unknown quantity "vrm"`},
		{"quantity,factor\nvrrm,eight\n", `p.csv:2:6: factor "eight" is not a number`},
		{"quantity,factor\nvrrm,NaN\n", `p.csv:2:6: factor "NaN" is not a number`},
		{"quantity,factor\nvrrm,1.2\n", "p.csv:2:6: factor 1.2"},
		{"quantity,factor\nvrrm,0\n", "p.csv:2:6: factor 0"},
		{"quantity,factor\nvrrm,0.8\nvrrm,0.7\n", "p.csv:3:1: quantity vrrm stands twice"},
		{"quantity,factor\njunction-temperature,0.8\n", "p.csv:2:1: junction-temperature is derated by kelvins"},
		{"quantity,factor,offset\nheadroom-reserve,0.8,\n", "p.csv:2:1: headroom-reserve is a reserve in volts"},
		{"quantity,offset\njunction-temperature,-5\n", "p.csv:2:22: offset -5"},
		{"quantity,factor,confidence\nvrrm,0.8,sure\n", `p.csv:2:10: confidence "sure"`},
		{"quantity,factor\nvrrm,0.8,1,2\n", "p.csv:2:10: 4 fields"},
		{"quantity,factor\n\"vrrm,0.8\n", "p.csv:2:"},
	} {
		_, err := FromCSV("p.csv", []byte(c.text))
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%q: error %v, want %s", c.text, err, c.want)
		}
	}
}
