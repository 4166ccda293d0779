package syntax

import (
	"fmt"
	"testing"
	"time"
)

// watch ends the program when an input takes longer than it may: a worker that hangs would go unnoticed.
func watch(text string) (stop func() bool) {
	return time.AfterFunc(time.Minute, func() { panic(fmt.Sprintf("no end in sight with %q", text)) }).Stop
}

// FuzzCard: a card that parses prints as one that parses to the same print; faults lie inside the line.
func FuzzCard(f *testing.F) {
	for _, seed := range []string{
		"V1 a 0 DC 0 SIN(0 15 50)", "C1 Net-(D1-K) 0 22u V=50 mfg=\"A B\"", "R(PULL)3 a b {2*(n+1)}", "Gx a b (c ,d) 7m",
		"X1 a b SUB PARAMS: x=1 y={2}", "R1 a b = = (", "D1 'a b' {", "E1 a 0 TABLE {V(b)} = (0,0) (1,1)",
	} {
		f.Add(seed)
	}
	f.Fuzz(func(t *testing.T, text string) {
		if len(text) > 1000 {
			return
		}
		defer watch(text)()
		line := Line{Text: text, first: segment{0, 1, 1}}
		card, fault := ParseElement(&line)
		if fault != nil {
			if fault.At.Line != 1 || fault.At.Column < 1 || fault.At.Column > len(text)+1 {
				t.Fatalf("%v lies outside %q", fault.At, text)
			}
			return
		}
		once := card.String()
		again, fault := ParseElement(&Line{Text: once, first: segment{0, 1, 1}})
		if fault != nil {
			t.Fatalf("%q printed as %q, which is refused: %v", text, once, fault)
		}
		if twice := again.String(); twice != once {
			t.Fatalf("%q printed as %q and then as %q", text, once, twice)
		}
	})
}

// FuzzFormula: a formula that parses prints as one that parses to the same print.
func FuzzFormula(f *testing.F) {
	for _, seed := range []string{"1+2*3^2", "-2^-x", "a>1?b:c", "if(a>1,2,3)", "V(a,b)*I(V1)+1k", "1+", "2*(3", "sqrt(2)*230/n", "!a&&b||c==d"} {
		f.Add(seed)
	}
	f.Fuzz(func(t *testing.T, text string) {
		if len(text) > 1000 {
			return
		}
		defer watch(text)()
		formula, err := ParseFormula(text)
		if err != nil {
			if e, ok := err.(*FormulaError); ok && (e.Offset < 0 || e.Offset > len(text)) {
				t.Fatalf("offset %d outside %q", e.Offset, text)
			}
			return
		}
		once := formula.String()
		again, err := ParseFormula(once)
		if err != nil {
			t.Fatalf("%q printed as %q, which is refused: %v", text, once, err)
		}
		if twice := again.String(); twice != once {
			t.Fatalf("%q printed as %q and then as %q", text, once, twice)
		}
	})
}
