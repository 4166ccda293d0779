package main

import (
	"bytes"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// --color, then NO_COLOR, then CLICOLOR_FORCE, then whether the stream is a terminal.
func TestPaint(t *testing.T) {
	for _, c := range []struct {
		flag        string
		environment string
		terminal    bool
		want        bool
	}{
		{"auto", "", true, true}, {"auto", "", false, false},
		{"always", "", false, true}, {"never", "", true, false},
		{"auto", "NO_COLOR=1", true, false}, {"auto", "NO_COLOR=", true, true},
		{"auto", "CLICOLOR_FORCE=1", false, true}, {"auto", "CLICOLOR_FORCE=0", false, false},
		{"auto", "NO_COLOR=1 CLICOLOR_FORCE=1", true, false},
		{"always", "NO_COLOR=1", false, true}, {"never", "CLICOLOR_FORCE=1", true, false},
	} {
		s := streams{colour: c.flag, environment: func(name string) (string, bool) {
			for _, entry := range strings.Fields(c.environment) {
				if key, value, _ := strings.Cut(entry, "="); key == name {
					return value, true
				}
			}
			return "", false
		}}
		if got := s.paint(c.terminal); got != c.want {
			t.Errorf("--color %s, %q, terminal %v: %v, want %v", c.flag, c.environment, c.terminal, got, c.want)
		}
	}
}

// What a message quotes from an input cannot reach the terminal as a command.
func TestSay(t *testing.T) {
	var b bytes.Buffer
	s := streams{err: &b}
	s.say("a\x1b[2Jb\nsecond line")
	if b.String() != "a\ufffd[2Jb\nsecond line\n" {
		t.Errorf("%q", b.String())
	}
}

// The bar is for a terminal, and leaves nothing behind.
func TestProgress(t *testing.T) {
	for _, terminal := range []bool{true, false} {
		var b bytes.Buffer
		p := newProgress(&streams{err: &b, errTerm: terminal}, 6, "files")
		for range 6 {
			p.step()
		}
		p.end()
		if terminal != strings.Contains(b.String(), "files  16% |###") || terminal != strings.HasSuffix(b.String(), "\x1b[2K\r") {
			t.Errorf("terminal %v: %q", terminal, b.String())
		}
	}
}

func TestReplaceFile(t *testing.T) {
	folder := t.TempDir()
	real, link := filepath.Join(folder, "real"), filepath.Join(folder, "link")
	if err := os.WriteFile(real, []byte("old"), 0o666); err != nil {
		t.Fatal(err)
	}
	if err := os.Symlink("real", link); err != nil {
		t.Fatal(err)
	}
	if err := replaceFile(link, []byte("new")); err != nil {
		t.Fatal(err)
	}
	if text, err := os.ReadFile(real); err != nil || string(text) != "new" {
		t.Errorf("behind the link stands %q, %v", text, err)
	}
	if info, err := os.Lstat(link); err != nil || info.Mode()&os.ModeSymlink == 0 {
		t.Error("the link was replaced by a file")
	}
	if err := replaceFile(filepath.Join(folder, "missing", "file"), nil); err == nil {
		t.Error("no error for a folder that does not exist")
	}
	if err := replaceFile(os.DevNull, []byte("x")); err != nil {
		t.Errorf("a device: %v", err)
	}
	entries, err := os.ReadDir(folder)
	if err != nil || len(entries) != 2 {
		t.Errorf("something is left lying about: %v", entries)
	}
}
