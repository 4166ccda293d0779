package report

import (
	"strings"
	"unicode"
	"unicode/utf8"
)

// Printable makes text from an input safe for a terminal and for line-bound formats: control characters,
// direction overrides and invalid bytes become U+FFFD, so that a name can neither move the cursor nor
// break a line.
func Printable(text string) string {
	return strings.Map(func(r rune) rune {
		if r == utf8.RuneError || unicode.IsControl(r) || unicode.Is(unicode.Bidi_Control, r) || r == '\u2028' || r == '\u2029' {
			return utf8.RuneError
		}
		return r
	}, text)
}

func printable(text string) string { return Printable(text) }
