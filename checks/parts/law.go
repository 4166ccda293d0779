package parts

import (
	"math"

	"railproof/netlist/quantity"
)

// ThermalVoltage is kT/q at 25 degC, the junction temperature at which makers state VF. Volts.
const ThermalVoltage = 0.025693

// DiodeLaw is a forward characteristic V = N VT ln(1 + I/IS) + I RS at 25 degC, for types whose
// netlist carries no model card. It goes through the published *maximum* of VF, so it is the right
// end for heat and for the lowest output voltage, and the wrong end for surge current: makers of
// these types publish no minimum of VF. See Lower.
type DiodeLaw struct {
	IS float64 // A
	N  float64 // emission coefficient, assumed by kind of diode
	RS float64 // ohm
	// CJO, VJ and M describe the junction capacitance CJO/(1+V/VJ)^M; CJO is 0 where CJ is unknown.
	CJO, VJ, M float64
	Quality    string // how it was found, in words
	Source     string // of the VF it goes through
	Confidence string // of the VF it goes through
}

// Assumed properties of the law.
const (
	emissionSilicon  = 2.0  // rectifiers at high injection
	emissionSignal   = 1.8  // small-signal diodes
	emissionSchottky = 1.05 // metal-semiconductor junctions
	// ohmicDrop is the part of VF at rated current taken as ohmic where only one point is known. It is
	// that of the 1N4001 sheet S03, which prints 1.0 V at 1 A and 1.3 V at 3 A:
	// (0.3 V - 2 VT ln 3)/2 A = 0.1218 ohm at 1 A.
	ohmicDrop = 0.1218
	// leastRatio of the currents of two points that still tell ohmic and junction drop apart.
	leastRatio = 2.0
)

// Voltage is the forward voltage at a forward current i >= 0.
func (d DiodeLaw) Voltage(i float64) float64 {
	return d.N*ThermalVoltage*math.Log1p(i/d.IS) + i*d.RS
}

// Lower is the companion for surge current: the junction alone, its ohmic part taken as nil. At every
// current it drops less than the law itself, and at surge currents less than a real part. It is an
// assumption on the safe side, not a published minimum.
func (d DiodeLaw) Lower() DiodeLaw {
	d.RS = 0
	d.Quality = "junction drop alone, ohmic part taken as nil: an assumption, no minimum of VF is published"
	return d
}

// lawOf derives the law from the VF of a row, nil where the row has none.
//
// Two points (V1, I1), (V2, I2) of one limit give RS = (V2 - V1 - N VT ln(I2/I1))/(I2 - I1); with one
// point RS = ohmicDrop/I1 is assumed. IS follows from the first point.
func lawOf(r *Row) *DiodeLaw {
	v, ok := r.Value(VF)
	i, ok2 := r.Value(IVF)
	if !ok || !ok2 || i.Number <= 0 || v.Number <= 0 {
		return nil
	}
	d := &DiodeLaw{N: emissionSilicon, VJ: 0.7, M: 0.4, Source: v.Source, Confidence: v.Confidence}
	reference := i.Number // the current that stands for the size of the die
	switch r.Kind {
	case "signal":
		d.N = emissionSignal
		if rated, ok := r.Value(IFAV); ok && rated.Number > reference {
			reference = rated.Number
		}
	case "schottky":
		d.N, d.VJ, d.M = emissionSchottky, 0.5, 0.5
	}
	d.RS = ohmicDrop / reference
	d.Quality = "one point of the maximum of VF, ohmic part assumed"
	v2, ok := r.Value(VF2)
	i2, ok2 := r.Value(IVF2)
	if ok && ok2 && math.Max(i2.Number/i.Number, i.Number/i2.Number) >= leastRatio {
		rs := (v2.Number - v.Number - d.N*ThermalVoltage*math.Log(i2.Number/i.Number)) / (i2.Number - i.Number)
		if rs >= 0 {
			d.RS = rs
			d.Quality = "two points of the maximum of VF"
			if v2.Source != v.Source {
				d.Quality += ", of two sheets"
			}
			if v2.Confidence == Memory {
				d.Confidence = Memory
			}
		}
	}
	if v.Number > 1.5 {
		d.Quality += "; high drop: the slope above the stated current is too low"
	}
	d.IS = i.Number / math.Expm1((v.Number-i.Number*d.RS)/(d.N*ThermalVoltage))
	if !(d.IS > 0) || math.IsInf(d.IS, 0) {
		return nil
	}
	if c, ok := r.Value(CJ); ok && c.Unit == quantity.Farad {
		at, _ := r.Value(VCJ)
		d.CJO = c.Number * math.Pow(1+at.Number/d.VJ, d.M)
	}
	return d
}
