package report

import (
	"github.com/fatih/color"

	"railproof/checks"
)

// palette paints words of the ledger, or leaves them as they are. Colour only repeats what a word says.
type palette struct {
	critical, major, minor, unproven, proven, conceded, strong, faint *color.Color
}

func newPalette(on bool) palette {
	paint := func(a ...color.Attribute) *color.Color {
		c := color.New(a...)
		if on {
			c.EnableColor()
		} else {
			c.DisableColor()
		}
		return c
	}
	return palette{
		critical: paint(color.FgHiWhite, color.BgRed, color.Bold), major: paint(color.FgRed, color.Bold),
		minor: paint(color.FgYellow), unproven: paint(color.FgMagenta, color.Bold), proven: paint(color.FgGreen),
		conceded: paint(color.FgCyan), strong: paint(color.Bold), faint: paint(color.Faint),
	}
}

func (p palette) of(v checks.Verdict, s checks.Severity) *color.Color {
	switch v {
	case checks.Unproven:
		return p.unproven
	case checks.Proven:
		return p.proven
	case checks.Conceded:
		return p.conceded
	}
	switch s {
	case checks.Critical:
		return p.critical
	case checks.Major:
		return p.major
	}
	return p.minor
}
