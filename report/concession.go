package report

import (
	"fmt"
	"math"
	"strings"
	"time"

	"railproof/checks"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

// ConcessionCheck is the check on the concessions themselves: each must cover a violation that stands.
var ConcessionCheck = &checks.Check{
	Name: "concession", Title: "concession that does not hold",
	Applies:      "every concession of the duty sheet",
	Stress:       "none",
	Rating:       "its ceiling and its last day",
	Worst:        "the day of the run, or of --now",
	Formula:      "a violation is conceded while its stress, numerical error included, is within the ceiling and the last day has not passed",
	Assumptions:  "a day ends at midnight UTC",
	SeverityRule: "minor for a concession that has expired or covers nothing; the violation it no longer covers keeps its own severity",
	Source:       "concession: ISO 9000:2015, 3.12.5, permission to release what does not conform, limited in extent and time",
	Remedy:       "renew or delete the concession",
}

// concede applies the concessions at a day. One that covers nothing becomes a finding.
func (f *File) concede(list []netlist.Concession, now time.Time) {
	for _, c := range list {
		reason := f.apply(c, now)
		if c.Shared && !expired(c.Until, now) {
			continue // it need not be needed by each of the netlists it is for
		}
		if reason != "" {
			title, rank := titleOf(ConcessionCheck.Name)
			f.Findings = append(f.Findings, Finding{Title: title, rank: rank, place: int(c.Element), Finding: checks.Finding{
				Check: ConcessionCheck.Name, Element: c.Target, At: c.At,
				Verdict: checks.Violated, Severity: checks.Minor,
				Reason: reason, Remedy: ConcessionCheck.Remedy,
			}})
		}
	}
}

// apply concedes the violations that a concession covers. It returns why it covers none, or empty.
func (f *File) apply(c netlist.Concession, now time.Time) string {
	what := fmt.Sprintf("the concession for %s of %s", c.Check, c.Target)
	if expired(c.Until, now) {
		return what + " expired on " + c.Until
	}
	why := " matches no finding"
	covered := false
	for k := range f.Findings {
		x := &f.Findings[k]
		if x.Check != c.Check || !strings.EqualFold(x.Element, c.Target) {
			continue
		}
		switch {
		case x.Verdict == checks.Proven:
			why = " is not needed: the check is proven"
			continue
		case x.Verdict != checks.Violated:
			why = " covers nothing: the check is " + string(x.Verdict) + ", and only a violation can be conceded"
			continue
		case x.Stress == nil || x.Stress.Unit != c.Ceiling.Unit || math.IsNaN(x.Stress.Value):
			why = " states a ceiling in " + c.Ceiling.Unit.String() + ", and no violated stress of the part has that unit"
			continue
		}
		worst, beyond := x.Stress.Value+x.Stress.Error, false
		if x.Floor {
			worst = x.Stress.Value - x.Stress.Error
			beyond = worst < c.Ceiling.Number
		} else {
			beyond = worst > c.Ceiling.Number
		}
		if beyond {
			found, ceiling := pair(worst, c.Ceiling.Number, c.Ceiling.Unit)
			x.Note = joined(x.Note, fmt.Sprintf("beyond its concession: %s found, %s conceded (%s)", found, ceiling, c.At))
			covered = true // the violation itself says so
			continue
		}
		x.Verdict = checks.Conceded
		x.Concession = &checks.Concession{Ceiling: c.Ceiling, Until: c.Until, Reason: c.Reason, At: c.At}
		covered = true
	}
	if covered {
		return ""
	}
	return what + why
}

// expired reports whether the last day of a concession is over.
func expired(until string, now time.Time) bool {
	day, err := time.Parse(time.DateOnly, until)
	return err != nil || !now.UTC().Before(day.AddDate(0, 0, 1))
}

// ceilingWords puts a ceiling into words.
func ceilingWords(c *checks.Concession) string {
	return quantity.Format(c.Ceiling.Number, c.Ceiling.Unit, 0)
}
