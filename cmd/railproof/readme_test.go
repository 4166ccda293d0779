package main

import (
	"flag"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"
)

var rewrite = flag.Bool("write", false, "rewrite the outputs shown in the README")

var shown = regexp.MustCompile("(?s)<!-- output of: railproof ([^\n]*?)(, first (\\d+) lines)? -->\n```\n(.*?)```\n")

// The outputs shown in the README are what the program prints.
func TestReadmeShowsRealOutput(t *testing.T) {
	if testing.Short() {
		t.Skip("takes long; held by the full run")
	}
	root := filepath.Join("..", "..")
	program := filepath.Join(t.TempDir(), "railproof")
	if out, err := exec.Command("go", "build", "-o", program, ".").CombinedOutput(); err != nil {
		t.Fatalf("%v\n%s", err, out)
	}
	path := filepath.Join(root, "README.md")
	text, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	count := 0
	fresh := shown.ReplaceAllStringFunc(string(text), func(block string) string {
		count++
		m := shown.FindStringSubmatch(block)
		command := exec.Command(program, strings.Fields(m[1])...)
		command.Dir = root
		out, _ := command.Output() // its exit status is part of what is shown
		lines := strings.SplitAfter(string(out), "\n")
		if m[3] != "" {
			n, _ := strconv.Atoi(m[3])
			lines = lines[:min(n, len(lines))]
		}
		return fmt.Sprintf("<!-- output of: railproof %s%s -->\n```\n%s```\n", m[1], m[2], strings.Join(lines, ""))
	})
	if count < 2 {
		t.Fatalf("the README shows %d outputs", count)
	}
	if fresh == string(text) {
		return
	}
	if !*rewrite {
		t.Fatal("the README shows outputs that the program does not print: go test ./cmd/railproof -run Readme -write")
	}
	if err := os.WriteFile(path, []byte(fresh), 0o644); err != nil {
		t.Fatal(err)
	}
}
