package main

import (
	"bytes"
	"strings"
	"testing"
)

// offered asks the program as a shell does: the words it offers, and the directive below them.
func offered(t *testing.T, args ...string) (words []string, directive string) {
	t.Helper()
	var out, errors bytes.Buffer
	if status := run(t.Context(), append([]string{"__complete"}, args...), streams{out: &out, err: &errors}); status != 0 {
		t.Fatalf("%v: status %d: %s", args, status, errors.String())
	}
	for _, line := range strings.Split(strings.TrimSpace(out.String()), "\n") {
		if d, ok := strings.CutPrefix(line, ":"); ok {
			return words, d
		}
		word, _, _ := strings.Cut(line, "\t")
		words = append(words, word)
	}
	t.Fatalf("%v: no directive in %s", args, out.String())
	return nil, ""
}

// The directives, as the completion scripts read them.
const (
	anyFile, noFile, noFileNoSpace, byEnding, folders = "0", "4", "6", "8", "16"
)

func TestCompletion(t *testing.T) {
	t.Chdir(t.TempDir())
	put(t, "common-house.csv", "")
	put(t, "netlist.cir", "")
	for _, l := range []struct {
		typed     string // words up to the one being typed, which may be empty
		want      string // words that must be offered
		unwanted  string
		directive string
	}{
		{"", "check settings stress compare basis parts draft man version", "run", noFile},
		{"basis ", "diode-reverse-voltage regulator-headroom concession", "common", noFile},
		{"basis regulator-headroom ", "", "concession", noFile},
		{"basis --policy ", "common rating common-house.csv", "netlist.cir", noFile},
		{"check --policy com", "common common-house.csv", "rating", noFile},
		{"check --policy ho", "csv", "common", byEnding},
		{"parts ", "1N4007 7812", "common", noFile},
		{"parts 78", "7805 7812", "common", noFile},
		{"check --format ", "text json sarif junit html markdown csv", "netlist.cir", noFile},
		{"check --format json=", "", "text", anyFile},
		{"stress --format ", "text json csv", "sarif", noFile},
		{"compare --format ", "text json", "junit", noFile},
		{"settings --format ", "text json", "csv", noFile},
		{"check --gate ", "critical major minor never", "", noFileNoSpace},
		{"check --gate critical,", "critical,major critical,minor", "critical,critical", noFileNoSpace},
		{"check ", "cir net sp spice ckt", "json", byEnding},
		{"check a.cir ", "cir net sp spice ckt", "json", byEnding},
		{"stress ", "cir net sp spice ckt", "json", byEnding},
		{"stress a.cir ", "", "cir", noFile},
		{"settings ", "cir", "json", byEnding},
		{"draft ", "cir", "json", byEnding},
		{"compare ", "json", "cir", byEnding},
		{"compare a.json ", "json", "cir", byEnding},
		{"compare a.json b.json ", "", "json", noFile},
		{"check --duty ", "duty", "cir", byEnding},
		{"check --parts ", "csv", "cir", byEnding},
		{"check --baseline ", "json", "cir", byEnding},
		{"check --include ", "", "cir", folders},
		{"check --color ", "auto always never", "", noFile},
		{"man ", "", "", folders},
	} {
		words, directive := offered(t, strings.Split(l.typed, " ")...)
		have := " " + strings.Join(words, " ") + " "
		for _, w := range strings.Fields(l.want) {
			if !strings.Contains(have, " "+w+" ") {
				t.Errorf("%q: %s is not among%s", l.typed, w, have)
			}
		}
		for _, w := range strings.Fields(l.unwanted) {
			if strings.Contains(have, " "+w+" ") {
				t.Errorf("%q offers %s", l.typed, w)
			}
		}
		if directive != l.directive {
			t.Errorf("%q: directive %s, want %s", l.typed, directive, l.directive)
		}
	}
}
