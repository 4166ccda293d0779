package report

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"railproof/checks"
	"railproof/netlist/quantity"
)

// waveDrawing is the curve of a finding with its limit and rating, in units of the drawing.
type waveDrawing struct {
	Width, Height     int
	Class, Words      string
	Caption           string
	Grid, Axis, Curve string
	Lines             []waveLine
	Lead              string // from the worst point to the line it is held against
	X, Y              string // of the worst point
	Texts             []drawnText
}

type waveLine struct{ Class, Path string }

// Sizes of the drawing.
const (
	waveWidth, waveHeight   = 640, 190
	waveLeft, waveRight     = 52, 128 // room for the numbers of the axis and the names of the lines
	waveTop, waveBottom     = 18, 34
	waveColumns             = 300
	waveLabelGap            = 13
	waveReach               = 3 // lines further off than so many times the largest value are only named
	waveMarksX, waveMarksY  = 6, 4
	waveAxisUnit, waveTicks = 14, 15 // of the time below the axis, of the numbers
)

// provenWaves draws the headline checks that are proven, parts that agree together.
func provenWaves(f *File) []*waveDrawing {
	var list []*waveDrawing
	for _, x := range fold(f.Findings) {
		if x.Verdict != checks.Proven {
			continue
		}
		if d := drawWave(&x); d != nil {
			d.Caption = d.Words
			if len(x.Elements) > 1 {
				d.Caption = printable(x.Name()) + ", " + d.Words
			}
			list = append(list, d)
		}
	}
	return list
}

// waveScale turns times and values into places of the drawing.
type waveScale struct{ from, to, low, high float64 }

func (s waveScale) x(t float64) float64 {
	return waveLeft + (t-s.from)/(s.to-s.from)*(waveWidth-waveLeft-waveRight)
}

func (s waveScale) y(v float64) float64 {
	return waveHeight - waveBottom - (v-s.low)/(s.high-s.low)*(waveHeight-waveTop-waveBottom)
}

// drawWave draws the curve of a finding, nil if it has none.
func drawWave(f *Folded) *waveDrawing {
	w := f.Wave
	if w == nil || len(w.Times) < 2 {
		return nil
	}
	curve := thin(w.Times, w.Values, waveColumns)
	low, high := spanOf(curve)
	low, high = math.Min(low, w.Worst.Value), math.Max(high, w.Worst.Value)
	largest := math.Max(math.Abs(low), math.Abs(high))
	var drawn, off []checks.WaveLine
	for _, l := range w.Lines {
		if math.Abs(l.Value) > waveReach*largest {
			off = append(off, l)
			continue
		}
		drawn = append(drawn, l)
	}
	for _, l := range drawn {
		low, high = math.Min(low, l.Value), math.Max(high, l.Value)
	}
	s := waveScale{from: w.Times[0], to: w.Times[len(w.Times)-1]}
	s.low, s.high = roomFor(low, high)
	d := &waveDrawing{Width: waveWidth, Height: waveHeight, Class: classOf(&f.Finding), Words: waveWords(f)}
	d.Caption = printable(w.Title + ", " + figure(w.Worst.Value, w.Unit) + " at " + figure(w.Worst.Time, quantity.Second))
	d.axes(s, w.Unit)
	var b strings.Builder
	for k, p := range curve {
		fmt.Fprintf(&b, "%s%s %s", [2]string{"M", "L"}[min(k, 1)], tenth(s.x(p.Time)), tenth(s.y(p.Value)))
	}
	d.Curve = b.String()
	d.levels(s, w, drawn, off)
	d.X, d.Y = tenth(s.x(w.Worst.Time)), tenth(s.y(w.Worst.Value))
	return d
}

// waveWords says what is drawn: "reverse voltage of D1: 26.7 V, high line, light load, 15.1 ms into the cycle".
func waveWords(f *Folded) string {
	words := f.Wave.Title + ": " + figure(f.Wave.Worst.Value, f.Wave.Unit)
	if f.Stress != nil {
		words = joinWith(words, whenWords(f.Stress), ", ")
	}
	return printable(words)
}

// axes draws the grid and its numbers.
func (d *waveDrawing) axes(s waveScale, unit quantity.Unit) {
	const right, bottom = waveWidth - waveRight, waveHeight - waveBottom
	factor, prefixed := axisUnit(math.Max(math.Abs(s.low), math.Abs(s.high)), unit)
	var grid strings.Builder
	for _, m := range roundMarks(s.low*factor, s.high*factor, waveMarksY) {
		y := s.y(m.value / factor)
		fmt.Fprintf(&grid, "M%d %sH%d", waveLeft, tenth(y), right)
		d.text(waveLeft-6, y+4, "tick end", m.label)
	}
	for _, m := range roundMarks(1e3*s.from, 1e3*s.to, waveMarksX) {
		x := s.x(m.value / 1e3)
		fmt.Fprintf(&grid, "M%s %dV%d", tenth(x), waveTop, bottom)
		d.text(x, bottom+waveTicks, "tick mid", m.label)
	}
	d.Grid = grid.String()
	d.Axis = fmt.Sprintf("M%d %dV%dH%d", waveLeft, waveTop, bottom, right)
	d.text(waveLeft-6, waveTop-6, "tick end", prefixed)
	d.text((waveLeft+right)/2, bottom+waveTicks+waveAxisUnit, "tick mid", "ms")
}

// levels draws the lines that the curve must stay on one side of, their names beside them, and the distance of the
// worst point to the first.
func (d *waveDrawing) levels(s waveScale, w *checks.Wave, drawn, off []checks.WaveLine) {
	const right = waveWidth - waveRight
	var taken []float64
	for _, l := range drawn {
		class := "limit"
		if l.Rating {
			class = "rating"
		}
		y := s.y(l.Value)
		d.Lines = append(d.Lines, waveLine{class, fmt.Sprintf("M%d %sH%d", waveLeft, tenth(y), right)})
		at := y + 4
		for _, other := range taken { // a name that would cover another goes to its far side
			if math.Abs(at-other) < waveLabelGap {
				at = other + math.Copysign(waveLabelGap, at-other)
			}
		}
		taken = append(taken, at)
		d.text(right+6, at, "level", l.Name+" "+quantity.Format(l.Value, w.Unit, 4))
	}
	for k, l := range off {
		d.text(right+6, float64(waveTop+4+k*waveLabelGap), "least", l.Name+" "+quantity.Format(l.Value, w.Unit, 4)+" ↑")
	}
	if len(drawn) > 0 {
		d.Lead = fmt.Sprintf("M%s %sV%s", tenth(s.x(w.Worst.Time)), tenth(s.y(w.Worst.Value)), tenth(s.y(drawn[0].Value)))
	}
}

func (d *waveDrawing) text(x, y float64, class, text string) {
	d.Texts = append(d.Texts, drawnText{int(math.Round(x)), int(math.Round(y)), class, printable(text)})
}

// tenth writes a place to a tenth of a unit.
func tenth(v float64) string { return strconv.FormatFloat(math.Round(10*v)/10, 'f', -1, 64) }
