package syntax

import (
	"bytes"
	"strings"
	"unicode/utf16"
	"unicode/utf8"
)

// Decode turns the bytes of a netlist into text: UTF-8 with or without byte order mark, UTF-16 with one or
// recognised by its pattern of NUL bytes. A byte that is no UTF-8 is the Latin-1 character of that number, so
// that a deck of one encoding with a comment in another keeps its micro signs. LF, CRLF and CR all end a line
// and become LF; a non-breaking blank becomes a blank.
func Decode(raw []byte) string {
	var text string
	switch {
	case bytes.HasPrefix(raw, []byte{0xEF, 0xBB, 0xBF}):
		text = string(raw[3:])
	case bytes.HasPrefix(raw, []byte{0xFF, 0xFE}):
		text = decode16(raw[2:], false)
	case bytes.HasPrefix(raw, []byte{0xFE, 0xFF}):
		text = decode16(raw[2:], true)
	case nulPattern(raw, 1):
		text = decode16(raw, false)
	case nulPattern(raw, 0):
		text = decode16(raw, true)
	case utf8.Valid(raw):
		text = string(raw)
	default:
		text = mixed(raw)
	}
	if body := strings.TrimRight(text, " \t\r\n\x1a"); strings.ContainsRune(text[len(body):], '\x1a') {
		text = body // without the end-of-file mark of old systems
	}
	text = strings.ReplaceAll(text, "\u00a0", " ")
	if strings.ContainsRune(text, '\r') {
		text = strings.ReplaceAll(text, "\r\n", "\n")
		text = strings.ReplaceAll(text, "\r", "\n")
	}
	return text
}

// mixed decodes byte sequences that are UTF-8 as such and every other byte as Latin-1.
func mixed(raw []byte) string {
	var b strings.Builder
	b.Grow(len(raw) + len(raw)/8)
	for len(raw) > 0 {
		r, size := utf8.DecodeRune(raw)
		if r == utf8.RuneError && size == 1 {
			r = rune(raw[0])
		}
		b.WriteRune(r)
		raw = raw[size:]
	}
	return b.String()
}

// nulPattern reports whether most bytes at the offsets of a parity are NUL and few at the others, as in
// UTF-16 text of mostly Latin letters.
func nulPattern(raw []byte, parity int) bool {
	if len(raw) < 4 {
		return false
	}
	sample := raw[:min(len(raw), 4096)&^1]
	var at, other int
	for k := 0; k+1 < len(sample); k += 2 {
		if sample[k+parity] == 0 {
			at++
		}
		if sample[k+1-parity] == 0 {
			other++
		}
	}
	half := len(sample) / 2
	return at*10 >= half*6 && other*10 <= half
}

func decode16(raw []byte, big bool) string {
	units := make([]uint16, 0, len(raw)/2)
	for k := 0; k+1 < len(raw); k += 2 {
		lo, hi := uint16(raw[k]), uint16(raw[k+1])
		if big {
			lo, hi = hi, lo
		}
		units = append(units, lo|hi<<8)
	}
	return string(utf16.Decode(units))
}

// Foreign names the kind of a file that is no SPICE-style netlist but carries its ending, or is empty.
func Foreign(text string) string {
	head := strings.TrimLeft(text[:min(len(text), 4096)], " \t\n\ufeff")
	first, _, _ := strings.Cut(head, "\n")
	lower := strings.ToLower(strings.TrimSpace(first))
	switch {
	case strings.HasPrefix(head, "(") && !strings.HasPrefix(head, "(*") &&
		(strings.Count(first, "(") > strings.Count(first, ")") || strings.HasSuffix(strings.TrimSpace(text), ")")):
		return "a board netlist in S-expressions"
	case strings.HasPrefix(lower, "<?xml"), strings.HasPrefix(lower, "<!doctype"), strings.HasPrefix(lower, "<html"):
		return "an XML or HTML file"
	case strings.HasPrefix(lower, "{") && strings.Contains(head, "\":"):
		return "a JSON file"
	case strings.HasPrefix(lower, "[") && strings.HasSuffix(lower, "]") && strings.Contains(head, "="):
		return "a settings file in sections"
	case strings.HasPrefix(head, "PK\x03\x04"), strings.HasPrefix(head, "%PDF"), strings.HasPrefix(head, "\x89PNG"):
		return "a binary file"
	}
	return ""
}
