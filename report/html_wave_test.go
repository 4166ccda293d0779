package report

import (
	"math"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"railproof/checks"
	"railproof/checks/study"
	"railproof/netlist/quantity"
)

// reverseWave is a sine of 41.8 V with a limit of 40 V and a rating of 50 V; its crest is one sample of many.
func reverseWave(title string) *checks.Wave {
	w := &checks.Wave{Title: title, Unit: quantity.Volt, Worst: study.Instant{Time: 0.015, Value: 41.8},
		Lines: []checks.WaveLine{{Name: "limit", Value: 40}, {Name: "VRRM", Value: 50, Rating: true}}}
	for k := range 4001 {
		at := 0.04 * float64(k) / 4000
		w.Times, w.Values = append(w.Times, at), append(w.Values, -30*math.Sin(2*math.Pi*50*at))
	}
	w.Values[1500] = 41.8
	return w
}

// wavedReport is the report of the bench with curves.
func wavedReport(t testing.TB) *Report {
	r := benchResult(t)
	for k := range 4 {
		r.Findings[k].Wave = reverseWave("reverse voltage of " + r.Findings[k].Element)
	}
	r.Findings[8].Wave = reverseWave("voltage of R1") // proven
	return New([]Input{{File: "bench/supply.cir", Result: r}}, Options{Version: "test", Gate: gateAt(t, "critical"), Now: day})
}

// The scale of a drawing: stress, limit and rating keep their order and distances, and the highest sample is drawn
// though it stands alone.
func TestWaveScale(t *testing.T) {
	r := wavedReport(t)
	f := fold(r.Files[0].Findings)
	var d *waveDrawing
	for k := range f {
		if f[k].Check == "diode-reverse-voltage" {
			d = drawWave(&f[k])
		}
	}
	if d == nil || len(d.Lines) != 2 || d.Lines[0].Class != "limit" || d.Lines[1].Class != "rating" {
		t.Fatalf("%+v", d)
	}
	height := func(path string) float64 {
		m := regexp.MustCompile(`^M\d+ ([\d.]+)H`).FindStringSubmatch(path)
		v, err := strconv.ParseFloat(m[1], 64)
		if err != nil {
			t.Fatal(err)
		}
		return v
	}
	limit, rating := height(d.Lines[0].Path), height(d.Lines[1].Path)
	worst, _ := strconv.ParseFloat(d.Y, 64)
	// 41.8 V is 0.18 of the way from 40 V to 50 V.
	if share := (limit - worst) / (limit - rating); math.Abs(share-0.18) > 0.01 {
		t.Errorf("the worst point is %g of the way from limit to rating", share)
	}
	highest := math.Inf(1)
	for _, m := range regexp.MustCompile(`[ML][\d.]+ ([\d.]+)`).FindAllStringSubmatch(d.Curve, -1) {
		y, _ := strconv.ParseFloat(m[1], 64)
		highest = math.Min(highest, y)
	}
	if math.Abs(highest-worst) > 0.11 {
		t.Errorf("the curve reaches %g, its worst point is at %g", highest, worst)
	}
	if n := strings.Count(d.Curve, "L"); n > 4*waveColumns {
		t.Errorf("%d points", n)
	}
}

// A limit far above the curve is named, not drawn, so that the curve keeps its shape.
func TestWaveWithAFarLimit(t *testing.T) {
	w := reverseWave("reverse voltage of D1")
	w.Lines = []checks.WaveLine{{Name: "limit", Value: 800}}
	d := drawWave(&Folded{Finding: Finding{Finding: checks.Finding{Wave: w}}})
	named := false
	for _, text := range d.Texts {
		named = named || text.Text == "limit 800 V ↑"
	}
	if len(d.Lines) != 0 || !named {
		t.Errorf("%d lines drawn, named: %v", len(d.Lines), named)
	}
}

// In the browser there is one drawing for a bridge, one for what is proven, none for the rest; under the policy.
func TestHTMLWavesInABrowser(t *testing.T) {
	page := written(t, wavedReport(t), "html", Style{})
	if strings.Contains(string(page), "style=") {
		t.Error("a drawing carries a style of its own")
	}
	document, console := chromium(t, page, "1280")
	if console != "" {
		t.Errorf("the console is not silent:\n%s", console)
	}
	if n := strings.Count(document, `<figure class="wave `); n != 2 {
		t.Errorf("%d drawings, want 2", n)
	}
	if !strings.Contains(document, "VRRM 50 V") || !strings.Contains(document, "limit 40 V") {
		t.Error("a line is not named")
	}
	if none := written(t, benchReport(t), "html", Style{}); strings.Contains(string(none), `class="wave `) {
		t.Error("a drawing without a curve")
	}
}
