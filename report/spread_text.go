package report

import (
	"fmt"
	"io"
	"strings"

	"railproof/checks/study"
	"railproof/netlist/quantity"
)

// WriteText writes the spread for people: a block with a chart for each stress that was asked for.
func (s *Spread) WriteText(w io.Writer, colour bool) error {
	l := &ledger{palette: newPalette(colour)}
	l.circumstances(&File{Name: s.File, Title: ownTitle(s.Title), Circumstances: s.Circumstances})
	l.line("")
	l.hang("", "", s.trialWords())
	l.hang("", "", "steady states only: what a bound holds of switch-on, line off or a shorted output is not sampled")
	s.listBeyond(l)
	s.listBlocks(l)
	s.listUnsolved(l)
	l.line("")
	l.hang("  ", "  ", "chart: trials by value, the tallest column counted; [ 5 %, m median, ] 95 % of the trials, ! the worst-case bound")
	l.line("")
	l.cautions()
	l.line("")
	s.verdict(l)
	_, err := io.WriteString(w, l.out.String())
	return err
}

// trialWords says what was drawn.
func (s *Spread) trialWords() string {
	var ranges []string
	for _, r := range s.Study.Trials {
		ranges = append(ranges, fmt.Sprintf("%d..%d", r.First, r.Last))
	}
	loads, tolerances, ambient := 0, 0, false
	for _, v := range s.Study.Varied {
		switch v.Kind {
		case study.VariedLoad:
			loads++
		case study.VariedTolerance:
			tolerances++
		case study.VariedAmbient:
			ambient = true
		}
	}
	words := "line"
	if loads > 0 {
		words += ", " + counted(loads, "load")
	}
	if ambient {
		words += ", ambient"
	}
	if tolerances > 0 {
		words += ", " + counted(tolerances, "tolerance")
	}
	how := "uniform between their ends"
	if s.Study.Distribution == study.Normal {
		how = "tolerances normal, their ends at 3 sigma and cut off there, the rest uniform"
	}
	return fmt.Sprintf("%s (%s), seed %d; %s: %s", counted(s.trials(), "trial"), strings.Join(ranges, ", "), s.Study.Seed, words, how)
}

// listBeyond tells which trials broke a bound, and what no longer holds.
func (s *Spread) listBeyond(l *ledger) {
	if s.Beyond() == 0 {
		return
	}
	l.section("Beyond the worst case: the bound is not proven")
	for k := range s.Study.Stresses {
		x, st := &s.Study.Stresses[k], &s.stats()[k]
		if len(x.Beyond) == 0 {
			continue
		}
		worst := st.Farthest
		found, bound := pair(worst.Value, x.Limit(), x.Bound.Unit)
		l.hangPainted(l.critical, "BEYOND", "  ", fmt.Sprintf("%s %s: %s in trial %d, bound %s; %d of %s beyond",
			x.Bound.Element, x.Bound.Quantity, found, worst.Trial, bound, len(x.Beyond), counted(st.Solved, "trial")))
		l.hang("        ", "        ", "with "+strings.Join(s.positionWords(worst.Trial), ", "))
		if len(x.Proves) > 0 {
			l.hang("        ", "        ", "not proven any more: "+strings.Join(x.Proves, ", "))
		}
	}
}

// positionWords tells where everything stood in a trial.
func (s *Spread) positionWords(trial uint64) []string {
	var words []string
	for k, at := range s.Study.Positions(trial) {
		switch v := s.Study.Varied[k]; v.Kind {
		case study.VariedLine:
			words = append(words, fmt.Sprintf("line at %.1f %% of its range", 100*at))
		case study.VariedLoad:
			words = append(words, fmt.Sprintf("%s at %.1f %%", v.Name, 100*at))
		case study.VariedAmbient:
			words = append(words, fmt.Sprintf("%s %.1f degC", v.Name, v.Low+at*(v.High-v.Low)))
		default:
			words = append(words, fmt.Sprintf("%s %+.2f %%", v.Name, 100*deviation(v, at)))
		}
	}
	return words
}

// listBlocks writes the blocks; parts whose blocks read the same share one.
func (s *Spread) listBlocks(l *ledger) {
	type entry struct {
		names    []string
		quantity study.Quantity
		side     string
		body     []string
	}
	var list []*entry
	index := map[string]*entry{}
	for _, k := range s.shown() {
		x := &s.Study.Stresses[k]
		e := &entry{names: []string{printable(x.Bound.Element)}, quantity: x.Bound.Quantity, side: s.boundWords(k), body: s.body(k)}
		key := string(e.quantity) + e.side + strings.Join(e.body, "\n")
		if old, ok := index[key]; ok {
			old.names = append(old.names, e.names...)
			continue
		}
		index[key] = e
		list = append(list, e)
	}
	for _, e := range list {
		l.line("")
		lead := strings.Join(foldNames(e.names), " ")
		rest := "  " + string(e.quantity)
		gap := max(2, width-columns(lead)-columns(rest)-columns(e.side))
		l.line(l.strong.Sprint(lead) + rest + strings.Repeat(" ", gap) + e.side)
		for _, text := range e.body {
			l.line(text)
		}
	}
}

// boundWords is the bound and how much of it is used.
func (s *Spread) boundWords(k int) string {
	x, st := &s.Study.Stresses[k], &s.stats()[k]
	words := "at most "
	if x.SmallerIsWorse() {
		words = "at least "
	}
	words += quantity.Format(x.Limit(), x.Bound.Unit, 4)
	if !x.Bounded() {
		words += " ?"
	}
	if st.Used > 0 {
		words += "   used " + quantity.Percent(st.Used, 3)
	}
	return words
}

// body is the chart and the figures of a stress.
func (s *Spread) body(k int) []string {
	x, st := &s.Study.Stresses[k], &s.stats()[k]
	b := &ledger{palette: newPalette(false)}
	show := func(v float64) string { return quantity.Format(v, x.Bound.Unit, 4) }
	if !x.Bounded() {
		b.hang("  ", "    ", "bound not proven: "+x.Bound.Unproven)
	}
	switch {
	case st.Solved == 0:
		b.hang("  ", "    ", "no trial has a value")
	case !(st.High > st.Low):
		b.hang("  ", "    ", show(st.Min.Value)+" in every trial")
	default:
		for _, line := range chart(x, st) {
			b.line("  " + line)
		}
		for _, line := range figureRows(x, st) {
			b.line("  " + line)
		}
		row := "mean " + show(st.Mean)
		if st.Solved > 1 {
			row += "   standard deviation " + show(st.Deviation)
		}
		b.hang("  ", "    ", row+"   nominal "+show(x.Nominal))
	}
	if missing := s.trials() - st.Solved; missing > 0 && st.Solved > 0 {
		b.hang("  ", "    ", counted(missing, "trial")+" without a value")
	}
	if when := conditionOrStart(x.Bound.Condition); when != "" {
		when = "bound from " + when
		if st.Solved > 0 && st.High > st.Low {
			when = fmt.Sprintf("worst in trial %d; ", st.Worst(x).Trial) + when
		}
		b.hang("  ", "    ", when)
	}
	return strings.Split(strings.TrimRight(b.out.String(), "\n"), "\n")
}

// figureRows is a table of one line: where the values of a stress lie.
func figureRows(x *study.Sampled, st *study.Statistics) []string {
	heads := []string{"min"}
	values := []float64{st.Min.Value}
	for k, p := range study.Percentiles {
		name := fmt.Sprintf("%g %%", p)
		if p == 50 {
			name = "median"
		}
		heads, values = append(heads, name), append(values, st.Percentiles[k])
	}
	heads, values = append(heads, "max"), append(values, st.Max.Value)
	var top, row strings.Builder
	for k, v := range values {
		text := quantity.Format(v, x.Bound.Unit, 4)
		wide := max(columns(heads[k]), columns(text))
		if k > 0 {
			top.WriteString("  ")
			row.WriteString("  ")
		}
		top.WriteString(strings.Repeat(" ", wide-columns(heads[k])) + heads[k])
		row.WriteString(strings.Repeat(" ", wide-columns(text)) + text)
	}
	return []string{top.String(), row.String()}
}

// toldUnsolved is how many unsolved trials are told with their reason.
const toldUnsolved = 5

func (s *Spread) listUnsolved(l *ledger) {
	if len(s.Study.Parts) > 0 {
		l.section("Parts of the circuit without a steady state")
		for _, p := range s.Study.Parts {
			l.hang("  ", "    ", joinWith(strings.Join(foldNames(p.Elements), " "), p.Why+" ("+p.When+")", ": "))
		}
	}
	if len(s.Study.Unsolved) == 0 {
		return
	}
	l.section("Trials with a stress that was not found")
	for k, u := range s.Study.Unsolved {
		if k == toldUnsolved {
			l.hang("  ", "    ", fmt.Sprintf("and %d more, in --format json", len(s.Study.Unsolved)-k))
			break
		}
		l.hang("  ", "    ", fmt.Sprintf("trial %d: %s", u.Trial, u.Why))
	}
}

// verdict is the last word.
func (s *Spread) verdict(l *ledger) {
	held := fmt.Sprintf("no trial of %d lies beyond a worst-case bound", s.trials())
	switch s.Exit() {
	case ExitViolated:
		l.hangPainted(l.major, "BEYOND", "  ", counted(s.Beyond(), "worst-case bound")+" broken by a trial")
	case ExitUnproven:
		var open []string
		if n := s.Open(); n > 0 {
			open = append(open, stressCount(n)+" without a proven bound or with unsolved trials")
		}
		if n := len(s.Study.Parts); n > 0 {
			open = append(open, counted(n, "part")+" of the circuit unsolved")
		}
		l.hangPainted(l.unproven, "NOT PROVEN", "  ", held+", but "+strings.Join(open, ", "))
	default:
		held += "; " + stressCount(len(s.Study.Stresses)) + " compared"
		if n := len(s.Study.Unsolved); n > 0 {
			held += ", some not found in " + counted(n, "trial")
		}
		l.hangPainted(l.proven, "HELD", "  ", held)
	}
}

func stressCount(n int) string {
	if n == 1 {
		return "1 stress"
	}
	return fmt.Sprintf("%d stresses", n)
}
