package study

import "slices"

// fewLoads is up to how many loads of an independent part every combination of light and full is solved.
const fewLoads = 4

// loadGroups lists the loads by the independent part of the circuit that they belong to: those of different parts
// do not influence one another, so that they are varied at the same time.
func (p *Plan) loadGroups() [][]int {
	var groups [][]int
	at := map[int]int{}
	for k, l := range p.loads {
		island := p.islands[l.element]
		g, ok := at[island]
		if !ok {
			g = len(groups)
			at[island] = g
			groups = append(groups, nil)
		}
		groups[g] = append(groups[g], k)
	}
	return groups
}

// combinations of n loads light (0) and full (1): all of them if they are few, else all light, all full, and each alone
// full or light. All light comes first.
func combinations(n int) [][]float64 {
	var list [][]float64
	if n <= fewLoads {
		for bits := range 1 << n {
			loads := make([]float64, n)
			for k := range loads {
				loads[k] = float64(bits >> k & 1)
			}
			list = append(list, loads)
		}
		return list
	}
	light, full := make([]float64, n), slices.Repeat([]float64{1}, n)
	list = [][]float64{light, full}
	for k := range n {
		one, rest := slices.Clone(light), slices.Clone(full)
		one[k], rest[k] = 1, 0
		list = append(list, one, rest)
	}
	return list
}

// baseLoads are the combinations of all loads: the j-th of every independent part together.
func (p *Plan) baseLoads() [][]float64 {
	if len(p.loads) == 0 {
		return [][]float64{nil}
	}
	groups := p.loadGroups()
	most := 0
	own := make([][][]float64, len(groups))
	for g, members := range groups {
		own[g] = combinations(len(members))
		most = max(most, len(own[g]))
	}
	var list [][]float64
	for j := range most {
		loads := make([]float64, len(p.loads))
		for g, members := range groups {
			at := min(j, len(own[g])-1)
			for n, k := range members {
				loads[k] = own[g][at][n]
			}
		}
		list = append(list, loads)
	}
	return list
}

// baseSettings are line low and high times the combinations of loads, and the same with regulators held for their
// headroom.
func (p *Plan) baseSettings() []Setting {
	var list []Setting
	for _, held := range []bool{false, true} {
		if held && !p.held() {
			continue
		}
		for _, line := range []LineEnd{LineLow, LineHigh} {
			for _, loads := range p.baseLoads() {
				list = append(list, Setting{Line: line, Loads: loads, Held: held})
			}
		}
	}
	return list
}
