package main

import (
	"bytes"
	"context"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// A picture is never poured over a terminal; piped, or into a file, it is a PNG.
func TestNoPictureOnATerminal(t *testing.T) {
	file := filepath.Join(t.TempDir(), "rc.cir")
	if err := os.WriteFile(file, []byte("low-pass\nV1 in 0 SIN(0 10 50)\nR1 in out 1k\nC1 out 0 1u\n"), 0o666); err != nil {
		t.Fatal(err)
	}
	try := func(terminal bool, more ...string) (int, []byte, string) {
		var out, log bytes.Buffer
		s := streams{out: &out, err: &log, outTerm: terminal, environment: func(string) (string, bool) { return "", false }}
		status := run(context.Background(), append([]string{"trace", file, "out", "--nominal", "--format", "png"}, more...), s)
		return status, out.Bytes(), log.String()
	}
	if status, out, log := try(true); status != 2 || len(out) > 0 || !strings.Contains(log, "expected --output FILE") {
		t.Errorf("on a terminal: status %d, %d bytes, %q", status, len(out), log)
	}
	const signature = "\x89PNG\r\n"
	if status, out, log := try(false); status != 0 || !strings.HasPrefix(string(out), signature) {
		t.Errorf("piped: status %d, %d bytes, %q", status, len(out), log)
	}
	picture := filepath.Join(t.TempDir(), "a.png")
	if status, out, log := try(true, "--output", picture); status != 0 || len(out) > 0 {
		t.Errorf("into a file: status %d, %d bytes, %q", status, len(out), log)
	}
	if text, err := os.ReadFile(picture); err != nil || !strings.HasPrefix(string(text), signature) {
		t.Errorf("the file holds no PNG: %v", err)
	}
}
