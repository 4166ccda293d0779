package report

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"railproof/checks"
	"railproof/netlist"
)

// settingsOf reads a netlist of two diodes with its own sheet and a shared one.
func settingsOf(t *testing.T, o checks.Options) *Settings {
	t.Helper()
	folder := t.TempDir()
	for name, text := range map[string]string{
		".git":           "",
		"railproof.duty": "ambient 0C..50C\nlife 20000h\nrate D* VRRM=400V\nrate C9 UR=25V\n",
		"a.cir":          "Two diodes\nV1 ac 0 SIN(0 12 50)\nD1 ac out DX\nD2 0 ac DX\nRL out 0 1k\n.model DX D(IS=1n)\n*: winding V1 as-drawn\n",
		"a.duty":         "ambient 0C..60C\nrate D2 VRRM=600V\n",
	} {
		if err := os.WriteFile(filepath.Join(folder, name), []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	t.Chdir(folder)
	o.Source = netlist.Source{File: "a.cir", NoShared: o.Source.NoShared}
	s, faults, err := checks.SettingsOf(o)
	if err != nil || len(faults) > 0 {
		t.Fatal(faults, err)
	}
	return NewSettings(s)
}

func settingsText(t *testing.T, s *Settings) string {
	t.Helper()
	var b bytes.Buffer
	if err := s.WriteText(&b, false); err != nil {
		t.Fatal(err)
	}
	return strings.Join(strings.Fields(b.String()), " ")
}

func TestSettingsTellWhereEachStatementIsFrom(t *testing.T) {
	text := settingsText(t, settingsOf(t, checks.Options{}))
	for _, want := range []string{
		"under the shared sheet railproof.duty",
		"winding V1 as-drawn netlist a.cir:7:", "ambient 0C..60C sheet a.duty:1:1", "rate D2 VRRM=600V sheet a.duty:2:1",
		"rate D1 VRRM=400V shared sheet railproof.duty:3:1", "life 20000h shared sheet railproof.duty:2:1",
		"policy: common (the default)", "profile: how fast stored charge is gone is not judged",
		"ambient: the sheet says 0C..60C, the shared sheet says 0C..50C (railproof.duty:1:1)",
		`rate C9 UR=25V railproof.duty:4:1: no element "C9"`,
		"ambient 0C..50C railproof.duty:1:1: what the netlist itself states counts",
	} {
		if !strings.Contains(text, want) {
			t.Errorf("missing %q in\n%s", want, text)
		}
	}
	if strings.Contains(text, "rate D*") {
		t.Error("a statement that is narrowed stands as if all of it counted")
	}
}

func TestSettingsOfFlags(t *testing.T) {
	text := settingsText(t, settingsOf(t, checks.Options{Policy: "rating", Source: netlist.Source{NoShared: true}}))
	for _, want := range []string{"no shared sheet", "policy rating --policy", "life: how long electrolytics last is not judged"} {
		if !strings.Contains(text, want) {
			t.Errorf("missing %q in\n%s", want, text)
		}
	}
	if strings.Contains(text, "railproof.duty") || strings.Contains(text, "policy: common") {
		t.Error(text)
	}
}

func TestSettingsJSONIsValid(t *testing.T) {
	for _, o := range []checks.Options{{}, {Policy: "rating", Source: netlist.Source{NoShared: true}}} {
		var b bytes.Buffer
		if err := settingsOf(t, o).WriteJSON(&b); err != nil {
			t.Fatal(err)
		}
		if err := validate(schemaOf(t, "settings-1"), b.Bytes()); err != nil {
			t.Errorf("%v in\n%s", err, b.String())
		}
	}
}
