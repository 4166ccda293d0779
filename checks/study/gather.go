package study

// Gather builds a table from single stresses: the worst of each element and quantity, in the order given.
func Gather(p *Plan, stresses ...Stress) *Table {
	t := newTable(p)
	for _, s := range stresses {
		t.merge(s)
	}
	return t
}
