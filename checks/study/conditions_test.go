package study

import (
	"fmt"
	"os"
	"strings"
	"testing"
)

// The document states the defaults that the code uses.
func TestConditionsDocument(t *testing.T) {
	text, err := os.ReadFile("CONDITIONS.md")
	if err != nil {
		t.Fatal(err)
	}
	both := func(x float64) string { return fmt.Sprintf("-%g %%..+%g %%", 100*x, 100*x) }
	for name, want := range map[string]string{
		"resistor": both(resistorTolerance), "capacitor from 10 uF": both(electrolyticTolerance), "choke": both(chokeTolerance),
		"zener voltage": both(zenerTolerance), "forward voltage": both(forwardTolerance), "line frequency": both(frequencyTolerance),
		"current gain":                   fmt.Sprintf("-%g %%..+%g %%", 100*gainLow, 100*gainHigh),
		"resistance of a stated winding": fmt.Sprintf("-%g %%..+%g %%", 100*coldCopper, 100*hotCopper),
	} {
		found := false
		for _, line := range strings.Split(string(text), "\n") {
			found = found || strings.HasPrefix(line, "| "+name) && strings.Contains(line, want)
		}
		if !found {
			t.Errorf("no row for %s with %s", name, want)
		}
	}
	for _, want := range []string{fmt.Sprintf("aged by a further -%g %%", 100*agedCapacitance), fmt.Sprintf("-%g %%..0 of the maximum", 100*forwardBelowLimit), fmt.Sprintf("to %g %%, until", 100*additive)} {
		if !strings.Contains(string(text), want) {
			t.Errorf("%q is missing", want)
		}
	}
}
