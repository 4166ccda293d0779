package parts

import "testing"

// A part statement may name a row by its bare number, which elsewhere could be a value.
func TestNamed(t *testing.T) {
	for _, name := range []string{"317", "431", "7812", "LM317", "1N4004"} {
		if _, ok := Default().Named(name); !ok {
			t.Errorf("%s is no row", name)
		}
	}
	if part, ok := Default().Recognise("317"); ok {
		t.Errorf("317 by itself is taken for %s", part.Type)
	}
	if part, ok := Default().Named("resistor"); ok {
		t.Errorf("resistor is taken for %s", part.Type)
	}
}
