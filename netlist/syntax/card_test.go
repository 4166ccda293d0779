package syntax

import (
	"testing"

	"pgregory.net/rapid"
)

// Cutting a plain line at its blanks gives the card that the grammar gives.
func TestPlainCardAgreesWithGrammar(t *testing.T) {
	word := rapid.SampledFrom([]string{"R1", "a", "0", "4k7", "+5V", "N$1", "a.b", "x#y", "§", "1e-3", "-", "ic=1", "tol=5", "=", "a=", "=b", "a==b", "k=v=w"})
	gap := rapid.SampledFrom([]string{" ", "  ", "\t"})
	rapid.Check(t, func(t *rapid.T) {
		text := ""
		for k := range rapid.IntRange(1, 8).Draw(t, "words") {
			if k > 0 {
				text += gap.Draw(t, "gap")
			}
			text += word.Draw(t, "word")
		}
		plain := plainCard(text)
		if plain == nil {
			return
		}
		line := Line{Text: text, first: segment{0, 1, 1}}
		card, fault := parseCard(elementParser, &line)
		if fault != nil {
			t.Fatalf("%q: cut at blanks, refused by the grammar: %v", text, fault)
		}
		if plain.String() != card.String() {
			t.Fatalf("%q: %q at blanks, %q by the grammar", text, plain, card)
		}
	})
}
