package checks

import (
	"context"
	"fmt"
	"math"
	"strings"

	"railproof/checks/study"
	"railproof/netlist"
	"railproof/netlist/quantity"
)

// TraceOptions says which waveforms to follow and in which condition.
type TraceOptions struct {
	Options
	Signals []string // NODE, ELEMENT, ELEMENT:voltage, ELEMENT:current, node:NODE; empty: the rails, or the part of Stress
	// Line is low, nominal or high; Loads holds light, full or a percentage, for all loads or as NAME=...
	Line  string
	Loads []string
	// Nominal follows the netlist exactly as written instead.
	Nominal bool
	// Stress is ELEMENT=QUANTITY: the condition in which that stress is worst, tolerance ends included.
	Stress string
	// Cold integrates from empty; Degrees is where in the period it starts.
	Cold    bool
	Degrees float64
	Window  study.Window // no periods and no duration: two periods, from a cold start ten
}

// Default lengths of a trace, in periods.
const (
	steadyPeriods = 2
	coldPeriods   = 10
)

// Traced is what was followed.
type Traced struct {
	File, Title string
	Trace       *study.Trace
	Worst       *study.Stress // the stress whose condition was asked for; nil: none was
	Notes       []string      // what a reader of the curves must know
}

// Trace follows waveforms of a netlist. The results are as those of Run. A signal without a solution is in the
// trace, without values.
func Trace(ctx context.Context, o TraceOptions) (*Traced, []netlist.Diagnostic, error) {
	p, diagnostics, err := prepare(o.Options)
	if p == nil {
		return nil, diagnostics, err
	}
	t := &Traced{File: p.result.File, Title: p.result.Title}
	plan := study.NewPlan(p.supply)
	signals, err := readSignals(p.result, o.Signals)
	if err != nil {
		return nil, nil, err
	}
	var set study.Setting
	if o.Stress != "" {
		t.Worst, plan, set, err = worstSetting(ctx, p, &o)
		if err == nil && len(signals) == 0 {
			signals = signalsOf(p.result.Circuit, t.Worst.Element)
		}
	} else {
		set, err = o.setting(p.result.Circuit, plan)
	}
	if err != nil {
		return nil, nil, err
	}
	if len(signals) == 0 {
		if signals = railSignals(p.result.Circuit, p.result.Duty); len(signals) == 0 {
			return nil, nil, fmt.Errorf("no rail was recognised in %s; expected names of nodes or elements", t.File)
		}
	}
	w := o.Window
	if w.Periods == 0 && w.Duration == 0 {
		w.Periods = steadyPeriods
		if set.Cold {
			w.Periods = coldPeriods
		}
	}
	if most, ok := plan.Fits(w); !ok {
		return nil, nil, fmt.Errorf("a trace this long is too much; expected at most %s", quantity.Format(most, quantity.Second, 3))
	}
	t.Trace = plan.Trace(ctx, set, signals, w)
	if ctx.Err() != nil {
		return nil, nil, ctx.Err()
	}
	t.Notes = doubts(p.result.Circuit, plan, &set)
	return t, nil, nil
}

// setting is the condition that the options name: nominal line and full load unless they say otherwise.
func (o *TraceOptions) setting(c *netlist.Circuit, plan *study.Plan) (study.Setting, error) {
	set := study.Setting{Cold: o.Cold, Phase: o.Degrees / 360}
	if o.Nominal {
		set.Nominal = true
		return set, nil
	}
	switch o.Line {
	case "", "nominal":
		set.Line = study.LineNominal
	case "low":
		set.Line = study.LineLow
	case "high":
		set.Line = study.LineHigh
	default:
		return set, fmt.Errorf("--line %q; expected low, nominal or high", o.Line)
	}
	var err error
	set.Loads, err = readLoads(c, plan, o.Loads)
	return set, err
}

// worstSetting studies the supply in all its conditions and returns the one in which a stress is worst.
func worstSetting(ctx context.Context, p *prepared, o *TraceOptions) (*study.Stress, *study.Plan, study.Setting, error) {
	none := study.Setting{}
	name, q, ok := strings.Cut(o.Stress, "=")
	if !ok {
		return nil, nil, none, fmt.Errorf("--stress %q; expected ELEMENT=QUANTITY such as D1=%s", o.Stress, study.PeakReverseVoltage)
	}
	if rest, isNode := strings.CutPrefix(name, nodePrefix); isNode {
		id, ok := p.result.Circuit.FindNode(rest)
		if !ok {
			return nil, nil, none, unknownName(p.result.Circuit, name)
		}
		name = nodePrefix + p.result.Circuit.Nodes[id].Name
	} else {
		id, ok := p.result.Circuit.Find(name)
		if !ok {
			return nil, nil, none, unknownName(p.result.Circuit, name)
		}
		name = p.result.Circuit.Elements[id].Name
	}
	table := study.Worst(ctx, p.supply, o.Jobs)
	if ctx.Err() != nil {
		return nil, nil, none, ctx.Err()
	}
	s, ok := table.Get(name, study.Quantity(q))
	if !ok {
		return nil, nil, none, fmt.Errorf("%s has no stress %q; expected one of %s", name, q, strings.Join(quantitiesOf(table, name), ", "))
	}
	set, ok := s.Condition.Setting()
	if !ok {
		return nil, nil, none, fmt.Errorf("%s of %s is found as the supply runs down with the line off; a trace follows only supplies with their line on", q, name)
	}
	return s, table.Plan, set, nil
}

func quantitiesOf(table *study.Table, element string) []string {
	var list []string
	for k := range table.Stresses {
		if s := &table.Stresses[k]; s.Element == element {
			list = append(list, string(s.Quantity))
		}
	}
	if len(list) == 0 {
		return []string{"those of a part that has stresses"}
	}
	return list
}

// readLoads places the loads of a supply: all full, or as the words say; nil if there are none.
func readLoads(c *netlist.Circuit, plan *study.Plan, words []string) ([]float64, error) {
	loads := plan.Loads()
	if len(loads) == 0 {
		if len(words) > 0 {
			return nil, fmt.Errorf("--load %s, but no load of this netlist is known to vary; a statement `load NAME ...` in the duty sheet names one", words[0])
		}
		return nil, nil
	}
	list := make([]float64, len(loads))
	for k := range list {
		list[k] = 1
	}
	for _, word := range words {
		name, level, one := strings.Cut(word, "=")
		if !one {
			level = word
		}
		position, err := loadLevel(level)
		if err != nil {
			return nil, fmt.Errorf("--load %q; expected light, full or a percentage from 0 %% to 100 %%, or one of these behind NAME=", word)
		}
		found := false
		var names []string
		for k, id := range loads {
			names = append(names, c.Elements[id].Name)
			if !one || strings.EqualFold(c.Elements[id].Name, name) {
				list[k], found = position, true
			}
		}
		if !found {
			return nil, fmt.Errorf("--load %q; expected a load of this netlist: %s", word, strings.Join(names, ", "))
		}
	}
	return list, nil
}

func loadLevel(text string) (float64, error) {
	switch text {
	case "light":
		return 0, nil
	case "full":
		return 1, nil
	}
	if !strings.HasSuffix(text, "%") {
		text += "%"
	}
	v, err := quantity.Parse(text, quantity.One)
	if err != nil || math.IsNaN(v.Number) || v.Number < 0 || v.Number > 1 {
		return 0, fmt.Errorf("no level of a load")
	}
	return v.Number, nil
}

// doubts says what keeps the curves from being those of the real supply.
func doubts(c *netlist.Circuit, plan *study.Plan, set *study.Setting) []string {
	if set.Nominal {
		return nil
	}
	var list []string
	for _, id := range plan.Doubtful {
		list = append(list, fmt.Sprintf("the amplitude of %s may be a peak or an RMS value", c.Elements[id].Name))
	}
	for _, id := range plan.Undeclared {
		list = append(list, fmt.Sprintf("the off-load voltage and the resistance of %s are unknown; it is traced as drawn", c.Elements[id].Name))
	}
	return list
}
