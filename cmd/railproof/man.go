package main

import (
	"bytes"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"time"

	"github.com/spf13/cobra"
	"github.com/spf13/cobra/doc"
)

func newMan(s *streams) *cobra.Command {
	return &cobra.Command{
		Use:   "man DIR",
		Short: "Write the manual pages, one a command",
		Long: `man writes a page of section 1 for each command into a folder, which is made if it is not there; ` + "`man -M`" + ` wants
that folder to be named man1. The pages carry the version and no date: the same program writes the same bytes.`,
		Example: "  railproof man share/man/man1 && man -M share/man railproof-check",
		Args:    cobra.ExactArgs(1),
		RunE: func(c *cobra.Command, args []string) error {
			if err := os.MkdirAll(args[0], 0o777); err != nil {
				return err
			}
			return writeManual(c.Root(), args[0])
		},
		ValidArgsFunction: whileWanted(completeFolders),
	}
}

// writeManual writes the page of a command and those of the commands below it.
func writeManual(c *cobra.Command, folder string) error {
	page, err := manualPage(c)
	if err != nil {
		return err
	}
	name := strings.ReplaceAll(c.CommandPath(), " ", "-") + ".1"
	if err := replaceFile(filepath.Join(folder, name), page); err != nil {
		return err
	}
	for _, below := range c.Commands() {
		if !below.IsAvailableCommand() {
			continue
		}
		if err := writeManual(below, folder); err != nil {
			return err
		}
	}
	return nil
}

// manualPage is one page in the man macros. Its date is left empty.
func manualPage(c *cobra.Command) ([]byte, error) {
	c.Root().DisableAutoGenTag = true
	var undated time.Time
	header := doc.GenManHeader{Section: "1", Date: &undated, Source: "railproof " + version, Manual: "User commands"}
	var b bytes.Buffer
	if err := doc.GenMan(c, &header, &b); err != nil {
		return nil, err
	}
	date := []byte(undated.Format(`"Jan 2006"`))
	if bytes.Count(b.Bytes(), date) != 1 {
		return nil, fmt.Errorf("the page of %s has no place for a date", c.CommandPath())
	}
	return bytes.Replace(b.Bytes(), date, []byte(`""`), 1), nil
}
