package report

import (
	"bytes"
	"encoding/json"
	"io"
	"math"

	"railproof/checks"
	"railproof/checks/study"
)

type jsonSpread struct {
	Schema       string             `json:"schema"`
	Tool         jsonTool           `json:"tool"`
	File         string             `json:"file"`
	Title        string             `json:"title"`
	Digests      jsonDigests        `json:"sha256"`
	Tables       jsonTables         `json:"tables"`
	Conditions   jsonConditions     `json:"conditions"`
	Seed         uint64             `json:"seed"`
	Distribution study.Distribution `json:"distribution"`
	Trials       []jsonRange        `json:"trials"`
	Varied       []jsonVaried       `json:"varied"`
	Stresses     []jsonSampled      `json:"stresses"`
	Unsolved     []jsonUnsolved     `json:"unsolved"`
	Parts        []jsonPart         `json:"unsolved_parts"`
	Values       [][]number         `json:"values,omitempty"` // written apart, a line a trial
}

type jsonDigests struct {
	Netlist string `json:"netlist"`
	Duty    string `json:"duty"`
}

type jsonRange struct {
	First uint64 `json:"first"`
	Last  uint64 `json:"last"`
}

type jsonVaried struct {
	Kind   study.VariedKind `json:"kind"`
	Name   string           `json:"name"`
	Symbol string           `json:"symbol,omitempty"`
	Low    *number          `json:"low,omitempty"`
	High   *number          `json:"high,omitempty"`
}

type jsonSampled struct {
	Element     string         `json:"element"`
	Quantity    study.Quantity `json:"quantity"`
	Unit        string         `json:"unit"`
	Headline    bool           `json:"headline"`
	Proves      []string       `json:"proves"`
	Bound       jsonBound      `json:"bound"`
	Nominal     number         `json:"nominal"`
	Solved      int            `json:"solved"`
	Min         *jsonExtremum  `json:"min"`
	Mean        number         `json:"mean"`
	Deviation   number         `json:"standard_deviation"`
	Percentiles []jsonPercent  `json:"percentiles"`
	Max         *jsonExtremum  `json:"max"`
	Used        number         `json:"used"`
	Histogram   *jsonHistogram `json:"histogram"`
	Beyond      *jsonBeyond    `json:"beyond"`
}

type jsonBound struct {
	Value     number        `json:"value"`
	Error     number        `json:"error"`
	Kind      string        `json:"kind"` // at most, at least
	Condition jsonCondition `json:"condition"`
	Unproven  string        `json:"unproven,omitempty"`
}

type jsonExtremum struct {
	Value number `json:"value"`
	Trial uint64 `json:"trial"`
}

type jsonPercent struct {
	Percent number `json:"percent"`
	Value   number `json:"value"`
}

type jsonHistogram struct {
	Low    number `json:"low"`
	High   number `json:"high"`
	Counts []int  `json:"counts"`
}

type jsonBeyond struct {
	Trials    []uint64 `json:"trials"`
	Farthest  uint64   `json:"farthest"`
	Value     number   `json:"value"`
	Positions []number `json:"positions"`
}

type jsonUnsolved struct {
	Trial uint64 `json:"trial"`
	Why   string `json:"why"`
}

type jsonPart struct {
	Elements []string `json:"elements"`
	Why      string   `json:"why"`
	When     string   `json:"when"`
}

// WriteJSON writes the spread as one JSON document of SpreadSchema; SCHEMA.md describes it. The values of the
// trials stand last, a line a trial.
func (s *Spread) WriteJSON(w io.Writer) error {
	var page bytes.Buffer
	if err := encode(&page, s.document()); err != nil {
		return err
	}
	page.Truncate(bytes.LastIndexByte(page.Bytes(), '}') - 1)
	page.WriteString(",\n \"values\": [")
	for k, row := range s.Study.Values {
		if k > 0 {
			page.WriteByte(',')
		}
		line := make([]number, len(row))
		for i, v := range row {
			line[i] = number(v)
		}
		text, err := json.Marshal(line)
		if err != nil {
			return err
		}
		page.WriteString("\n  ")
		page.Write(text)
	}
	page.WriteString("\n ]\n}\n")
	_, err := w.Write(page.Bytes())
	return err
}

// document is all but the values.
func (s *Spread) document() *jsonSpread {
	d := &jsonSpread{
		Schema: SpreadSchema, Tool: jsonTool{"railproof", s.Version}, File: s.File, Title: s.Title,
		Digests: jsonDigests{s.NetlistDigest, s.DutyDigest}, Tables: jsonTables{s.PartsVersion, s.PolicyVersion},
		Conditions: jsonConditions(s.Circumstances), Seed: s.Study.Seed, Distribution: s.Study.Distribution,
		Trials: []jsonRange{}, Varied: []jsonVaried{}, Stresses: []jsonSampled{}, Unsolved: []jsonUnsolved{}, Parts: []jsonPart{},
	}
	for _, r := range s.Study.Trials {
		d.Trials = append(d.Trials, jsonRange(r))
	}
	for _, v := range s.Study.Varied {
		j := jsonVaried{Kind: v.Kind, Name: v.Name, Symbol: v.Symbol}
		if v.Kind == study.VariedTolerance || v.Kind == study.VariedAmbient {
			low, high := number(v.Low), number(v.High)
			j.Low, j.High = &low, &high
		}
		d.Varied = append(d.Varied, j)
	}
	for k := range s.Study.Stresses {
		d.Stresses = append(d.Stresses, s.sampled(k))
	}
	for _, u := range s.Study.Unsolved {
		d.Unsolved = append(d.Unsolved, jsonUnsolved(u))
	}
	for _, p := range s.Study.Parts {
		d.Parts = append(d.Parts, jsonPart{append([]string{}, p.Elements...), p.Why, p.When})
	}
	return d
}

func (s *Spread) sampled(k int) jsonSampled {
	x, st := &s.Study.Stresses[k], &s.stats()[k]
	b := &x.Bound
	j := jsonSampled{
		Element: b.Element, Quantity: b.Quantity, Unit: b.Unit.String(), Headline: x.Headline, Proves: append([]string{}, x.Proves...),
		Bound:   jsonBound{number(b.Value), number(b.Error), "at most", toJSONStress(b).Condition, b.Unproven},
		Nominal: number(x.Nominal), Solved: st.Solved, Mean: number(st.Mean), Deviation: number(st.Deviation), Used: number(st.Used),
		Percentiles: []jsonPercent{},
	}
	if x.SmallerIsWorse() {
		j.Bound.Kind = "at least"
	}
	if st.Solved == 0 {
		return j
	}
	j.Min, j.Max = &jsonExtremum{number(st.Min.Value), st.Min.Trial}, &jsonExtremum{number(st.Max.Value), st.Max.Trial}
	for i, p := range study.Percentiles {
		j.Percentiles = append(j.Percentiles, jsonPercent{number(p), number(st.Percentiles[i])})
	}
	j.Histogram = &jsonHistogram{number(st.Low), number(st.High), st.Counts}
	if far := st.Farthest; far.Trial > 0 {
		j.Beyond = &jsonBeyond{Trials: x.Beyond, Farthest: far.Trial, Value: number(far.Value)}
		for _, at := range s.Study.Positions(far.Trial) {
			j.Beyond.Positions = append(j.Beyond.Positions, number(at))
		}
	}
	return j
}

// fromDocument is the way back; of what follows from the values nothing is taken.
func fromDocument(d *jsonSpread) (*Spread, error) {
	s := &Spread{
		File: d.File, Title: d.Title, Version: d.Tool.Version, Circumstances: checks.Circumstances(d.Conditions),
		PartsVersion: d.Tables.Parts, PolicyVersion: d.Tables.Policy, NetlistDigest: d.Digests.Netlist, DutyDigest: d.Digests.Duty,
		Study: &study.Spread{Seed: d.Seed, Distribution: d.Distribution},
	}
	for _, r := range d.Trials {
		s.Study.Trials = append(s.Study.Trials, study.Range(r))
	}
	for _, v := range d.Varied {
		x := study.Varied{Kind: v.Kind, Name: v.Name, Symbol: v.Symbol}
		if v.Low != nil && v.High != nil {
			x.Low, x.High = float64(*v.Low), float64(*v.High)
		}
		s.Study.Varied = append(s.Study.Varied, x)
	}
	for _, j := range d.Stresses {
		x := study.Sampled{Nominal: float64(j.Nominal), Headline: j.Headline, Proves: j.Proves}
		if j.Beyond != nil {
			x.Beyond = j.Beyond.Trials
		}
		c := j.Bound.Condition
		x.Bound = study.Stress{
			Element: j.Element, Quantity: j.Quantity, Value: float64(j.Bound.Value), Error: float64(j.Bound.Error), Phase: math.NaN(),
			Unproven: j.Bound.Unproven, Condition: study.Condition{Name: c.Name, Line: c.Line, Load: c.Load, Start: c.Start, Also: c.Also},
		}
		var err error
		if x.Bound.Unit, err = unitNamed(j.Unit); err != nil {
			return nil, err
		}
		s.Study.Stresses = append(s.Study.Stresses, x)
	}
	for _, u := range d.Unsolved {
		s.Study.Unsolved = append(s.Study.Unsolved, study.UnsolvedTrial(u))
	}
	for _, p := range d.Parts {
		s.Study.Parts = append(s.Study.Parts, study.UnsolvedIsland{Elements: p.Elements, Why: p.Why, When: p.When})
	}
	for _, line := range d.Values {
		row := make([]float64, len(line))
		for i, v := range line {
			row[i] = float64(v)
		}
		s.Study.Values = append(s.Study.Values, row)
	}
	return s, nil
}
