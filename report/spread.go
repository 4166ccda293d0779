package report

import (
	"io"
	"math"
	"slices"

	"railproof/checks"
	"railproof/checks/study"
)

// SpreadSchema names the layout of the JSON document of a spread.
const SpreadSchema = "railproof-spread/1"

// Spread is the Monte Carlo study of one netlist.
type Spread struct {
	File, Title                 string
	Version                     string // of the tool
	Circumstances               checks.Circumstances
	PartsVersion, PolicyVersion string
	NetlistDigest, DutyDigest   string // SHA-256 of what was read; of no duty sheet, empty
	Study                       *study.Spread
	Selected                    []int // stresses asked for; empty: those of the headline checks
	statistics                  []study.Statistics
}

// NewSpread takes the study out of a result.
func NewSpread(r *checks.SpreadResult, version string) *Spread {
	return &Spread{
		File: slashed(r.File), Title: r.Title, Version: version, Circumstances: r.Circumstances,
		PartsVersion: r.PartsVersion, PolicyVersion: r.PolicyVersion,
		NetlistDigest: r.NetlistDigest, DutyDigest: r.DutyDigest, Study: r.Spread,
	}
}

// spreadFormats is every format of `spread`, the default first.
var spreadFormats = []struct {
	name  string
	write func(s *Spread, w io.Writer, style Style) error
}{
	{"text", func(s *Spread, w io.Writer, style Style) error { return s.WriteText(w, style.Colour) }},
	{"json", func(s *Spread, w io.Writer, _ Style) error { return s.WriteJSON(w) }},
	{"csv", func(s *Spread, w io.Writer, _ Style) error { return s.WriteCSV(w) }},
}

// SpreadFormats names the formats of a spread.
func SpreadFormats() []string {
	var names []string
	for _, f := range spreadFormats {
		names = append(names, f.name)
	}
	return names
}

// Write writes the spread in a named format.
func (s *Spread) Write(w io.Writer, name string, style Style) error {
	for _, f := range spreadFormats {
		if f.name == name {
			return f.write(s, w, style)
		}
	}
	return unknownFormat(name, SpreadFormats())
}

// stats are the statistics of every stress, worked out once.
func (s *Spread) stats() []study.Statistics {
	if s.statistics == nil {
		for k := range s.Study.Stresses {
			s.statistics = append(s.statistics, s.Study.Statistics(k))
		}
	}
	return s.statistics
}

// trials is how many trials there are.
func (s *Spread) trials() int { return len(s.Study.Values) }

// shown lists the stresses told to people: those asked for, else those of the headline checks, else all that have
// a value; and always those with a trial beyond the bound.
func (s *Spread) shown() []int {
	chosen := s.asked()
	for k := range s.Study.Stresses {
		if len(s.Study.Stresses[k].Beyond) > 0 && !slices.Contains(chosen, k) {
			chosen = append(chosen, k)
		}
	}
	slices.Sort(chosen)
	return chosen
}

func (s *Spread) asked() []int {
	if len(s.Selected) > 0 {
		return slices.Clone(s.Selected)
	}
	var headline, all []int
	for k := range s.Study.Stresses {
		all = append(all, k)
		if s.Study.Stresses[k].Headline {
			headline = append(headline, k)
		}
	}
	if len(headline) > 0 {
		return headline
	}
	return all
}

// Beyond is how many stresses have a trial beyond their worst-case bound.
func (s *Spread) Beyond() int {
	n := 0
	for k := range s.Study.Stresses {
		if len(s.Study.Stresses[k].Beyond) > 0 {
			n++
		}
	}
	return n
}

// Open is how many of the stresses asked for have no proven bound, or a trial without a value.
func (s *Spread) Open() int {
	n := 0
	for _, k := range s.asked() {
		if !s.Study.Stresses[k].Bounded() || s.stats()[k].Solved < s.trials() {
			n++
		}
	}
	return n
}

// Exit is the exit status: 1 if a trial lies beyond a bound, whether or not it was asked for; 3 if a stress that
// was asked for is open, or a part of the circuit unsolved.
func (s *Spread) Exit() Exit {
	switch {
	case s.Beyond() > 0:
		return ExitViolated
	case s.Open()+len(s.Study.Parts) > 0:
		return ExitUnproven
	}
	return ExitPassed
}

// deviation is how far a tolerance is from its drawn value at a position, relative.
func deviation(v study.Varied, position float64) float64 {
	if position < 0 {
		return -position * v.Low
	}
	return math.Max(0, position*v.High)
}
