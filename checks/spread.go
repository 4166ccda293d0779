package checks

import (
	"context"
	"crypto/sha256"
	"encoding/hex"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"railproof/checks/study"
	"railproof/netlist"
)

// SpreadResult is a Monte Carlo study beside the worst case it is held against.
type SpreadResult struct {
	*Result
	Spread                    *study.Spread
	NetlistDigest, DutyDigest string // SHA-256 of the netlist with what it includes, and of its sheets; empty where there is none
}

// Spread solves the worst case of a netlist, judges it, and holds random trials against its bounds. The stresses
// of headline checks are marked, and each stress names the checks that its bound proves.
func Spread(ctx context.Context, o Options, trials study.SpreadOptions) (*SpreadResult, []netlist.Diagnostic, error) {
	trials.Jobs = o.Jobs
	var opened []string
	told := o.Source.Opened
	o.Source.Opened = func(file string) {
		opened = append(opened, file)
		if told != nil {
			told(file)
		}
	}
	p, diagnostics, err := prepare(o)
	if p == nil {
		return nil, diagnostics, err
	}
	r := &SpreadResult{Result: p.result}
	isSheet := func(file string) bool {
		return file == o.Source.DutyFile || file == r.Duty.SharedSheet || strings.EqualFold(filepath.Ext(file), ".duty")
	}
	r.NetlistDigest = digest(slices.DeleteFunc(slices.Clone(opened), isSheet))
	r.DutyDigest = digest(slices.DeleteFunc(opened, func(file string) bool { return !isSheet(file) }))
	r.Table = study.Worst(ctx, p.supply, o.Jobs)
	if ctx.Err() != nil {
		return nil, nil, ctx.Err()
	}
	r.Stresses = r.Table.Stresses
	for _, c := range catalogue {
		pass := &Pass{Supply: p.supply, Table: r.Table, Policy: p.policy, check: c}
		c.run(pass)
		r.Findings = append(r.Findings, pass.findings...)
	}
	r.describe(p, r.Table)
	if r.Spread, err = study.Sample(ctx, r.Table, trials); err != nil {
		return nil, nil, err
	}
	for k := range r.Spread.Stresses {
		mark(&r.Spread.Stresses[k], r.Findings)
	}
	return r, nil, nil
}

// digest is the SHA-256 of files one behind the other, those that are there; empty if there is none.
func digest(files []string) string {
	sum, some := sha256.New(), false
	for _, file := range files {
		if text, err := os.ReadFile(file); err == nil {
			sum.Write(text)
			some = true
		}
	}
	if !some {
		return ""
	}
	return hex.EncodeToString(sum.Sum(nil))
}

// mark says of a sampled stress what its bound is for.
func mark(s *study.Sampled, findings []Finding) {
	for _, f := range findings {
		if f.Stress == nil || f.Stress.Element != s.Bound.Element || f.Stress.Quantity != s.Bound.Quantity {
			continue
		}
		s.Headline = s.Headline || f.Headline
		if f.Verdict == Proven && !slices.Contains(s.Proves, f.Check) {
			s.Proves = append(s.Proves, f.Check)
		}
	}
}
