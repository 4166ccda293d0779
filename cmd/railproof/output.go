package main

import (
	"bytes"
	"fmt"
	"io"
	"path/filepath"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"railproof/report"
)

// outputFlags says in which formats a verb writes, and where to.
type outputFlags struct {
	formats []string // FORMAT or FORMAT=FILE
	file    string   // --output
}

// target is one format and where it goes; an empty file is the standard output.
type target struct{ format, file string }

func (o *outputFlags) add(c *cobra.Command, formats []string) {
	c.Flags().StringArrayVarP(&o.formats, "format", "f", nil, "`FORMAT` or FORMAT=FILE, repeatable: "+strings.Join(formats, ", "))
	c.Flags().StringVarP(&o.file, "output", "o", "", "write the one format to `FILE` instead of the standard output")
	completeFlag(c, "format", completeFormat(formats))
}

// targets reads the flags; known are the formats of the verb, the default first.
func (o *outputFlags) targets(known []string) ([]target, error) {
	formats := o.formats
	if len(formats) == 0 {
		formats = known[:1]
	}
	var list []target
	standard := 0
	for _, text := range formats {
		name, file, named := strings.Cut(text, "=")
		if !slices.Contains(known, name) {
			return nil, fmt.Errorf("format %q; expected one of %s", name, strings.Join(known, ", "))
		}
		if named && file == "" {
			return nil, fmt.Errorf("format %q; expected a file behind the equals sign", text)
		}
		if !named {
			standard++
			file = o.file
		}
		list = append(list, target{name, file})
	}
	switch {
	case standard > 1:
		return nil, fmt.Errorf("%d formats for one output; expected FORMAT=FILE for all but one", standard)
	case o.file != "" && standard == 0:
		return nil, fmt.Errorf("--output %s, but every format names its own file", o.file)
	}
	for i, a := range list {
		for _, b := range list[:i] {
			if a.file != "" && filepath.Clean(a.file) == filepath.Clean(b.file) {
				return nil, fmt.Errorf("two formats for %s", a.file)
			}
		}
	}
	return list, nil
}

// named lists the files of the targets.
func named(list []target) []string {
	var files []string
	for _, t := range list {
		if t.file != "" {
			files = append(files, t.file)
		}
	}
	return files
}

// deliver renders every target and lays it down beside its place before the first is put there, so that a
// failure leaves no half of them.
func deliver(s *streams, list []target, render func(w io.Writer, format string, style report.Style) error) error {
	pages := make([]bytes.Buffer, len(list))
	for k, t := range list {
		style := report.Style{}
		if t.file == "" {
			style = s.outStyle()
		} else if s.colour == "always" {
			style.Colour = true
		}
		if err := render(&pages[k], t.format, style); err != nil {
			return err
		}
	}
	var laid []*replacement
	defer func() {
		for _, r := range laid {
			r.drop()
		}
	}()
	for k, t := range list {
		if t.file == "" {
			continue
		}
		r, err := lay(t.file, pages[k].Bytes())
		if err != nil {
			return err
		}
		laid = append(laid, r)
	}
	for k, t := range list {
		if t.file == "" {
			if _, err := s.out.Write(pages[k].Bytes()); err != nil {
				return err
			}
		}
	}
	for _, r := range laid {
		if err := r.put(); err != nil {
			return err
		}
	}
	return nil
}
