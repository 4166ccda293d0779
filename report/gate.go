package report

import (
	"fmt"
	"slices"
	"strings"

	"railproof/checks"
)

// Gate says which severities of a violation stop a release.
type Gate struct {
	At     []checks.Severity // gravest first; empty: never
	Passed bool              // no violation of these severities
	Stops  int               // how many there are
}

// DefaultGate is the gate unless another is stated.
const DefaultGate = "critical"

// ParseGate reads a list of severities, or "never". The gate stops at the mildest of them and at all that
// are graver.
func ParseGate(text string) (Gate, error) {
	mildest := -1
	words := strings.Split(text, ",")
	for _, word := range words {
		word = strings.ToLower(strings.TrimSpace(word))
		if word == "never" && len(words) == 1 {
			return Gate{}, nil
		}
		k := slices.Index(severities, checks.Severity(word))
		if k < 0 {
			return Gate{}, fmt.Errorf("gate %q; expected a list of critical, major and minor, or never", text)
		}
		mildest = max(mildest, k)
	}
	return Gate{At: slices.Clone(severities[:mildest+1])}, nil
}

// String is the gate as it is stated: "critical, major" or "never".
func (g Gate) String() string {
	if len(g.At) == 0 {
		return "never"
	}
	var words []string
	for _, s := range g.At {
		words = append(words, string(s))
	}
	return strings.Join(words, ", ")
}

func (g *Gate) close(t Totals) {
	g.Stops = 0
	for _, s := range g.At {
		g.Stops += t.of(s)
	}
	g.Passed = g.Stops == 0
}

func (t Totals) of(s checks.Severity) int {
	switch s {
	case checks.Critical:
		return t.Critical
	case checks.Major:
		return t.Major
	}
	return t.Minor
}

// Exit is the exit status of a run.
type Exit int

// The exit statuses.
const (
	ExitPassed   Exit = 0 // the gate passed and every headline check was judged
	ExitViolated Exit = 1 // a violation at or above the gate
	ExitBadInput Exit = 2 // a file could not be read, or the usage is wrong
	ExitUnproven Exit = 3 // no such violation, but a headline check is unproven or an island unsolved
)

// exitOf is the gravest outcome: 2, then 1, then 3.
func exitOf(unread bool, g Gate, t Totals, allowUnproven bool) Exit {
	switch {
	case unread:
		return ExitBadInput
	case !g.Passed:
		return ExitViolated
	case !allowUnproven && t.HeadlineUnproven+t.Unsolved > 0:
		return ExitUnproven
	}
	return ExitPassed
}
