package report

import (
	"fmt"
	"strings"

	"railproof/checks/study"
	"railproof/netlist/syntax"
)

// SelectStresses finds the stresses that ELEMENT=quantity names, upper and lower case aside.
func SelectStresses(s *study.Spread, texts []string) ([]int, error) {
	var chosen []int
	for _, text := range texts {
		k, err := selectStress(s, text)
		if err != nil {
			return nil, err
		}
		chosen = append(chosen, k)
	}
	return chosen, nil
}

func selectStress(s *study.Spread, text string) (int, error) {
	at := strings.LastIndexByte(text, '=')
	if at < 1 || at == len(text)-1 {
		return 0, fmt.Errorf("stress %q; expected ELEMENT=quantity, such as D1=peak-reverse-voltage", text)
	}
	element, q := text[:at], text[at+1:]
	var elements, quantities []string
	for k := range s.Stresses {
		b := &s.Stresses[k].Bound
		if n := len(elements); n == 0 || elements[n-1] != b.Element {
			elements = append(elements, b.Element)
		}
		if !strings.EqualFold(b.Element, element) {
			continue
		}
		if strings.EqualFold(string(b.Quantity), q) {
			return k, nil
		}
		quantities = append(quantities, string(b.Quantity))
	}
	if quantities == nil {
		return 0, fmt.Errorf("stress %q: no element or node with steady stresses is named %q%s", text, element, meant(element, elements))
	}
	return 0, fmt.Errorf("stress %q: %s has no steady %q%s; it has %s", text, element, q, meant(q, quantities), strings.Join(quantities, ", "))
}

// meant asks whether a near word was meant.
func meant(word string, known []string) string {
	if near, ok := syntax.Nearest(word, known); ok {
		return "; did you mean " + near + "?"
	}
	return ""
}
