package netlist

import (
	"os"
	"path/filepath"
	"testing"
)

// A file of another program under a library's ending is named once; a library or a part of a deck is read.
func TestPlausibleIncludes(t *testing.T) {
	for text, read := range map[string]bool{
		".model DX D(IS=1n)\n":                                 true,
		"* part of a deck\nR2 a 0 {2*3}\n":                     true,
		"D2 a 0 DY\n":                                          true,
		"start:\tMOV A,#5\n\tDJNZ R2,start\n\tEND\n":           false,
		"DEF PART U 0 40 Y N 1 F N\nF0 \"U\" 0 0 50 H\nDRAW\n": false,
		"width equ 5\norg 0x100\n":                             false,
	} {
		dir := t.TempDir()
		for name, body := range map[string]string{"x.lib": text, "a.cir": "title\nV1 a 0 1\nR1 a 0 1\n.include x.lib\n"} {
			if err := os.WriteFile(filepath.Join(dir, name), []byte(body), 0o644); err != nil {
				t.Fatal(err)
			}
		}
		c, _, faults, err := Read(Source{File: filepath.Join(dir, "a.cir")})
		if err != nil {
			t.Fatal(err)
		}
		if said := remarked(c, RemarkLibraryNotRead, "reads like"); said == read {
			t.Errorf("%q: remarked as not read: %v (%v)", text, said, faults)
		}
	}
}
