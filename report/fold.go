package report

import (
	"math"
	"strconv"
	"strings"

	"railproof/checks"
)

// alike is the difference of two margins that rounding may make: of equal parts the first is shown.
const alike = 1e-6

// Folded is one entry of a human report: a finding, or several that differ only in the part they are on.
type Folded struct {
	Finding             // the worst of them
	Elements   []string // in netlist order
	Places     []checks.Finding
	foldingKey string
}

// Name lists the parts, runs shortened: "D1..D4".
func (f *Folded) Name() string {
	if len(f.Elements) == 1 && f.Elements[0] == "" {
		return "circuit"
	}
	return strings.Join(foldNames(f.Elements), " ")
}

// fold gathers findings that agree in all but the part, as those on the diodes of one bridge do. The order
// of the list stays that of the first of each.
func fold(list []Finding) []Folded {
	var out []Folded
	index := map[string]int{}
	for _, f := range list {
		key := foldKey(&f)
		k, ok := index[key]
		if !ok || f.Element == "" {
			index[key] = len(out)
			out = append(out, Folded{Finding: f, Elements: []string{f.Element}, Places: []checks.Finding{f.Finding}, foldingKey: key})
			continue
		}
		o := &out[k]
		o.Elements = append(o.Elements, f.Element)
		o.Places = append(o.Places, f.Finding)
		if f.Margin < o.Margin-alike {
			o.Finding = f
		}
	}
	return out
}

// foldKey is what two findings must share to be told as one: all that a reader would see, numbers to three
// significant digits, the name of the part aside.
func foldKey(f *Finding) string {
	words := []string{f.Check, string(f.Verdict), string(f.Severity), f.withoutName(f.Reason), f.withoutName(f.Remedy), f.withoutName(f.Note), f.quantity(), string(f.State)}
	if f.Stress != nil {
		words = append(words, rounded(f.Stress.Value))
	}
	if f.Rating != nil {
		words = append(words, string(f.Rating.Symbol), rounded(f.Rating.Value))
	}
	if f.Limit != nil {
		words = append(words, rounded(f.Limit.Value))
	}
	if f.Needs != nil {
		words = append(words, string(f.Needs.Symbol), rounded(f.Needs.Value), f.withoutName(f.Needs.Statement))
	}
	if f.Concession != nil {
		words = append(words, f.Concession.At.String())
	}
	return strings.Join(words, "\x00")
}

// withoutName is a text with the name of the part blanked.
func (f *Finding) withoutName(text string) string {
	if f.Element == "" {
		return text
	}
	return strings.ReplaceAll(text, f.Element, "\x01")
}

func rounded(v float64) string {
	if math.IsNaN(v) {
		return "unknown"
	}
	return strconv.FormatFloat(v, 'g', figures, 64)
}

// foldNames shortens runs of numbered names of three and more: D1 D2 D3 D4 become D1..D4.
func foldNames(names []string) []string {
	var out []string
	for i := 0; i < len(names); {
		j := i
		prefix, number, ok := numbered(names[i])
		for ok && j+1 < len(names) {
			p, n, also := numbered(names[j+1])
			if !also || p != prefix || n != number+j+1-i {
				break
			}
			j++
		}
		if j-i >= 2 {
			out = append(out, names[i]+".."+names[j])
		} else {
			out = append(out, names[i:j+1]...)
		}
		i = j + 1
	}
	return out
}

// numbered splits "D12" into "D" and 12. A number with leading zeros does not count.
func numbered(name string) (string, int, bool) {
	k := len(name)
	for k > 0 && name[k-1] >= '0' && name[k-1] <= '9' {
		k--
	}
	n, err := strconv.Atoi(name[k:])
	if err != nil || strconv.Itoa(n) != name[k:] {
		return "", 0, false
	}
	return name[:k], n, true
}
