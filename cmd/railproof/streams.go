package main

import (
	"fmt"
	"io"
	"os"
	"strings"

	"github.com/mattn/go-isatty"

	"railproof/netlist"
	"railproof/report"
)

// streams is what a verb reads and writes.
type streams struct {
	in               io.Reader
	out, err         io.Writer
	environment      func(name string) (string, bool)
	outTerm, errTerm bool   // the stream is a terminal
	colour           string // --color
}

func standardStreams() streams {
	terminal := func(f *os.File) bool { return isatty.IsTerminal(f.Fd()) || isatty.IsCygwinTerminal(f.Fd()) }
	return streams{
		in: os.Stdin, out: os.Stdout, err: os.Stderr, environment: os.LookupEnv,
		outTerm: terminal(os.Stdout), errTerm: terminal(os.Stderr),
	}
}

func (s *streams) checkColour() error {
	switch s.colour {
	case "auto", "always", "never":
		return nil
	}
	return fmt.Errorf("--color %q; expected auto, always or never", s.colour)
}

// paint decides whether a stream is coloured: --color, then NO_COLOR, then CLICOLOR_FORCE, then whether it
// is a terminal.
func (s *streams) paint(terminal bool) bool {
	switch s.colour {
	case "always":
		return true
	case "never":
		return false
	}
	if v, _ := s.environment("NO_COLOR"); v != "" {
		return false
	}
	if v, _ := s.environment("CLICOLOR_FORCE"); v != "" && v != "0" {
		return true
	}
	return terminal
}

func (s *streams) outStyle() report.Style { return report.Style{Colour: s.paint(s.outTerm)} }

// say writes a message to the error stream, line by line, made safe for a terminal: it may quote an input.
func (s *streams) say(message string) {
	for _, line := range strings.Split(message, "\n") {
		fmt.Fprintln(s.err, report.Printable(line))
	}
}

// refuse says what is wrong with an input that could not be read.
func (s *streams) refuse(diagnostics []netlist.Diagnostic) error {
	for _, d := range diagnostics {
		s.say(d.Error())
	}
	return exitStatus(report.ExitBadInput)
}
