package solver

// Points calls visit for every value that is kept of a signal, in order of time: each sample, and before the
// sample behind a jump the value just before it. value(k) is column k of the signal, t is in s.
func (tr *Trajectory) Points(value func(k int) float64, visit func(t, v float64)) {
	next := 0
	for k := range tr.samples {
		for ; next < len(tr.jumps) && tr.jumps[next].sample == k; next++ {
			j := tr.jumps[next]
			visit(tr.Start+(float64(k-1)+j.share)*tr.Step, value(j.column))
		}
		visit(tr.Start+float64(k)*tr.Step, value(k))
	}
}
