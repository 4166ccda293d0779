package netlist

import (
	"math"
	"strings"

	"railproof/netlist/syntax"
)

// unreadWave says why the waveform of a source cannot be modelled, empty if it can.
func unreadWave(c *elementCard, rest []*syntax.Atom) string {
	for _, key := range []string{"tbl", "table", "wavefile"} {
		if hasKey(c, key) {
			return "a waveform given by " + key + "= is not modelled"
		}
	}
	line := false
	for _, w := range rest {
		switch text := strings.ToLower(w.Text()); {
		case w.IsExpression():
		case text == "trnoise" || text == "trrandom" || text == "noise" || text == "random" || text == "external" || text == "port" || text == "pat":
			return "a waveform of kind " + text + " is not modelled"
		case text == "pwl":
			line = true
		case line && (text == "repeat" || text == "r" || strings.HasPrefix(text, "+")):
			return "a piecewise line with repeats or relative times is not modelled"
		}
	}
	if m, ok := c.assigned("m"); ok && (m.Atom == nil || m.Atom.Text() != "1") {
		return "copies in parallel (m=) are not modelled here"
	}
	if line && (hasKey(c, "r") || hasKey(c, "repeat") || hasKey(c, "td")) {
		return "a piecewise line with repeats or delay is not modelled"
	}
	return ""
}

func hasKey(c *elementCard, key string) bool { _, ok := c.assigned(key); return ok }

func isFileWord(text string) bool {
	return strings.HasPrefix(strings.ToLower(text), "file") || strings.ContainsAny(text, `/\`)
}

// keyword reports a word that begins a clause of a source.
func keyword(text string) bool {
	switch strings.ToLower(text) {
	case "dc", "ac", "sin", "sine", "pulse", "exp", "pwl", "sffm", "am", "distof1", "distof2":
		return true
	}
	return false
}

// waveForms says what each waveform takes.
var waveForms = map[string]string{
	"sin": "SIN(offset amplitude frequency delay damping phase)", "sine": "SINE(offset amplitude frequency delay damping phase)",
	"pulse": "PULSE(low high delay rise fall width period)", "exp": "EXP(low high delay tau delay tau)",
	"pwl": "PWL(time value time value ...)",
}

// waveform makes a waveform of its numbers, or says what is wrong with them.
func waveform(kind string, n []float64) (Waveform, string) {
	at := func(k int) float64 {
		if k < len(n) {
			return n[k]
		}
		return 0
	}
	switch kind {
	case "sin", "sine":
		if len(n) < 2 {
			return nil, "a sine without amplitude"
		}
		s := Sine{Offset: at(0), Amplitude: at(1), Frequency: at(2), Delay: at(3), Damping: at(4), PhaseDegrees: at(5)}
		if s.Frequency <= 0 {
			return nil, "" // its period would be that of an analysis that is not read
		}
		return s, ""
	case "pulse":
		if len(n) < 2 {
			return nil, "a pulse without its two levels"
		}
		p := Pulse{Low: at(0), High: at(1), Delay: at(2), Rise: at(3), Fall: at(4), Width: at(5), Period: at(6)}
		if p.Rise < 0 || p.Fall < 0 || p.Width < 0 || p.Period < 0 {
			return nil, "a pulse with a negative time"
		}
		if p.Period > 0 {
			shortest := p.Period * 1e-6
			p.Rise, p.Fall = math.Max(p.Rise, shortest), math.Max(p.Fall, shortest)
			if len(n) < 6 {
				p.Width = p.Period
			}
		}
		return p, ""
	case "exp":
		if len(n) < 2 {
			return nil, "an exponential without its two levels"
		}
		return Exponential{
			Low: at(0), High: at(1), RiseDelay: at(2), RiseTau: math.Max(at(3), 1e-12),
			FallDelay: math.Max(at(4), at(2)), FallTau: math.Max(at(5), 1e-12),
		}, ""
	case "pwl":
		if len(n) < 2 {
			return nil, "a piecewise line without points"
		}
		if len(n)%2 != 0 {
			return nil, "" // a time without its level: which one is missing is not known
		}
		var p Piecewise
		for k := 0; k+1 < len(n); k += 2 {
			if k > 0 && n[k] < p.Times[len(p.Times)-1] {
				return nil, "a piecewise line whose times run backwards"
			}
			p.Times, p.Levels = append(p.Times, n[k]), append(p.Levels, n[k+1])
		}
		return p, ""
	}
	return nil, ""
}
