package main

import (
	"bytes"
	"fmt"
	"io"
	"os"
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
	completeWords(c, "format", formats...)
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

// deliver renders every target before the first is written, so that a failure leaves no half of them.
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
	for k, t := range list {
		if t.file == "" {
			if _, err := s.out.Write(pages[k].Bytes()); err != nil {
				return err
			}
			continue
		}
		if err := replaceFile(t.file, pages[k].Bytes()); err != nil {
			return err
		}
	}
	return nil
}

// replaceFile writes a file beside its place and renames it there, so that a reader sees the old bytes or
// the new ones. A link is followed; what is no regular file, such as a pipe, is written to directly.
func replaceFile(name string, content []byte) error {
	if real, err := filepath.EvalSymlinks(name); err == nil {
		name = real
		if info, err := os.Stat(name); err == nil && !info.Mode().IsRegular() {
			return os.WriteFile(name, content, 0o666)
		}
	}
	temporary := filepath.Join(filepath.Dir(name), fmt.Sprintf(".%s.%d.part", filepath.Base(name), os.Getpid()))
	f, err := os.OpenFile(temporary, os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o666)
	if err != nil {
		return err
	}
	_, err = f.Write(content)
	if closed := f.Close(); err == nil {
		err = closed
	}
	if err == nil {
		err = os.Rename(temporary, name)
	}
	if err != nil {
		os.Remove(temporary)
	}
	return err
}
