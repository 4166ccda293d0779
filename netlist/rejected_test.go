package netlist

import (
	"flag"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

var rewriteRejected = flag.Bool("write", false, "rewrite the expected messages of rejected inputs")

// Hostile and broken inputs are refused with exactly these messages.
func TestRejectedInputs(t *testing.T) {
	files, err := filepath.Glob("../testdata/rejected/*.*")
	if err != nil {
		t.Fatal(err)
	}
	seen := 0
	for _, file := range files {
		if ext := filepath.Ext(file); ext != ".cir" && ext != ".net" {
			continue
		}
		seen++
		t.Run(filepath.Base(file), func(t *testing.T) {
			_, _, faults, err := Read(Source{File: file})
			if err != nil {
				t.Fatal(err)
			}
			var got strings.Builder
			for _, f := range faults {
				f.At.File = filepath.Base(f.At.File)
				got.WriteString(f.Error() + "\n")
			}
			if len(faults) == 0 {
				t.Fatal("was accepted")
			}
			golden := strings.TrimSuffix(file, filepath.Ext(file)) + ".golden"
			if *rewriteRejected {
				if err := os.WriteFile(golden, []byte(got.String()), 0o644); err != nil {
					t.Fatal(err)
				}
			}
			want, err := os.ReadFile(golden)
			if err != nil {
				t.Fatal(err)
			}
			if got.String() != string(want) {
				t.Errorf("got:\n%swant:\n%s", &got, want)
			}
		})
	}
	if seen < 15 {
		t.Errorf("only %d rejected inputs were found", seen)
	}
}

// Includes never leave the netlist's folder: by .., by an absolute path, by a link.
func TestIncludeConfinement(t *testing.T) {
	outside := t.TempDir()
	secret := filepath.Join(outside, "secret.lib")
	if err := os.WriteFile(secret, []byte(".model DSECRET D(BV=77)\n"), 0o644); err != nil {
		t.Fatal(err)
	}
	inside := filepath.Join(outside, "design")
	if err := os.Mkdir(inside, 0o755); err != nil {
		t.Fatal(err)
	}
	if err := os.Symlink(secret, filepath.Join(inside, "link.lib")); err != nil {
		t.Fatal(err)
	}
	for _, path := range []string{"../secret.lib", secret, "link.lib", `..\secret.lib`, `C:\secret\link.lib`} {
		file := filepath.Join(inside, "a.cir")
		text := "title\nV1 a 0 1\nD1 a 0 DSECRET\n.include \"" + path + "\"\n"
		if err := os.WriteFile(file, []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
		c, _, faults, err := Read(Source{File: file})
		if err != nil || len(faults) > 0 {
			t.Fatal(err, faults)
		}
		said := false
		for _, r := range c.Remarks {
			said = said || r.Kind == RemarkLibraryNotRead
		}
		id, _ := c.Find("D1")
		if d := c.Elements[id].Device.(Diode); d.Model != nil || !said {
			t.Errorf("%s: model %v read from outside, remarked: %v", path, d.Model, said)
		}
	}
}

// A line of 100 MB, a file beyond the limit, NUL bytes: an error or a reading, never a hang.
func TestOversizedInputs(t *testing.T) {
	file := filepath.Join(t.TempDir(), "a.cir")
	if err := os.WriteFile(file, []byte("title\nR1 a b "+strings.Repeat("9", 100<<20)+"\n"), 0o644); err != nil {
		t.Fatal(err)
	}
	if _, _, _, err := Read(Source{File: file}); err == nil || !strings.Contains(err.Error(), "larger than 64 MiB") {
		t.Errorf("100 MB line: %v", err)
	}
	_, _, faults := Parse("b.cir", []byte("title\nR1 a b "+strings.Repeat("9", 2<<20)+"\n"), nil, nil)
	if len(faults) != 1 || !strings.Contains(faults[0].Error(), "b.cir:2:1: the line is longer than 1 MiB") {
		t.Errorf("2 MB line: %v", faults)
	}
	c, _, faults := Parse("c.cir", []byte("title\nR1 a\x00 b 1k\x00\nV1 a b 1\n"), nil, nil)
	if len(faults) == 0 && len(c.Elements) != 2 {
		t.Errorf("NUL bytes: %v", c.Elements)
	}
}
