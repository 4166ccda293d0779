package report

import (
	"io"
	"testing"
)

// Whatever stands in the files that are compared, the outcome is a comparison or an error.
func FuzzCompareReports(f *testing.F) {
	good := []byte(`{"schema":"railproof-report/1","files":[{"file":"a","findings":[{"check":"capacitor-voltage","headline":true,"element":"C1","verdict":"violated","severity":"critical","stress":{"value":41},"limit":{"value":40},"margin":-0.1,"at":{"file":"a","line":3},"fingerprint":"x"}]}]}`)
	f.Add(good, good)
	f.Add(good, []byte(`{"schema":"railproof-report/1"}`))
	f.Add([]byte(`{"schema":"railproof-report/1","files":[{"findings":[{"verdict":"violated","margin":null},{"verdict":"violated","at":{"line":1}},{"verdict":"violated","element":"D1","at":{"line":2}}]}]}`), good)
	f.Add([]byte(`{"schema":"railproof-report/1","files":[{},{"file":"a"},{"file":"b/a"}]}`), []byte(`{"schema":"railproof-report/1","files":[{"file":"c/a","findings":[{"verdict":"unproven","headline":true}]}]}`))
	gate, err := ParseGate(DefaultGate)
	if err != nil {
		f.Fatal(err)
	}
	f.Fuzz(func(t *testing.T, before, after []byte) {
		c, err := CompareReports("old.json", before, "new.json", after, gate, false)
		if err != nil {
			return
		}
		for _, name := range ComparisonFormats() {
			if err := c.Write(io.Discard, name, Style{}); err != nil {
				t.Error(err)
			}
		}
		if c.Exit == ExitPassed && c.Gated.Critical+c.Gated.HeadlineUnproven > 0 {
			t.Errorf("passed with %+v", c.Gated)
		}
	})
}
