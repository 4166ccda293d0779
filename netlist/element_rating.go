package netlist

import (
	"strconv"
	"strings"

	"railproof/netlist/quantity"
)

// addValueRatings reads what exporters write behind a value: `50V`, `2W`, `1/4W`, `60V/tantalum`. It returns
// the parts of the text that say nothing.
func (c *elementCard) addValueRatings(text string) (unread string) {
	var left []string
	if watts, ok := fractionOfWatt(&text); ok && c.letter == 'R' {
		c.fields = append(c.fields, Field{Key: "P70", Value: watts, At: c.line.Start()})
	}
	for _, part := range strings.Split(text, "/") {
		if part = strings.TrimSpace(part); part == "" {
			continue
		}
		key, value := c.ratingOf(part)
		if key == "" {
			left = append(left, part)
			continue
		}
		c.fields = append(c.fields, Field{Key: key, Value: value, At: c.line.Start()})
	}
	return strings.Join(left, "/")
}

// ratingAlone reports a number whose unit makes it a rating and no value, also where no value stands before it.
func (c *elementCard) ratingAlone(n quantity.Spice) bool {
	switch strings.ToLower(n.Unit) {
	case "%":
		return true
	case "v", "vdc":
		return c.letter != 'L'
	case "w", "watt", "watts":
		return c.letter == 'R'
	}
	return false
}

// ratingOf tells what one part behind a value means.
func (c *elementCard) ratingOf(part string) (key, value string) {
	n, ok := quantity.ParseSpice(part)
	if !ok {
		switch lower := strings.ToLower(part); lower {
		case "tantalum", "ceramic", "film", "electrolytic", "polymer":
			return "technology", lower
		}
		return "", ""
	}
	switch strings.ToLower(n.Unit) {
	case "v", "vdc":
		return map[byte]string{'C': "UR", 'R': "Umax"}[c.letter], part
	case "w", "watt", "watts":
		if c.letter == 'R' {
			return "P70", strconv.FormatFloat(n.Value, 'g', 6, 64) + "W"
		}
	case "%":
		return "tol", part
	}
	return "", ""
}

// fractionOfWatt takes a power such as 1/4W out of a text: its stroke is no separator.
func fractionOfWatt(text *string) (watts string, ok bool) {
	parts := strings.Split(*text, "/")
	for k := 0; k+1 < len(parts); k++ {
		above, err := strconv.ParseUint(strings.TrimSpace(parts[k]), 10, 8)
		below, ok := quantity.ParseSpice(strings.TrimSpace(parts[k+1]))
		if err != nil || !ok || below.Value <= 0 || below.Factor != "" {
			continue
		}
		switch strings.ToLower(below.Unit) {
		case "w", "watt", "watts":
			*text = strings.Join(append(parts[:k:k], parts[k+2:]...), "/")
			return strconv.FormatFloat(float64(above)/below.Value, 'g', 6, 64) + "W", true
		}
	}
	return "", false
}
