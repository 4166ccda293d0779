package report

import (
	"cmp"
	"encoding/json"
	"errors"
	"fmt"
	"reflect"
	"slices"

	"railproof/checks/study"
	"railproof/netlist/quantity"
)

// LargestTrial is the largest number of a trial, and of a seed, that every reader of JSON keeps exactly.
const LargestTrial = 1<<53 - 1

// ReadSpread reads a spread as WriteJSON writes it. What follows from the values is worked out again.
func ReadSpread(name string, text []byte) (*Spread, error) {
	var d jsonSpread
	if err := json.Unmarshal(text, &d); err != nil {
		return nil, fmt.Errorf("%s: not a JSON spread: %w", name, err)
	}
	if d.Schema != SpreadSchema {
		return nil, fmt.Errorf("%s: schema %q; expected %q, as `railproof spread --format json` writes", name, d.Schema, SpreadSchema)
	}
	if err := d.sound(); err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	s, err := fromDocument(&d)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", name, err)
	}
	return s, nil
}

// sound holds that the parts of a document fit one another.
func (d *jsonSpread) sound() error {
	if d.Distribution != study.Uniform && d.Distribution != study.Normal {
		return fmt.Errorf("distribution %q; expected %s or %s", d.Distribution, study.Uniform, study.Normal)
	}
	left := uint64(len(d.Values))
	for _, r := range d.Trials {
		if r.First < 1 || r.Last < r.First || r.Last > LargestTrial || r.Last-r.First >= left {
			return errors.New("the values do not fit the trials; expected a row for each")
		}
		left -= r.Last - r.First + 1
	}
	if left > 0 || len(d.Values) == 0 {
		return errors.New("the values do not fit the trials; expected a row for each")
	}
	for _, row := range d.Values {
		if len(row) != len(d.Stresses) {
			return fmt.Errorf("a row of %d values; expected one for each of %d stresses", len(row), len(d.Stresses))
		}
	}
	for k := range d.Stresses {
		if b := d.Stresses[k].Beyond; b != nil && !d.holds(b.Trials) {
			return fmt.Errorf("%s %s: trials beyond the bound that the study does not hold, or not in ascending order", d.Stresses[k].Element, d.Stresses[k].Quantity)
		}
	}
	return nil
}

// holds reports whether ascending trials all stand in the document.
func (d *jsonSpread) holds(trials []uint64) bool {
	for k, trial := range trials {
		in := slices.ContainsFunc(d.Trials, func(r jsonRange) bool { return r.First <= trial && trial <= r.Last })
		if !in || k > 0 && trial <= trials[k-1] {
			return false
		}
	}
	return len(trials) > 0
}

// unitNamed is the unit of a symbol.
func unitNamed(symbol string) (quantity.Unit, error) {
	for u := quantity.One; u <= quantity.Coulomb; u++ {
		if u.String() == symbol {
			return u, nil
		}
	}
	return quantity.One, fmt.Errorf("unit %q is not known", symbol)
}

// MergeSpreads joins studies of one supply that hold separate trials; names are their files. The whole is what one
// run over all the trials writes.
func MergeSpreads(names []string, list []*Spread) (*Spread, error) {
	first := list[0]
	var studies []*study.Spread
	for k, s := range list {
		if what := first.differs(s); what != "" {
			return nil, fmt.Errorf("%s and %s are not parts of one study: %s", names[0], names[k], what)
		}
		studies = append(studies, s.Study)
	}
	earliest := slices.MinFunc(list, func(a, b *Spread) int {
		return cmp.Compare(a.Study.Trials[0].First, b.Study.Trials[0].First)
	})
	whole := *earliest
	whole.statistics = nil
	var err error
	whole.Study, err = study.Join(studies)
	return &whole, err
}

// differs says in what two spreads are not of one study, empty if they are.
func (s *Spread) differs(o *Spread) string {
	switch {
	case s.NetlistDigest != o.NetlistDigest:
		return "the netlist is another"
	case s.DutyDigest != o.DutyDigest:
		return "the duty sheet is another"
	case s.Version != o.Version:
		return "railproof " + s.Version + " and " + o.Version
	case s.PartsVersion != o.PartsVersion:
		return "parts tables " + s.PartsVersion + " and " + o.PartsVersion
	case s.PolicyVersion != o.PolicyVersion:
		return "policy " + s.PolicyVersion + " and " + o.PolicyVersion
	case s.Study.Seed != o.Study.Seed:
		return fmt.Sprintf("seed %d and %d", s.Study.Seed, o.Study.Seed)
	case s.Study.Distribution != o.Study.Distribution:
		return fmt.Sprintf("distribution %s and %s", s.Study.Distribution, o.Study.Distribution)
	case !reflect.DeepEqual(s.Study.Varied, o.Study.Varied) || s.Circumstances != o.Circumstances:
		return "what is varied is not the same"
	case !s.sameBounds(o):
		return "the worst-case bounds are not the same (an included file, or another machine)"
	}
	return ""
}

// sameBounds compares the heads of the stresses as they are written.
func (s *Spread) sameBounds(o *Spread) bool {
	heads := func(s *Spread) []byte {
		var list []any
		for k := range s.Study.Stresses {
			x := s.sampled(k)
			list = append(list, x.Element, x.Quantity, x.Unit, x.Headline, x.Proves, x.Bound, x.Nominal)
		}
		text, err := json.Marshal(append(list, s.document().Parts))
		if err != nil {
			return nil
		}
		return text
	}
	a, b := heads(s), heads(o)
	return a != nil && string(a) == string(b)
}
