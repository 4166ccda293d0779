package solver

import (
	"context"
	"testing"
)

// One condition of bridge, reservoir and load, to the default tolerances.
func BenchmarkBridge(b *testing.B) {
	x := bridge(0.5, 2200e-6, 100, silicon)
	for b.Loop() {
		if _, err := SteadyState(context.Background(), x.net, Options{}); err != nil {
			b.Fatal(err)
		}
	}
}
