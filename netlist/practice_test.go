package netlist

import (
	"fmt"
	"strings"
	"testing"
)

// The tests of the files practice_*_test.go go through what public netlists contain, habit by habit. Each example is
// made up for its row; what was read is compared whole: names, nodes, values, models and remarks.

// practice is one habit of public netlists.
type practice struct {
	habit string
	text  string
	want  string // the circuit as told writes it
	says  string // kind of remark and a part of its text, `kind: text`, several divided by |; empty: no remark at all
}

// remarkNames are the kinds of remark in the says column.
var remarkNames = map[string]RemarkKind{
	"assumed": RemarkAssumption, "not read": RemarkNotRead, "library": RemarkLibraryNotRead, "after end": RemarkAfterEnd,
	"duplicate": RemarkDuplicateName, "suffix": RemarkValueSuffix, "model": RemarkModel,
}

// hold reads the examples and compares.
func hold(t *testing.T, rows []practice) {
	t.Helper()
	for _, p := range rows {
		t.Run(p.habit, func(t *testing.T) {
			c := accepted(t, p.text)
			if got := told(c); got != p.want {
				t.Errorf("%q:\nread %s\nwant %s", p.text, got, p.want)
			}
			checkRemarks(t, c, p.says)
		})
	}
}

// checkRemarks holds the remarks of a circuit against a says column: each is there, and none beside them.
func checkRemarks(t *testing.T, c *Circuit, says string) {
	t.Helper()
	wanted := 0
	for _, part := range strings.Split(says, "|") {
		kind, text, ok := strings.Cut(part, ": ")
		if !ok {
			continue
		}
		wanted++
		k, known := remarkNames[kind]
		if !known || !remarked(c, k, text) {
			t.Errorf("no remark %q among %+v", part, c.Remarks)
		}
	}
	if len(c.Remarks) != wanted {
		t.Errorf("%d remarks, want %d: %+v", len(c.Remarks), wanted, c.Remarks)
	}
}

// refuse holds texts against a part of the first message with its place.
func refuse(t *testing.T, rows map[string]string) {
	t.Helper()
	for text, want := range rows {
		_, _, faults := Parse("t.cir", []byte(text), nil, regulators{})
		if len(faults) == 0 || !strings.Contains(faults[0].Error(), want) {
			t.Errorf("%q: %v, want %s", text, faults, want)
		}
	}
}

// accepted parses a netlist that must be accepted.
func accepted(t *testing.T, text string) *Circuit {
	t.Helper()
	c, _, faults := Parse("t.cir", []byte(text), nil, regulators{})
	if len(faults) > 0 {
		t.Fatalf("refused: %v\n%s", faults, text)
	}
	return c
}

// told is the circuit in one line: NAME(nodes)=device, elements divided by blanks.
func told(c *Circuit) string {
	var list []string
	for k := range c.Elements {
		list = append(list, tellShape(c, k)+"="+tellDevice(c, k))
	}
	return strings.Join(list, " ")
}

func tellShape(c *Circuit, k int) string {
	var nodes []string
	for _, n := range c.Elements[k].Nodes {
		nodes = append(nodes, c.Nodes[n].Name)
	}
	return c.Elements[k].Name + "(" + strings.Join(nodes, " ") + ")"
}

// shape is told without the devices.
func shape(c *Circuit) string {
	var list []string
	for k := range c.Elements {
		list = append(list, tellShape(c, k))
	}
	return strings.Join(list, " ")
}

// number is a value to four figures.
func figure(v float64) string { return fmt.Sprintf("%.4g", v) }

func tellDevice(c *Circuit, k int) string {
	e := c.Elements[k]
	switch d := e.Device.(type) {
	case Resistor:
		return figure(d.Ohms)
	case Capacitor:
		return figure(d.Farads)
	case Inductor:
		return figure(d.Henries)
	case Coupling:
		var names []string
		for _, id := range d.Inductors {
			names = append(names, c.Elements[id].Name)
		}
		return strings.Join(names, "-") + "*" + figure(d.Factor)
	case VoltageSource:
		if d.SeriesOhms != 0 {
			return tellWave(d.Wave) + "+" + figure(d.SeriesOhms) + "ohm"
		}
		return tellWave(d.Wave)
	case CurrentSource:
		return tellWave(d.Wave)
	case Diode:
		if d.Model == nil {
			return e.TypeName + "?"
		}
		return fmt.Sprintf("%s[IS=%s,N=%s,BV=%s]", d.Model.Name, figure(d.Model.IS), figure(d.Model.N), figure(d.Model.BV))
	case Transistor:
		if d.Model == nil {
			return e.TypeName + "?"
		}
		return fmt.Sprintf("%s[%+d,BF=%s]", d.Model.Name, d.Model.Polarity, figure(d.Model.BF))
	case Fet:
		if d.Model == nil {
			return e.TypeName + "?"
		}
		return fmt.Sprintf("%s[%+d]", d.Model.Name, d.Model.Polarity)
	case Switch:
		if d.Model == nil {
			return e.TypeName + "?"
		}
		return fmt.Sprintf("%s[VT=%s,on=%v]", d.Model.Name, figure(d.Model.VT), d.On)
	case VoltageControlled:
		return "*" + figure(d.Gain)
	case CurrentControlled:
		return c.Elements[d.Control].Name + "*" + figure(d.Gain)
	case Behavioural:
		return "{" + strings.ReplaceAll(d.Expression.String(), " ", "") + "}"
	case Regulator:
		return e.TypeName
	case Unknown:
		return "unknown"
	}
	return "?"
}

func tellWave(w Waveform) string {
	switch w := w.(type) {
	case Constant:
		return figure(w.Level)
	case Sine:
		return fmt.Sprintf("sin:%s:%s:%s", figure(w.Offset), figure(w.Amplitude), figure(w.Frequency))
	case Pulse:
		return fmt.Sprintf("pulse:%s:%s", figure(w.Low), figure(w.High))
	case Exponential:
		return fmt.Sprintf("exp:%s:%s", figure(w.Low), figure(w.High))
	case Piecewise:
		return fmt.Sprintf("pwl:%d", len(w.Times))
	}
	return "?"
}

// remarked reports whether a remark of a kind contains a text.
func remarked(c *Circuit, kind RemarkKind, text string) bool {
	for _, r := range c.Remarks {
		if r.Kind == kind && strings.Contains(r.Element+" "+r.Text, text) {
			return true
		}
	}
	return false
}
