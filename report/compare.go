package report

import (
	"fmt"
	"io"
	"path"
	"slices"

	"railproof/checks"
)

// ComparisonSchema names the layout of the JSON comparison.
const ComparisonSchema = "railproof-comparison/1"

// Change is how a finding of the new report stands to the old one.
type Change string

// The changes, gravest first. A finding that is neither violated nor unproven in either report is no change.
const (
	ChangeNew     Change = "new"     // violated or unproven now, proven, conceded or absent before
	ChangeWorse   Change = "worse"   // graver, or a smaller margin, or a violation that is no longer judged
	ChangeBetter  Change = "better"  // milder, or a larger margin
	ChangeCleared Change = "cleared" // violated or unproven before, proven, conceded or absent now
)

// changeOrder is the order in which changes are told.
var changeOrder = []Change{ChangeNew, ChangeWorse, ChangeBetter, ChangeCleared}

// marginStep is how much a margin must move to count: half a per cent of the limit, well above the
// numerical error and below what a reader would act on.
const marginStep = 0.005

// Comparison is what a change of a supply did to its findings.
type Comparison struct {
	Old, New  string // names of the reports
	Changes   []Difference
	Judges    []JudgeChange // files judged by other tables than before: then a change need not be one of the supply
	Unchanged int           // violated and unproven findings that stay as they were
	Gated     Totals        // of what is new or worse
	Gate      Gate
	Exit      Exit
}

// Difference is one finding that changed.
type Difference struct {
	Change   Change
	File     string
	Old, New *jsonFinding // nil: absent
}

// JudgeChange names the revisions of parts tables and policy that a file was judged by, where they differ.
type JudgeChange struct {
	File     string
	Old, New Judges
}

// Judges is what a file was judged by.
type Judges struct{ Parts, Policy string }

// CompareReports compares two JSON reports. The gate looks at what is new or worse.
func CompareReports(oldName string, oldText []byte, newName string, newText []byte, gate Gate, allowUnproven bool) (*Comparison, error) {
	before, err := ReadBaseline(oldName, oldText)
	if err != nil {
		return nil, err
	}
	after, err := ReadBaseline(newName, newText)
	if err != nil {
		return nil, err
	}
	for _, b := range []*Baseline{before, after} {
		if name := b.unread(); name != "" {
			return nil, fmt.Errorf("%s: %s was not checked there, so there is nothing to compare", b.name, name)
		}
	}
	c := &Comparison{Old: oldName, New: newName, Gate: gate}
	for _, pair := range pairFiles(before.document.Files, after.document.Files) {
		c.files(pair[0], pair[1])
	}
	slices.SortStableFunc(c.Changes, func(a, b Difference) int {
		return slices.Index(changeOrder, a.Change) - slices.Index(changeOrder, b.Change)
	})
	c.close(allowUnproven)
	return c, nil
}

// pairFiles pairs the files of two reports: by path, else by base name where only one on each side has it,
// else the only file with the only file. What has no partner is paired with nil.
func pairFiles(before, after []jsonFile) [][2]*jsonFile {
	var pairs [][2]*jsonFile
	taken := map[int]bool{}
	find := func(f *jsonFile) int {
		byBase, n := -1, 0
		for k := range before {
			if before[k].File == f.File {
				return k
			}
			if path.Base(before[k].File) == path.Base(f.File) {
				byBase, n = k, n+1
			}
		}
		twins := 0
		for k := range after {
			if path.Base(after[k].File) == path.Base(f.File) {
				twins++
			}
		}
		if n == 1 && twins == 1 && !taken[byBase] {
			return byBase
		}
		if len(before) == 1 && len(after) == 1 {
			return 0
		}
		return -1
	}
	for k := range after {
		if o := find(&after[k]); o >= 0 {
			taken[o] = true
			pairs = append(pairs, [2]*jsonFile{&before[o], &after[k]})
			continue
		}
		pairs = append(pairs, [2]*jsonFile{nil, &after[k]})
	}
	for k := range before {
		if !taken[k] {
			pairs = append(pairs, [2]*jsonFile{&before[k], nil})
		}
	}
	return pairs
}

func (c *Comparison) files(before, after *jsonFile) {
	if before != nil && after != nil && before.Tables != after.Tables {
		c.Judges = append(c.Judges, JudgeChange{after.File, Judges(before.Tables), Judges(after.Tables)})
	}
	old := map[string]*jsonFinding{}
	if before != nil {
		for k := range before.Findings {
			old[before.Findings[k].Fingerprint] = &before.Findings[k]
		}
	}
	seen := map[string]bool{}
	if after != nil {
		for k := range after.Findings {
			n := &after.Findings[k]
			seen[n.Fingerprint] = true
			c.finding(after.File, old[n.Fingerprint], n)
		}
	}
	if before != nil {
		for k := range before.Findings {
			if o := &before.Findings[k]; !seen[o.Fingerprint] {
				c.finding(before.File, o, nil)
			}
		}
	}
}

func (c *Comparison) finding(file string, before, after *jsonFinding) {
	was, is := badnessOf(before), badnessOf(after)
	if was == 0 && is == 0 {
		return
	}
	moved := 0.0
	if before != nil && after != nil {
		moved = float64(after.Margin) - float64(before.Margin)
	}
	change := Change("")
	switch {
	case was == 0:
		change = ChangeNew
	case is == 0:
		change = ChangeCleared
	case is > was || is == was && moved < -marginStep || judgementLost(before.Verdict, after.Verdict):
		change = ChangeWorse
	case is < was || moved > marginStep:
		change = ChangeBetter
	default:
		c.Unchanged++
		return
	}
	c.Changes = append(c.Changes, Difference{change, file, before, after})
}

func badnessOf(f *jsonFinding) int {
	if f == nil {
		return 0
	}
	return badness(f.Verdict, severityOf(f))
}

func (c *Comparison) close(allowUnproven bool) {
	for _, d := range c.Changes {
		if d.Change == ChangeNew || d.Change == ChangeWorse {
			c.Gated.count(&Finding{Finding: checks.Finding{Check: d.New.Check, Headline: d.New.Headline, Verdict: d.New.Verdict, Severity: severityOf(d.New)}})
		}
	}
	c.Gate.close(c.Gated)
	c.Exit = exitOf(false, c.Gate, c.Gated, allowUnproven)
}

type jsonComparison struct {
	Schema    string           `json:"schema"`
	Old       string           `json:"old"`
	New       string           `json:"new"`
	Changes   []jsonDifference `json:"changes"`
	Judges    []jsonJudges     `json:"tables_changed"`
	Unchanged int              `json:"unchanged"`
	Gate      jsonGate         `json:"gate"`
	Exit      Exit             `json:"exit"`
}

type jsonDifference struct {
	Change Change       `json:"change"`
	File   string       `json:"file"`
	Old    *jsonFinding `json:"old"`
	New    *jsonFinding `json:"new"`
}

type jsonJudges struct {
	File string     `json:"file"`
	Old  jsonTables `json:"old"`
	New  jsonTables `json:"new"`
}

// WriteJSON writes the comparison as one JSON document of ComparisonSchema.
func (c *Comparison) WriteJSON(w io.Writer) error {
	d := jsonComparison{
		Schema: ComparisonSchema, Old: slashed(c.Old), New: slashed(c.New), Changes: []jsonDifference{}, Judges: []jsonJudges{}, Unchanged: c.Unchanged,
		Gate: jsonGate{append([]checks.Severity{}, c.Gate.At...), c.Gate.Passed}, Exit: c.Exit,
	}
	for _, x := range c.Changes {
		d.Changes = append(d.Changes, jsonDifference(x))
	}
	for _, x := range c.Judges {
		d.Judges = append(d.Judges, jsonJudges{x.File, jsonTables(x.Old), jsonTables(x.New)})
	}
	return encode(w, d)
}

// ComparisonFormats names the formats of a comparison.
func ComparisonFormats() []string { return []string{"text", "json"} }

// Write writes the comparison in a named format.
func (c *Comparison) Write(w io.Writer, name string, s Style) error {
	switch name {
	case "text":
		return c.WriteText(w, s.Colour)
	case "json":
		return c.WriteJSON(w)
	}
	return unknownFormat(name, ComparisonFormats())
}
