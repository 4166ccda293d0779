package main

import (
	"bytes"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"
)

// manual writes the pages of a fresh command tree.
func manual(t *testing.T) map[string][]byte {
	t.Helper()
	folder := filepath.Join(t.TempDir(), "share", "man1")
	var errors bytes.Buffer
	if status := run(t.Context(), []string{"man", folder}, streams{out: &errors, err: &errors}); status != 0 {
		t.Fatalf("status %d: %s", status, errors.String())
	}
	entries, err := os.ReadDir(folder)
	if err != nil {
		t.Fatal(err)
	}
	pages := map[string][]byte{}
	for _, e := range entries {
		if pages[e.Name()], err = os.ReadFile(filepath.Join(folder, e.Name())); err != nil {
			t.Fatal(err)
		}
	}
	return pages
}

// Every command has a page that names each of its flags, and says what it does.
func TestEveryCommandHasAPage(t *testing.T) {
	pages := manual(t)
	var walk func(c *cobra.Command)
	count := 0
	walk = func(c *cobra.Command) {
		name := strings.ReplaceAll(c.CommandPath(), " ", "-") + ".1"
		page := strings.ReplaceAll(string(pages[name]), `\-`, "-")
		count++
		if !strings.Contains(page, c.Short) {
			t.Errorf("%s does not say %q", name, c.Short)
		}
		c.LocalNonPersistentFlags().VisitAll(func(f *pflag.Flag) {
			if !strings.Contains(page, "--"+f.Name) {
				t.Errorf("%s does not name --%s", name, f.Name)
			}
		})
		for _, below := range c.Commands() {
			walk(below)
		}
	}
	walk(newRoot(&streams{}))
	if count < 9 || len(pages) < count {
		t.Errorf("%d pages for %d commands", len(pages), count)
	}
}

// The pages depend on the program alone: no date, no name of a generator, the same bytes again.
func TestPagesAreDeterministic(t *testing.T) {
	first, second := manual(t), manual(t)
	dated := regexp.MustCompile(`\b(19|20)[0-9]{2}\b`)
	for name, page := range first {
		if !bytes.Equal(page, second[name]) {
			t.Errorf("%s differs", name)
		}
		head, _, _ := strings.Cut(string(page[bytes.Index(page, []byte(".TH")):]), "\n")
		if dated.MatchString(head) || bytes.Contains(page, []byte("Auto generated")) || !strings.Contains(head, `"1" "" "railproof `) {
			t.Errorf("%s: %s", name, head)
		}
	}
}
