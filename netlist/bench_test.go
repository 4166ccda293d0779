package netlist

import (
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// bigNetlist is a chain of n resistors behind a source, about 25 bytes a line.
func bigNetlist(n int) []byte {
	var b strings.Builder
	b.WriteString("a long chain\nV1 n0 0 SIN(0 17 50)\n")
	for k := range n {
		fmt.Fprintf(&b, "R%d node%d node%d %dk tol=5\n", k, k, k+1, k%999+1)
	}
	return []byte(b.String())
}

// BenchmarkParse reads n element lines; the goal is 100 000 in 1.5 s on two cores, and linear.
func BenchmarkParse(b *testing.B) {
	for _, n := range []int{25_000, 50_000, 100_000} {
		text := bigNetlist(n)
		b.Run(fmt.Sprint(n), func(b *testing.B) {
			b.SetBytes(int64(len(text)))
			for b.Loop() {
				c, _, faults := Parse("chain.cir", text, nil, nil)
				if len(faults) > 0 || len(c.Elements) != n+1 {
					b.Fatal(faults)
				}
			}
		})
	}
}

// BenchmarkLibrary reads a netlist that uses one model of a library of 5 MB; the goal is at most 100 ms more than
// the netlist alone.
func BenchmarkLibrary(b *testing.B) {
	dir := b.TempDir()
	var lib strings.Builder
	for k := 0; lib.Len() < 5<<20; k++ {
		fmt.Fprintf(&lib, ".model QX%d NPN(IS=1e-14 BF=%d VAF=100 RB=10 CJE=1p TF=1n\n+ XTB=1.5 CJC=2p VJE=0.7 MJE=0.33)\n", k, 50+k%300)
	}
	if err := os.WriteFile(filepath.Join(dir, "parts.lib"), []byte(lib.String()), 0o644); err != nil {
		b.Fatal(err)
	}
	for _, library := range []bool{false, true} {
		text := "one transistor\nV1 a 0 12\nR1 a b 1k\nQ1 a b c QX12345\nR2 c 0 1k\n"
		name := "without"
		if library {
			text += ".lib parts.lib\n"
			name = "with"
		}
		file := filepath.Join(dir, name+".cir")
		if err := os.WriteFile(file, []byte(text), 0o644); err != nil {
			b.Fatal(err)
		}
		b.Run(name, func(b *testing.B) {
			for b.Loop() {
				if _, _, faults, err := Read(Source{File: file}); err != nil || len(faults) > 0 {
					b.Fatal(err, faults)
				}
			}
		})
	}
}
