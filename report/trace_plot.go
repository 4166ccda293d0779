package report

import (
	"fmt"
	"image/color"
	"io"
	"math"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/font"
	"gonum.org/v1/plot/plotter"
	"gonum.org/v1/plot/text"
	"gonum.org/v1/plot/vg"
	"gonum.org/v1/plot/vg/draw"
	"gonum.org/v1/plot/vg/vgimg"
	"gonum.org/v1/plot/vg/vgsvg"

	"railproof/checks/study"
	"railproof/netlist/quantity"
)

// Sizes of the drawing.
const (
	plotWidth    = 19 * vg.Centimeter // fits A4 upright
	panelHeight  = 7.5 * vg.Centimeter
	plotMargin   = 4 * vg.Millimeter
	plotLine     = 13 // pt from one line of the head to the next
	plotColumns  = 1200
	plotDPI      = 144
	plotLetters  = 100 // of a line of the head
	titleLetters = 80  // of its first
)

// Inks dark enough for paper; a dash pattern goes with each, so that curves can be told apart without colour.
var (
	inks = []color.Color{
		color.RGBA{0x1d, 0x4e, 0x89, 0xff}, color.RGBA{0xa8, 0x32, 0x1e, 0xff}, color.RGBA{0x2a, 0x6b, 0x34, 0xff},
		color.RGBA{0x6a, 0x3e, 0xa1, 0xff}, color.RGBA{0x8a, 0x5a, 0x00, 0xff}, color.RGBA{0x0b, 0x64, 0x70, 0xff},
	}
	dashes  = [][]vg.Length{nil, {7, 2}, {2, 1.5}, {9, 2, 2, 2}}
	inkText = color.RGBA{0x1d, 0x22, 0x26, 0xff}
	inkSoft = color.RGBA{0x5b, 0x63, 0x69, 0xff}
	inkRule = color.RGBA{0xd9, 0xd5, 0xc8, 0xff}
)

// maxCurves is how many curves a drawing can tell apart.
const maxCurves = 12

func inkOf(k int) draw.LineStyle {
	return draw.LineStyle{Color: inks[k%len(inks)], Width: vg.Points(1.1), Dashes: dashes[k%len(dashes)]}
}

func plain(size vg.Length, c color.Color) text.Style {
	return text.Style{
		Color: c, Font: font.From(font.Font{Typeface: "Liberation", Variant: "Sans"}, size),
		YAlign: text.YTop, Handler: plot.DefaultTextHandler,
	}
}

// WriteSVG draws the waveforms as SVG.
func (t *TraceSheet) WriteSVG(w io.Writer) error {
	height, err := t.height()
	if err != nil {
		return err
	}
	c := vgsvg.New(plotWidth, height)
	t.draw(draw.New(c))
	_, err = c.WriteTo(w)
	return err
}

// WritePNG draws the waveforms as PNG.
func (t *TraceSheet) WritePNG(w io.Writer) error {
	height, err := t.height()
	if err != nil {
		return err
	}
	c := vgimg.PngCanvas{Canvas: vgimg.NewWith(vgimg.UseWH(plotWidth, height), vgimg.UseDPI(plotDPI))}
	t.draw(draw.New(c))
	_, err = c.WriteTo(w)
	return err
}

// panel is the curves of one unit.
type panel struct {
	unit   quantity.Unit
	curves []int // of the waveforms
}

func (t *TraceSheet) panels() []panel {
	var list []panel
	for _, unit := range []quantity.Unit{quantity.Volt, quantity.Ampere} {
		p := panel{unit: unit}
		for k := range t.Trace.Waveforms {
			if w := &t.Trace.Waveforms[k]; w.Unit == unit && w.Values != nil {
				p.curves = append(p.curves, k)
			}
		}
		if len(p.curves) > 0 {
			list = append(list, p)
		}
	}
	return list
}

// head is the lines above the panels, less those of the curves.
func (t *TraceSheet) head() []string {
	lines := []string{clip(joinWith(t.File, t.Title, "   "), titleLetters)}
	for _, text := range nonEmpty([]string{t.when(), t.worst()}) {
		lines = append(lines, wrap(text, plotLetters)...)
	}
	return lines
}

func (t *TraceSheet) height() (vg.Length, error) {
	n, panels := 0, t.panels()
	for _, p := range panels {
		n += len(p.curves)
	}
	if n > maxCurves {
		return 0, fmt.Errorf("%d waveforms in one drawing cannot be told apart; expected at most %d, or the format csv", n, maxCurves)
	}
	return 2*plotMargin + vg.Length(len(panels))*panelHeight + vg.Points(plotLine*float64(len(t.head())+n)+10), nil
}

// draw draws the head, a line for each curve, and a panel for voltages and one for currents over one time axis.
func (t *TraceSheet) draw(c draw.Canvas) {
	c.SetColor(color.White)
	c.Fill(c.Rectangle.Path())
	c = draw.Crop(c, plotMargin, -plotMargin, plotMargin, -plotMargin)
	y := c.Max.Y
	for k, line := range t.head() {
		style := plain(9, inkSoft)
		if k == 0 {
			style = plain(11, inkText)
		}
		c.FillText(style, vg.Point{X: c.Min.X, Y: y}, line)
		y -= plotLine + 2 - vg.Length(min(k, 1)*2)
	}
	panels := t.panels()
	var plots [][]*plot.Plot
	for _, p := range panels {
		for _, k := range p.curves {
			w := &t.Trace.Waveforms[k]
			middle := y - plotLine*0.42
			c.StrokeLine2(inkOf(k), c.Min.X, middle, c.Min.X+30, middle)
			c.FillText(plain(9, inkText), vg.Point{X: c.Min.X + 36, Y: y}, clip(signalName(w)+"   "+extremeWords(w), plotLetters))
			y -= plotLine
		}
		plots = append(plots, []*plot.Plot{t.panel(p, len(plots)+1 == len(panels))})
	}
	if len(plots) == 0 {
		return
	}
	c.Max.Y = y - 4
	tiles := draw.Tiles{Rows: len(plots), Cols: 1, PadY: 3 * vg.Millimeter}
	for k, row := range plot.Align(plots, tiles, c) {
		plots[k][0].Draw(row[0])
	}
}

// panel plots the curves of one unit, their highest points as dots, their lowest as rings.
func (t *TraceSheet) panel(p panel, bottom bool) *plot.Plot {
	pl := plot.New()
	pl.BackgroundColor = nil
	curves := make([][]study.Instant, len(p.curves))
	largest := 0.0
	for j, k := range p.curves {
		w := &t.Trace.Waveforms[k]
		curves[j] = thin(t.Trace.Times, w.Values, plotColumns)
		largest = math.Max(largest, math.Max(math.Abs(w.Max.Value), math.Abs(w.Min.Value)))
	}
	factor, unit := axisUnit(largest, p.unit)
	grid := plotter.NewGrid()
	grid.Horizontal = draw.LineStyle{Color: inkRule, Width: 0.5}
	grid.Vertical = grid.Horizontal
	pl.Add(grid)
	for j, k := range p.curves {
		line := &plotter.Line{LineStyle: inkOf(k)}
		for _, q := range curves[j] {
			line.XYs = append(line.XYs, plotter.XY{X: 1e3 * q.Time, Y: q.Value * factor})
		}
		pl.Add(line)
	}
	for _, k := range p.curves {
		w := &t.Trace.Waveforms[k]
		pl.Add(mark(w.Max, factor, k, draw.CircleGlyph{}), mark(w.Min, factor, k, draw.RingGlyph{}))
	}
	low, high := roomFor(spanOf(curves...))
	pl.Y.Min, pl.Y.Max = low*factor, high*factor
	pl.X.Min, pl.X.Max = 1e3*t.Trace.Times[0], 1e3*t.Trace.Times[len(t.Trace.Times)-1]
	pl.Y.Label.Text = p.word() + " / " + unit
	if bottom {
		pl.X.Label.Text = "time into the cycle / ms"
		if t.Trace.Condition.Start == "cold" {
			pl.X.Label.Text = "time after switch-on / ms"
		}
	}
	for _, axis := range []*plot.Axis{&pl.X, &pl.Y} {
		axis.Label.TextStyle.Font, axis.Label.TextStyle.Color = plain(9, inkText).Font, inkText
		axis.Tick.Label.Font, axis.Tick.Label.Color = plain(8, inkText).Font, inkText
		axis.LineStyle.Color, axis.Tick.LineStyle.Color = inkSoft, inkSoft
		axis.Padding = 2
		axis.Tick.Marker = roundTicks{}
	}
	return pl
}

// roundTicks marks an axis at about six round numbers.
type roundTicks struct{}

// Ticks returns the marks between two values, each with its number.
func (roundTicks) Ticks(low, high float64) []plot.Tick {
	var list []plot.Tick
	for _, v := range roundMarks(low, high, 6) {
		list = append(list, plot.Tick{Value: v.value, Label: v.label})
	}
	return list
}

func (p panel) word() string {
	if p.unit == quantity.Volt {
		return "voltage"
	}
	return "current"
}

func mark(at study.Instant, factor float64, k int, shape draw.GlyphDrawer) *plotter.Scatter {
	return &plotter.Scatter{
		XYs:        plotter.XYs{{X: 1e3 * at.Time, Y: at.Value * factor}},
		GlyphStyle: draw.GlyphStyle{Color: inks[k%len(inks)], Radius: vg.Points(2.6), Shape: shape},
	}
}

// axisUnit chooses the prefix in which the largest value of an axis is written, and the factor that goes with it.
func axisUnit(largest float64, unit quantity.Unit) (factor float64, text string) {
	switch {
	case largest >= 2000:
		return 1e-3, "k" + unit.String()
	case largest >= 0.5 || largest < 1e-12:
		return 1, unit.String()
	case largest >= 0.5e-3:
		return 1e3, "m" + unit.String()
	}
	return 1e6, "µ" + unit.String()
}
