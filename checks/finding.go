// Package checks holds the design-rule checks: each compares the worst stress of a part with its
// rating under a policy and returns a finding.
package checks

import (
	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

// Verdict is the outcome of one check on one element.
type Verdict string

// The verdicts.
const (
	Proven   Verdict = "proven"   // inside the limit
	Violated Verdict = "violated" // outside it
	Unproven Verdict = "unproven" // a rating or a converged solution is missing
	Conceded Verdict = "conceded" // outside it, and permitted by a concession
)

// Severity ranks a violation.
type Severity string

// The severities, gravest first.
const (
	Critical Severity = "critical" // beyond the rating, regulation lost, or a hazard
	Major    Severity = "major"    // beyond the policy limit
	Minor    Severity = "minor"    // advisory
)

// Finding is the outcome of one check on one element.
type Finding struct {
	Check    string // name of the check
	Headline bool   // one of the four headline checks
	Element  string // full path, "node:NAME", or "" for the whole circuit
	Verdict  Verdict
	Severity Severity // set when violated or conceded

	Stress *study.Stress // nil for structural checks
	Rating *Rating       // nil when unknown
	Limit  *Limit        // nil when unknown
	Margin float64       // (limit - stress)/limit for a maximum, (stress - limit)/|limit| for a minimum
	Floor  bool          // the limit is a minimum (headroom), not a maximum

	Note   string // "near limit", "also: output shorted 3.1 W", one line
	Reason string // why unproven or what is violated, one line, for findings without numbers
	Needs  *Needs // what would prove an unproven finding
	Remedy string // the smallest change that makes the check pass, one line

	At         netlist.Position
	Concession *Concession
	Wave       *Wave // the curve of the stress; nil: none was asked for, or there is none
}

// Rating is what the maker allows, and where that is known from.
type Rating struct {
	Symbol     netlist.Symbol
	Value      float64
	Unit       quantity.Unit
	Origin     string // "rate C1 UR=25V", "parts table 1N4001", "value string 470uF/50V"
	Source     string // publication, if from a table
	Confidence string // "seen", "memory", "stated"
}

// Limit is the rating under the policy.
type Limit struct {
	Value  float64
	Policy string
	Factor float64 // limit = rating x factor, unless Rule says otherwise
	Rule   string  // "rating x 0.8", "0.5 V reserve"
	Source string
}

// Needs states what would prove an unproven finding: a rating of at least (or for Floor, at most)
// Value, or a statement in the duty sheet.
type Needs struct {
	Symbol       netlist.Symbol
	Value        float64 // smallest sufficient rating
	Unit         quantity.Unit
	NextStandard float64 // next standard rating step, 0 if none
	Statement    string  // or: the duty statement that is missing
}

// Concession is the permission under which a violation stands.
type Concession struct {
	Ceiling quantity.Value
	Until   string
	Reason  string
	At      netlist.Position
}
