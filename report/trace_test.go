package report

import (
	"bytes"
	"encoding/csv"
	"encoding/xml"
	"image/png"
	"io"
	"math"
	"strconv"
	"strings"
	"testing"

	"railproof/checks/study"
	"railproof/netlist/quantity"
)

// spikeSheet is a slow sine of 1 V on which one sample of many stands at 9 V.
func spikeSheet(samples, spike int) *TraceSheet {
	w := study.Waveform{
		Name: "node:out", Signal: study.Signal{IsNode: true, Kind: study.VoltageSignal}, Unit: quantity.Volt,
		Min: study.Instant{Value: -1}, Max: study.Instant{}, // no mark stands where the spike is
	}
	tr := &study.Trace{Condition: study.Condition{Name: "high line, light load", Start: "steady"}, Period: 0.02}
	for k := range samples {
		tr.Times = append(tr.Times, 0.04*float64(k)/float64(samples-1))
		w.Values = append(w.Values, math.Sin(4*math.Pi*float64(k)/float64(samples)))
	}
	w.Values[spike] = 9
	tr.Waveforms = []study.Waveform{w}
	return &TraceSheet{File: "a.cir", Title: "a supply", Trace: tr}
}

// A peak of a single sample survives however few columns a curve is drawn in.
func TestThinKeepsEveryPeak(t *testing.T) {
	tr := spikeSheet(20001, 12345).Trace
	values := tr.Waveforms[0].Values
	values[777] = -7
	for _, columns := range []int{1, 10, 333, 1200, 50000} {
		kept := thin(tr.Times, values, columns)
		low, high := spanOf(kept)
		if low != -7 || high != 9 {
			t.Errorf("in %d columns the curve goes from %g to %g, want -7 to 9", columns, low, high)
		}
		if len(kept) > 4*columns {
			t.Errorf("%d points in %d columns", len(kept), columns)
		}
		for k := 1; k < len(kept); k++ {
			if kept[k].Time <= kept[k-1].Time {
				t.Fatalf("time runs back at point %d", k)
			}
		}
		if kept[0].Time != 0 || kept[len(kept)-1].Time != 0.04 {
			t.Errorf("in %d columns the curve has lost its ends", columns)
		}
	}
	if kept := thin([]float64{0}, []float64{3}, 5); len(kept) != 1 {
		t.Errorf("one sample became %d", len(kept))
	}
}

// The spike reaches the upper part of the drawing, in its own column; without it there is no ink.
func TestPNGShowsASpike(t *testing.T) {
	inked := func(spike float64) int {
		s := spikeSheet(20001, 12345)
		s.Trace.Waveforms[0].Values[12345] = spike
		s.Trace.Waveforms[0].Values[0] = 9 // the same scale either way
		var b bytes.Buffer
		if err := s.WritePNG(&b); err != nil {
			t.Fatal(err)
		}
		picture, err := png.Decode(&b)
		if err != nil {
			t.Fatal(err)
		}
		box := picture.Bounds()
		n := 0
		for x := box.Dx() / 2; x < box.Dx()*3/4; x++ { // 12345/20001 lies in here
			for y := box.Dy() * 3 / 10; y < box.Dy()*4/10; y++ { // well above 1 V, below the head
				if r, g, bl, _ := picture.At(x, y).RGBA(); bl>>8 > r>>8+40 && g>>8 < 160 {
					n++
				}
			}
		}
		return n
	}
	if with, without := inked(9), inked(0); with == 0 || without != 0 {
		t.Errorf("%d inked points with the spike and %d without", with, without)
	}
}

// The numbers hold every sample, and name what stands in their columns.
func TestTraceCSV(t *testing.T) {
	var b bytes.Buffer
	if err := spikeSheet(501, 123).WriteCSV(&b); err != nil {
		t.Fatal(err)
	}
	rows, err := csv.NewReader(&b).ReadAll()
	if err != nil || len(rows) != 502 {
		t.Fatalf("%d rows, %v", len(rows), err)
	}
	if got := strings.Join(rows[0], " "); got != "time_s node:out:voltage_V" {
		t.Errorf("the head is %q", got)
	}
	if at, _ := strconv.ParseFloat(rows[124][0], 64); rows[124][1] != "9" || math.Abs(at-0.04*123/500) > 1e-12 {
		t.Errorf("the spike became %v", rows[124])
	}
}

// A title from a netlist stays text, and the drawing is well-formed.
func TestTraceSVGHostileNames(t *testing.T) {
	s := spikeSheet(100, 50)
	s.Title = `"><script>alert(1)</script>` + "\x1b[31m"
	s.Trace.Waveforms[0].Name = `node:<b>&`
	var b bytes.Buffer
	if err := s.WriteSVG(&b); err != nil {
		t.Fatal(err)
	}
	d := xml.NewDecoder(bytes.NewReader(b.Bytes()))
	for {
		token, err := d.Token()
		if err == io.EOF {
			break
		}
		if err != nil {
			t.Fatal(err)
		}
		if e, ok := token.(xml.StartElement); ok && (e.Name.Local == "script" || e.Name.Local == "b") {
			t.Errorf("a name became an element %s", e.Name.Local)
		}
	}
}

// More curves than can be told apart are refused, not drawn alike.
func TestTooManyCurves(t *testing.T) {
	s := spikeSheet(10, 5)
	for range maxCurves {
		s.Trace.Waveforms = append(s.Trace.Waveforms, s.Trace.Waveforms[0])
	}
	if err := s.WriteSVG(io.Discard); err == nil || !strings.Contains(err.Error(), "at most 12") {
		t.Errorf("%v", err)
	}
	if err := s.WriteCSV(io.Discard); err != nil {
		t.Error(err)
	}
}

func TestRoundMarks(t *testing.T) {
	for _, c := range []struct {
		low, high float64
		want      string
	}{
		{0, 40, "0 10 20 30 40"},
		{-28.4, 2.6, "-25 -20 -15 -10 -5 0"},
		{0, 200, "0 50 100 150 200"},
		{11.95, 12.05, "11.96 11.98 12.00 12.02 12.04"},
		{-0.1, 1.53, "0.0 0.5 1.0 1.5"},
		{3, 3, ""},
	} {
		var labels []string
		for _, m := range roundMarks(c.low, c.high, 6) {
			labels = append(labels, m.label)
		}
		if got := strings.Join(labels, " "); got != c.want {
			t.Errorf("%g to %g: %s, want %s", c.low, c.high, got, c.want)
		}
	}
}
