package solver

import (
	"context"
	"fmt"
	"testing"
)

// supplies puts n bridges with reservoir and load into one network, each between two windings of its own.
func supplies(n int) *Network {
	net := New(1 + 4*n)
	net.Period = 1 / lineFrequency
	for k := range n {
		at := func(j int) Node { return Node(1 + 4*k + j) }
		net.AddVoltageSource(at(0), at(1), line(crest, 0))
		net.AddResistor(at(0), at(2), 0.5)
		net.AddDiode(at(2), at(3), silicon)
		net.AddDiode(at(1), at(3), silicon)
		net.AddDiode(0, at(2), silicon)
		net.AddDiode(0, at(1), silicon)
		net.AddCapacitor(at(3), 0, 2200e-6, 0)
		net.AddResistor(at(3), 0, 100)
	}
	return net
}

// ladder is one island of n RC sections behind a bridge, each with a diode to the next: a large island.
func ladder(sections int) *Network {
	net := New(5)
	net.Period = 1 / lineFrequency
	net.AddVoltageSource(1, 2, line(crest, 0))
	net.AddResistor(1, 3, 0.5)
	for _, d := range [][2]Node{{3, 4}, {2, 4}, {0, 3}, {0, 2}} {
		net.AddDiode(d[0], d[1], silicon)
	}
	net.AddCapacitor(4, 0, 1000e-6, 0)
	last := Node(4)
	for range sections {
		mid, next := net.AddNode(), net.AddNode()
		net.AddResistor(last, mid, 1)
		net.AddDiode(mid, next, silicon)
		net.AddCapacitor(next, 0, 10e-6, 0)
		net.AddResistor(next, 0, 10e3)
		last = mid
	}
	return net
}

// Islands of a network of n supplies: n of them, each alone.
func TestIslandsOfSupplies(t *testing.T) {
	islands := supplies(5).Islands()
	if len(islands) != 5 {
		t.Fatalf("%d islands, want 5", len(islands))
	}
	for _, is := range islands {
		if is.Network.Devices() != 8 {
			t.Errorf("%d devices in an island, want 8", is.Network.Devices())
		}
	}
}

func BenchmarkSupplies(b *testing.B) {
	for _, n := range []int{1, 4, 16, 64, 256} {
		b.Run(fmt.Sprint(n), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				for _, is := range supplies(n).Islands() {
					if _, err := SteadyState(context.Background(), is.Network, Options{}); err != nil {
						b.Fatal(err)
					}
				}
			}
		})
	}
}

func BenchmarkLadder(b *testing.B) {
	for _, n := range []int{10, 50, 100, 200} {
		b.Run(fmt.Sprint(n), func(b *testing.B) {
			for b.Loop() {
				if _, err := SteadyState(context.Background(), ladder(n), Options{}); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// One time step allocates nothing.
func TestStepAllocatesNothing(t *testing.T) {
	x := bridge(0.5, 2200e-6, 100, silicon)
	sys, err := newSystem(x.net)
	if err != nil {
		t.Fatal(err)
	}
	m, err := newMarch(sys, x.net.Period/256)
	if err != nil {
		t.Fatal(err)
	}
	at := 0.0
	if n := testing.AllocsPerRun(500, func() {
		if err := m.advance(at, true); err != nil {
			t.Fatal(err)
		}
		at += m.step
	}); n != 0 {
		t.Errorf("%g allocations a step", n)
	}
}
