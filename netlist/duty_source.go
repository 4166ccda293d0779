package netlist

import (
	"math"
	"strconv"

	"railproof/netlist/quantity"
	"railproof/netlist/syntax"
)

// amplitudeTolerance is how far the crest of a source that is the line may be from its nominal voltage
// times the square root of two: as much as rounding 325.27 V to 325 V or 1.414 needs, with room.
const amplitudeTolerance = 0.01

// Default range of the line about its nominal voltage where none is stated: common practice, and the
// tolerance of IEC 60038 at the supply terminals.
const (
	defaultLineLow  = -0.10
	defaultLineHigh = +0.10
)

// sine finds the waveform of a sinusoidal voltage source.
func (in *interpreter) sine(name syntax.Name) (id ElementID, wave Sine, ok bool) {
	id, ok = in.circuit.Find(name.Text())
	if !ok {
		in.absent(name.At(), "no element "+strconv.Quote(name.Text()), in.circuit.nearestElement(name.Text()))
		return -1, Sine{}, false
	}
	if source, isSource := in.circuit.Elements[id].Device.(VoltageSource); isSource {
		if wave, ok = source.Wave.(Sine); ok && wave.Amplitude != 0 {
			return id, wave, true
		}
	}
	in.unfit(name.At(), in.name(id)+" is no sinusoidal voltage source", "a source drawn with SIN(offset amplitude frequency)")
	return -1, Sine{}, false
}

func (in *interpreter) line(s *syntax.LineStatement) {
	line := Line{Source: -1, At: s.Place(), shared: in.shared()}
	nominal, ok := in.positive(s.Nominal.Raw, s.Nominal.At(), quantity.Volt)
	if !ok {
		return
	}
	line.Nominal = nominal
	if line.Range, ok = in.lineRange(s, nominal); !ok {
		return
	}
	if s.Frequency != nil {
		if line.Frequency, ok = in.positive(s.Frequency.Raw, s.Frequency.At(), quantity.Hertz); !ok {
			return
		}
	}
	key := "line"
	if s.Source != nil {
		var wave Sine
		if line.Source, wave, ok = in.sine(*s.Source); !ok || !in.lineFits(s, line, wave) {
			return
		}
		key += " " + in.name(line.Source)
	}
	if s.Range == nil {
		in.remark(s.Place(), "line range not stated: -10 %..+10 % (common practice, IEC 60038)")
	}
	value := quantity.Value{Number: nominal, Unit: quantity.Volt}.Compact() + " " + line.Range.Compact()
	if s.Frequency != nil {
		value += " " + s.Frequency.Raw
	}
	in.state(key, value, true, func(d *Duty) { d.Lines = append(d.Lines, line) })
}

// lineRange reads the range of the line in V rms, absolute or in per cent of the nominal voltage.
func (in *interpreter) lineRange(s *syntax.LineStatement, nominal float64) (quantity.Interval, bool) {
	about := func(low, high float64) quantity.Interval {
		return quantity.Interval{Low: tidy(nominal * (1 + low)), High: tidy(nominal * (1 + high)), Unit: quantity.Volt}
	}
	if s.Range == nil {
		return about(defaultLineLow, defaultLineHigh), true
	}
	if p, err := quantity.ParseInterval(s.Range.Raw, quantity.One); err == nil {
		if p.Low <= -1 || p.Low > 0 || p.High < 0 {
			in.fault(s.Range.At(), strconv.Quote(s.Range.Raw)+" is no range about the nominal voltage", "one such as -10%..+10%")
			return quantity.Interval{}, false
		}
		return about(p.Low, p.High), true
	}
	r, ok := in.interval(s.Range.Raw, s.Range.At(), quantity.Volt)
	if ok && (r.Low <= 0 || r.Low > nominal || r.High < nominal) {
		in.fault(s.Range.At(), strconv.Quote(s.Range.Raw)+" does not contain the nominal voltage "+s.Nominal.Raw, "a range such as 207V..253V about 230V")
		return r, false
	}
	return r, ok
}

// lineFits checks that a source which is the line is drawn with the line's crest and frequency.
func (in *interpreter) lineFits(s *syntax.LineStatement, line Line, wave Sine) bool {
	crest := line.Nominal * math.Sqrt2
	drawn := math.Abs(wave.Amplitude)
	name := in.name(line.Source)
	volts := func(v float64) string { return quantity.Format(v, quantity.Volt, 4) }
	if math.Abs(drawn-crest) > amplitudeTolerance*crest {
		in.unfit(s.Nominal.At(), name+" is drawn with an amplitude of "+volts(drawn)+", which is "+volts(drawn/math.Sqrt2)+" rms",
			"the amplitude "+volts(crest)+" for "+s.Nominal.Raw+" rms, within 1 %; or a `winding "+name+"` statement")
		return false
	}
	if line.Frequency > 0 && wave.Frequency > 0 && math.Abs(line.Frequency-wave.Frequency) > amplitudeTolerance*wave.Frequency {
		in.unfit(s.Frequency.At(), name+" is drawn at "+quantity.Format(wave.Frequency, quantity.Hertz, 4), "the same frequency as drawn")
		return false
	}
	return true
}

// tidy rounds a product of figures that were written to twelve digits: 253 V, not 253.00000000000003 V.
func tidy(v float64) float64 {
	rounded, err := strconv.ParseFloat(strconv.FormatFloat(v, 'g', 12, 64), 64)
	if err != nil {
		return v
	}
	return rounded
}

func (in *interpreter) winding(s *syntax.WindingStatement) {
	if s.AsDrawn {
		id, _, ok := in.sine(s.Source)
		if !ok {
			return
		}
		in.state("winding "+in.name(id), "as-drawn", true, func(d *Duty) {
			d.Windings = append(d.Windings, Winding{Source: id, AsDrawn: true, At: s.Place()})
		})
		return
	}
	w := Winding{At: s.Place()}
	var ok bool
	if w.Voltage, ok = in.positive(s.Voltage.Raw, s.Voltage.At(), quantity.Volt); !ok {
		return
	}
	// The rated current, or the rated power that it follows from.
	if unit, _ := quantity.UnitOf(s.Current.Raw); unit == quantity.VoltAmpere {
		power, ok := in.positive(s.Current.Raw, s.Current.At(), quantity.VoltAmpere)
		if !ok {
			return
		}
		w.Current = power / w.Voltage
	} else if w.Current, ok = in.positive(s.Current.Raw, s.Current.At(), quantity.Ampere); !ok {
		return
	}
	settings, ok := in.onlySettings(s.Settings, "regulation")
	if !ok {
		return
	}
	regulation, stated := settings["regulation"]
	if !stated {
		in.fault(s.Place(), "the winding's regulation is missing", "regulation=12%: (V no load - V full load)/V full load")
		return
	}
	r, ok := in.value(regulation.Text(), regulation.At(), quantity.One)
	if !ok {
		return
	}
	if r < 0 || r > 2 {
		in.fault(regulation.At(), regulation.Text()+" is no regulation of a transformer", "between 0% and 200%, such as 12%")
		return
	}
	w.Regulation = r
	id, wave, ok := in.sine(s.Source)
	if !ok {
		return
	}
	w.Source = id
	emf := w.Voltage * (1 + r) * math.Sqrt2
	if drawn := math.Abs(wave.Amplitude); math.Abs(drawn-emf) > amplitudeTolerance*emf {
		in.remark(s.Place(), in.name(id)+" is drawn with a crest of "+quantity.Format(drawn, quantity.Volt, 4)+"; its winding statement gives "+
			quantity.Format(emf, quantity.Volt, 4)+" off load, which counts")
	}
	value := s.Voltage.Raw + " " + s.Current.Raw + " regulation=" + regulation.Text()
	in.state("winding "+in.name(id), value, true, func(d *Duty) { d.Windings = append(d.Windings, w) })
}

// crossCheck finds statements that cannot both hold, and statements about nothing.
func (in *interpreter) crossCheck() {
	for _, w := range in.duty.Windings {
		for _, l := range in.duty.Lines {
			if l.Source == w.Source {
				in.fault(w.At, in.name(w.Source)+" is stated as the line ("+l.At.String()+") and as a winding", "one of the two")
			}
		}
	}
	sines, fits := 0, 0
	for i := range in.circuit.Elements {
		source, ok := in.circuit.Elements[i].Device.(VoltageSource)
		if !ok {
			continue
		}
		wave, ok := source.Wave.(Sine)
		if !ok {
			continue
		}
		sines++
		for _, l := range in.duty.Lines {
			if l.Frequency == 0 || wave.Frequency == 0 || math.Abs(l.Frequency-wave.Frequency) <= amplitudeTolerance*wave.Frequency {
				fits++
				break
			}
		}
	}
	for _, l := range in.duty.Lines {
		switch {
		case sines == 0 && l.shared:
		case sines == 0:
			in.remark(l.At, "unused: the netlist has no sinusoidal source that the line could drive")
		case fits == 0:
			in.remark(l.At, "the line is stated at "+quantity.Format(l.Frequency, quantity.Hertz, 4)+
				", and no source is drawn at that frequency: the drawn frequency counts")
		}
	}
}
