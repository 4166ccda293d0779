package parts

import (
	"math"
	"testing"
)

// The sheet of the 1N4001 (1.1 V at 1 A of one maker, 1.3 V at 3 A of another) by hand:
// RS = (1.3 - 1.1 - 2 x 0.025693 x ln 3)/2 = 0.0718 ohm, IS = 1/exp((1.1 - 0.0718)/0.051386) = 2.04 nA.
// The 1N5817 (0.45 V at 1 A, 0.75 V at 3 A, N 1.05): RS = (0.3 - 1.05 x 0.025693 x ln 3)/2 = 0.1352 ohm,
// IS = exp(-(0.45 - 0.1352)/0.026978) = 8.55 uA.
// One point, the 1N5400 (1.2 V at 3 A): RS = 0.1218 V/3 A = 0.0406 ohm, IS = 3 exp(-(1.2 - 0.1218)/0.051386) = 2.31 nA.
func TestLawByHand(t *testing.T) {
	for _, c := range []struct {
		name   string
		is, rs float64
	}{{"1N4001", 2.04e-9, 0.0718}, {"1N5817", 8.55e-6, 0.1352}, {"1N5400", 2.313e-9, 0.0406}} {
		law := mustFind(t, c.name).Model
		if math.Abs(law.IS/c.is-1) > 0.01 || math.Abs(law.RS/c.rs-1) > 0.01 {
			t.Errorf("%s: IS %g RS %g, want %g and %g", c.name, law.IS, law.RS, c.is, c.rs)
		}
	}
}

// The law of every diode passes through its published VF, and through the second point where that was used.
func TestLawPassesThroughVF(t *testing.T) {
	laws := 0
	for _, row := range Default().Rows() {
		if row.Model == nil {
			continue
		}
		laws++
		v, at := number(t, row.Type, VF), number(t, row.Type, IVF)
		if got := row.Model.Voltage(at); math.Abs(got-v) > 1e-6 {
			t.Errorf("%s: law gives %g V at %g A, sheet %g V", row.Type, got, at, v)
		}
		if row.Model.Quality == "two points of the maximum of VF" {
			v2, at2 := number(t, row.Type, VF2), number(t, row.Type, IVF2)
			if got := row.Model.Voltage(at2); math.Abs(got-v2) > 1e-3 {
				t.Errorf("%s: law gives %g V at %g A, sheet %g V", row.Type, got, at2, v2)
			}
		}
		low := row.Model.Lower()
		for _, i := range []float64{0.01, 0.1, 1, 10, 30} {
			if low.Voltage(i) > row.Model.Voltage(i) {
				t.Errorf("%s: the lower companion drops more at %g A", row.Type, i)
			}
		}
		if low.Quality == row.Model.Quality {
			t.Errorf("%s: the lower companion hides that it is assumed", row.Type)
		}
	}
	if laws < 220 {
		t.Errorf("%d laws, want one for every rectifier and bridge", laws)
	}
}

func TestLawOfMemoryIsMarked(t *testing.T) {
	if law := mustFind(t, "MUR820").Model; law.Confidence != Memory {
		t.Errorf("MUR820: %+v", law)
	}
	if law := mustFind(t, "1N4007").Model; law.Confidence != Seen {
		t.Errorf("1N4007: %+v", law)
	}
}
