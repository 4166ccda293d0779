package report

import (
	"fmt"
	"math"
	"strings"

	"railproof/checks/study"
)

// chartRows is how high the chart of a histogram is.
const chartRows = 6

// chart draws a histogram in plain characters: a column a bin, the marks of the percentiles and of the bound below,
// and the ends of the scale. Any bin that is not empty shows.
func chart(x *study.Sampled, st *study.Statistics) []string {
	most := 0
	for _, n := range st.Counts {
		most = max(most, n)
	}
	label := fmt.Sprint(most)
	blank := strings.Repeat(" ", len(label))
	var lines []string
	for row := chartRows - 1; row >= 0; row-- {
		var b strings.Builder
		for _, n := range st.Counts {
			b.WriteByte(block(chartRows*float64(n)/float64(most)-float64(row), n > 0 && row == 0))
		}
		lead := blank
		if row == chartRows-1 {
			lead = label
		}
		lines = append(lines, strings.TrimRight(lead+" |"+b.String(), " "))
	}
	lines = append(lines, blank+" +"+strings.Repeat("-", study.HistogramBins))
	lines = append(lines, blank+"  "+strings.TrimRight(marks(x, st), " "))
	low, high := pair(st.Low, st.High, x.Bound.Unit)
	gap := study.HistogramBins - columns(low) - columns(high)
	return append(lines, blank+"  "+low+strings.Repeat(" ", max(gap, 1))+high)
}

// block is the character of a column in one row, of which it fills a share.
func block(share float64, some bool) byte {
	switch {
	case share >= 1-1e-9:
		return '#'
	case share >= 0.5:
		return ':'
	case share > 0.1 || some:
		return '.'
	}
	return ' '
}

// marks is the line below the axis: [ and ] for the 5th and 95th percentile, m for the median, ! for the bound.
func marks(x *study.Sampled, st *study.Statistics) string {
	line := []byte(strings.Repeat(" ", study.HistogramBins))
	put := func(v float64, mark byte) {
		if math.IsNaN(v) || !(st.High > st.Low) {
			return
		}
		at := int((v - st.Low) / (st.High - st.Low) * study.HistogramBins)
		line[min(max(at, 0), study.HistogramBins-1)] = mark
	}
	for k, mark := range []byte("[m]") {
		put(st.Percentiles[k], mark)
	}
	put(x.Limit(), '!')
	return string(line)
}
