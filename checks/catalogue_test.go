package checks

import (
	"flag"
	"fmt"
	"os"
	"regexp"
	"strings"
	"testing"

	"railproof/checks/policy"
)

var write = flag.Bool("write", false, "write CHECKS.md anew from the catalogue")

func TestCatalogueIsComplete(t *testing.T) {
	name := regexp.MustCompile(`^[a-z0-9]+(-[a-z0-9]+)*$`)
	seen, titles, headline := map[string]bool{}, map[string]bool{}, []string{}
	for _, c := range Catalogue() {
		if !name.MatchString(c.Name) {
			t.Errorf("%q is no check name", c.Name)
		}
		if seen[c.Name] || titles[c.Title] {
			t.Errorf("%s (%s) stands twice", c.Name, c.Title)
		}
		seen[c.Name], titles[c.Title] = true, true
		if c.Headline {
			headline = append(headline, c.Name)
		}
		for what, text := range texts(c) {
			if strings.TrimSpace(text) == "" {
				t.Errorf("%s has no %s", c.Name, what)
			}
		}
		if c.run == nil {
			t.Errorf("%s does nothing", c.Name)
		}
		if found, ok := Named(c.Name); !ok || found != c {
			t.Errorf("%s is not found by its name", c.Name)
		}
	}
	want := "diode-reverse-voltage capacitor-voltage zener-resistor-power regulator-headroom"
	if got := strings.Join(headline, " "); got != want {
		t.Errorf("headline checks %s, want %s", got, want)
	}
	if _, ok := Named("diode"); ok {
		t.Error("found a check that is none")
	}
}

func texts(c *Check) map[string]string {
	return map[string]string{
		"title": c.Title, "applies": c.Applies, "stress": c.Stress, "rating": c.Rating, "worst": c.Worst, "formula": c.Formula,
		"assumptions": c.Assumptions, "severity rule": c.SeverityRule, "source": c.Source, "remedy": c.Remedy,
	}
}

// A check that names a policy row names one that a policy can have.
func TestPolicyRowsExist(t *testing.T) {
	rating, err := policy.Named("rating")
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range Catalogue() {
		if c.Policy == "" {
			continue
		}
		if _, ok := rating.Row(c.Policy); !ok {
			t.Errorf("%s: no policy can have a row %q", c.Name, c.Policy)
		}
	}
}

const documentFile = "CHECKS.md"

func TestDocumentAgrees(t *testing.T) {
	want := document()
	if *write {
		if err := os.WriteFile(documentFile, []byte(want), 0o644); err != nil {
			t.Fatal(err)
		}
		return
	}
	got, err := os.ReadFile(documentFile)
	if err != nil {
		t.Fatal(err)
	}
	if string(got) != want {
		t.Errorf("%s does not agree with the catalogue: go test ./checks -run TestDocumentAgrees -write", documentFile)
	}
}

// document is the reference of the catalogue: a row per check, then what a row has no room for.
func document() string {
	var b strings.Builder
	b.WriteString(`# The checks

Written from the catalogue by ` + "`go test ./checks -run TestDocumentAgrees -write`" + `; ` + "`railproof basis CHECK`" + ` prints the same.

Every stress is the worst over all conditions, its numerical error counted against the part. A stress beyond the rating is
critical, one beyond rating x policy factor major, unless the severity rule says otherwise. What lacks a rating or a solution is
unproven and says what would prove it. Headline checks are marked *: a release gate does not pass while one of them is unproven.

| check | on | stress | rating | worst where | policy row |
|---|---|---|---|---|---|
`)
	for _, c := range Catalogue() {
		mark, row := "", string(c.Policy)
		if c.Headline {
			mark = " *"
		}
		if row == "" {
			row = "none"
		}
		fmt.Fprintf(&b, "| [%s](#%s)%s | %s | %s | %s | %s | %s |\n", c.Name, c.Name, mark, cell(c.Applies), cell(c.Stress), cell(c.Rating), cell(c.Worst), row)
	}
	for _, c := range Catalogue() {
		fmt.Fprintf(&b, "\n## %s\n\n%s.\n\n", c.Name, sentence(c.Title))
		for _, line := range []struct{ what, text string }{
			{"formula", c.Formula}, {"assumptions", c.Assumptions}, {"severity", c.SeverityRule}, {"source", c.Source}, {"remedy", c.Remedy},
		} {
			if line.text != "none" {
				fmt.Fprintf(&b, "- %s: %s\n", line.what, line.text)
			}
		}
	}
	return b.String()
}

func cell(text string) string { return strings.ReplaceAll(text, "|", `\|`) }

func sentence(text string) string { return strings.ToUpper(text[:1]) + text[1:] }
