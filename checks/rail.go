package checks

import (
	"math"

	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

var railVoltage = &Check{
	Name: "rail-voltage", Title: "rail voltage",
	Applies: "nodes with a `rail` statement",
	Stress:  "smallest and largest voltage over the period in the steady state", Rating: "the stated range",
	Worst:        "low line, full load for the lower end; high line, light load for the upper",
	Formula:      "regulated: VOUT and its tolerance; unregulated: the crest and the trough",
	Assumptions:  "a ten-thousandth of the limit is left to rounding, so that a range equal to the tolerance of a regulator holds",
	SeverityRule: "critical outside the stated range",
	Source:       "the duty sheet",
	Remedy:       "what holds the rail: headroom, a tighter regulator, a larger reservoir",
	run: func(p *Pass) {
		p.eachRail(func(r *netlist.Rail, node string) {
			lower, upper := p.judgeRail(r, p.get(node, study.MinVoltage), p.get(node, study.MaxVoltage))
			p.reportRail(r, node, lower)
			p.reportRail(r, node, upper)
		})
	},
}

var railRipple = &Check{
	Name: "rail-ripple", Title: "rail ripple",
	Applies: "nodes whose `rail` statement has a ripple",
	Stress:  "peak-to-peak ripple; the ripple factor (RMS of the alternating part / mean) is noted", Rating: "the stated ripple",
	Worst:        "low line, full load",
	Formula:      "reservoir: about I/(f C); full-wave ripple factor 1/(4 sqrt(3) f C R), f the line frequency",
	Assumptions:  "behind a regulator its solved ripple and the part of the ripple at its input that it lets through: the least ripple rejection PSRRmin, else half the typical one (6 dB less, common practice); each at its worst",
	SeverityRule: "major above the stated ripple",
	Source:       "ripple factor of a full-wave reservoir: standard handbook value (from memory)",
	Remedy:       "a larger reservoir, a second filter, or a regulator with more ripple rejection",
	run: func(p *Pass) {
		p.eachRail(func(r *netlist.Rail, node string) {
			if r.Ripple != nil {
				p.reportRail(r, node, p.judgeRailRipple(r, node))
			}
		})
	},
}

// eachRail calls f for every rail statement and the name of its node in the stress table.
func (p *Pass) eachRail(f func(r *netlist.Rail, node string)) {
	for k := range p.Supply.Duty.Rails {
		r := &p.Supply.Duty.Rails[k]
		f(r, "node:"+p.Circuit().Nodes[r.Node].Name)
	}
}

func (p *Pass) reportRail(r *netlist.Rail, node string, f Finding) {
	f.Element, f.At = node, r.At
	p.add(f)
}

func (p *Pass) judgeRail(r *netlist.Rail, least, most *study.Stress) (low, high Finding) {
	origin := "rail " + p.Circuit().Nodes[r.Node].Name + " " + r.Range.Format(4)
	end := func(v float64) *Rating {
		return &Rating{Symbol: "rail", Value: v, Unit: quantity.Volt, Origin: origin, Confidence: "stated"}
	}
	const absent = "the voltage of this node was not solved"
	lowRemedy, highRemedy := "more headroom, a larger reservoir, or a tighter regulator", "a tighter regulator, a least load, or a lower winding voltage"
	if r.Range.High <= 0 { // a negative rail
		lowRemedy, highRemedy = highRemedy, lowRemedy
	}
	low = p.judgeMinimum(lower{
		stress: least, rating: end(r.Range.Low), symbol: "rail", unit: quantity.Volt, lost: math.Inf(-1), below: Critical, absent: absent,
		remedy: lowRemedy,
	})
	if most == nil {
		return withSlack(low), p.unsolvedStress(Finding{Rating: end(r.Range.High)}, absent)
	}
	high = p.judgePlain(upper{
		stress: most, rating: end(r.Range.High), symbol: "rail", unit: quantity.Volt, remedy: highRemedy,
	})
	return withSlack(low), withSlack(high)
}

// railSlack is the part of a rail's limit that is left to rounding: a tenth of the accuracy of the solution.
const railSlack = 1e-4

// withSlack proves what lies beyond a rail's limit by no more than rounding.
func withSlack(f Finding) Finding {
	if f.Verdict != Violated || f.Stress.Unproven != "" {
		return f
	}
	if math.Abs(f.Stress.Value-f.Limit.Value)+f.Stress.Error > railSlack*math.Abs(f.Limit.Value) {
		return f
	}
	f.Verdict, f.Severity, f.Remedy, f.Margin = Proven, "", "", 0
	f.Note = join(f.Note, "at its limit")
	return f
}
