package report

import (
	"math"
	"strconv"
	"strings"
)

// pageRow is one line of the stress table; the keys are what its columns sort by.
type pageRow struct {
	Order                                  int
	Class, Label, Name, Check              string
	Stress, Limit, Margin, When, From      string
	With                                   string // the ends of the tolerances, beside When
	StressKey, LimitKey, MarginKey, UseKey string
	VerdictKey                             int
	Bar                                    bar
}

func newPageRow(order int, f *Finding) pageRow {
	row := pageRow{
		Order: f.place, Class: classOf(f), Label: labelOf(f), Name: printable(f.Element), Check: f.Title,
		VerdictKey: 10*verdictRank(f.Verdict) + severityRank(f.Severity), Bar: newBar(f), From: printable(limitWords(f)),
	}
	if row.Name == "" {
		row.Name = "circuit"
	}
	if f.Stress != nil {
		row.Stress, row.StressKey = figure(f.Stress.Value, f.Stress.Unit), plainNumber(f.Stress.Value)
		row.When = printable(joinWith(f.Stress.Condition.Name, momentWords(f.Stress), ", "))
		row.With = printable(strings.Join(f.Stress.Condition.Also, ", "))
	}
	if f.Limit != nil && f.Stress != nil {
		row.Stress, row.Limit = pair(f.Stress.Value, f.Limit.Value, f.Stress.Unit)
		row.LimitKey = plainNumber(f.Limit.Value)
		row.Margin, row.MarginKey = marginWords(f.Margin), plainNumber(f.Margin)
		row.UseKey = plainNumber(f.Stress.Value / f.Limit.Value)
	}
	return row
}

// bar is a stress drawn against its limit and rating, in units of the drawing.
type bar struct {
	Shown, HasRating      bool
	Stress, Limit, Rating string
	Class, Words          string
}

// barWidth is the width of the drawing, barReach how much of it the largest value takes.
const (
	barWidth = 160
	barReach = 0.94
)

// newBar draws positive stresses whose limit is known; others have no bar.
func newBar(f *Finding) bar {
	if f.Stress == nil || f.Limit == nil {
		return bar{}
	}
	stress, limit := math.Max(0, f.Stress.Value), f.Limit.Value
	largest := math.Max(stress, limit)
	// The rating belongs on the scale of the stress only where it has the same unit and bounds it.
	rated := f.Rating != nil && f.Rating.Unit == f.Stress.Unit && !f.Floor && f.Rating.Value > 0
	if rated {
		largest = math.Max(largest, f.Rating.Value)
	}
	if !(limit > 0) || math.IsInf(largest, 0) || math.IsNaN(largest) {
		return bar{}
	}
	// A stress many times its limit is cut off, so that the limit stays visible.
	scale := barWidth * barReach / math.Min(largest, 4*limit)
	at := func(v float64) string {
		return strconv.FormatFloat(math.Min(v*scale, barWidth), 'f', 1, 64)
	}
	b := bar{Shown: true, Stress: at(stress), Limit: at(limit), Class: classOf(f), Words: inSentence(foundLine(f))}
	if rated {
		b.HasRating, b.Rating = true, at(f.Rating.Value)
	}
	return b
}
