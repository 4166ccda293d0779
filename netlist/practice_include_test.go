package netlist

import (
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// readDeck writes files into a folder and reads the first one, which must be accepted.
func readDeck(t *testing.T, files ...string) (*Circuit, []Diagnostic) {
	t.Helper()
	dir := t.TempDir()
	for k := 0; k+1 < len(files); k += 2 {
		name := filepath.Join(dir, filepath.FromSlash(files[k]))
		if err := os.MkdirAll(filepath.Dir(name), 0o755); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(name, []byte(files[k+1]), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	c, _, faults, err := Read(Source{File: filepath.Join(dir, files[0]), Library: regulators{}})
	if err != nil {
		t.Fatal(err)
	}
	return c, faults
}

// Every way in which decks name a file beside them finds it.
func TestSpellingsOfIncludes(t *testing.T) {
	for _, line := range []string{
		".include \"my parts.lib\"", ".include my parts.lib", ".inc 'my parts.lib'", ".incl my parts.lib", ".lib my parts.lib", ".INCLUDE <my parts.lib>",
		".lib C:\\Old Docs\\sub\\my parts.lib", ".include /home/x/my parts.lib", ".lib \"..\\lib\\my parts.lib\"", ".lib \\\\server\\share\\my parts.lib", ".include ./my parts.lib ; note",
	} {
		t.Run(line, func(t *testing.T) {
			c, faults := readDeck(t, "a.cir", "t\nV1 a 0 5\nD1 a 0 DQ\n"+line+"\n.end\n", "my parts.lib", "* parts\r\n.model DQ D(IS=2n)\r\n.end\r\n")
			if len(faults) > 0 {
				t.Fatal(faults)
			}
			if m := c.Elements[1].Device.(Diode).Model; m == nil || m.IS != 2e-9 || remarked(c, RemarkLibraryNotRead, "") {
				t.Errorf("model %+v, remarks %+v", m, c.Remarks)
			}
		})
	}
}

// Decks in several files: split, in folders, in sections, inside a subcircuit, in other encodings.
func TestDecksInSeveralFiles(t *testing.T) {
	wide := func(text string) string {
		var b strings.Builder
		for _, r := range text {
			b.WriteByte(byte(r))
			b.WriteByte(0)
		}
		return b.String()
	}
	for name, c := range map[string]struct {
		files []string
		want  string
	}{
		"deck split in two; the first line of an included file is an element": {
			[]string{"a.cir", "t\n.inc \"x.net\"\nV1 a 0 5\n", "x.net", "R1 a 0 1k\nR2 a 0 2k\n.end\n"}, "R1(a 0) R2(a 0) V1(a 0)"},
		"folder and back": {
			[]string{"a.cir", "t\n.include sub/b.inc\nV1 a 0 5\n", "sub/b.inc", ".include c.inc\n", "sub/c.inc", "R1 a 0 1\n"}, "R1(a 0) V1(a 0)"},
		"section": {
			[]string{"a.cir", "t\n.lib p.lib FAST\nV1 a 0 5\n", "p.lib", ".lib slow\nR1 a 0 1\n.endl slow\n.lib Fast\nR2 a 0 2\n.endl\n"}, "R2(a 0) V1(a 0)"},
		"inside a subcircuit": {
			[]string{"a.cir", "t\nX1 a 0 S\n.subckt S p q\n.include b.inc\n.ends S\nV1 a 0 5\n", "b.inc", "R1 p q 1\n"}, "X1.R1(a 0) V1(a 0)"},
		"UTF-16 library": {
			[]string{"a.cir", "t\nV1 a 0 5\n.include b.lib\n", "b.lib", wide("* parts\nR1 a 0 1k\nR2 a 0 1k\n")}, "V1(a 0) R1(a 0) R2(a 0)"},
		"missing file": {
			[]string{"a.cir", "t\nV1 a 0 5\n.include gone.lib\nR1 a 0 {r}\n"}, "V1(a 0) R1(a 0)"},
		"definition of a subcircuit in a library": {
			[]string{"a.cir", "t\nV1 a 0 5\nX1 a 0 OUTER\n.lib b.lib\n", "b.lib", ".subckt OUTER p q\nX2 p q INNER\n.ends OUTER\n.subckt INNER k l\nR1 k m 1\nR2 m l 1\n.ends\n"}, "V1(a 0) X1.X2.R1(a X1.X2.m) X1.X2.R2(X1.X2.m 0)"},
	} {
		t.Run(name, func(t *testing.T) {
			got, faults := readDeck(t, c.files...)
			if len(faults) > 0 {
				t.Fatal(faults)
			}
			if s := shape(got); s != c.want {
				t.Errorf("read %s, want %s", s, c.want)
			}
			if said := remarked(got, RemarkLibraryNotRead, "gone.lib"); said != (name == "missing file") {
				t.Errorf("remarks %+v", got.Remarks)
			}
		})
	}
}

// Files of other kinds are named in plain words; titles that only look like them are titles.
func TestFilesOfOtherKinds(t *testing.T) {
	for text, want := range map[string]string{
		"(export (version D)\n (design))\n": "S-expressions", "(netlist (a b))": "S-expressions", "[Main]\nx=1\n": "settings file", "<?xml version=\"1.0\"?>\n<a/>": "XML", "": "empty", "\r\n\r\n": "empty",
	} {
		_, _, faults := Parse("t.net", []byte(text), nil, nil)
		if len(faults) != 1 || !strings.Contains(faults[0].Error(), want) {
			t.Errorf("%q: %v, want %s", text, faults, want)
		}
	}
	for _, title := range []string{"(my supply) second try", "[supply]", "<supply>", "{supply}", "\"supply\"", "+5V supply", "= supply =", "1 supply", "\x1a"} {
		if c := accepted(t, title+"\nV1 a 0 5\nR1 a 0 1k\n\x1a"); shape(c) != "V1(a 0) R1(a 0)" {
			t.Errorf("%q: %s", title, shape(c))
		}
	}
}
