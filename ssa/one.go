package ssa

// rushOne is the rush of one row, the shape of one species.
func rushOne(k *lookup, lanes []lane, step, i int) (int, int) {
	entries, cores, bursty := k.entries, k.cores, k.bursty
	for ; step < blockSteps; step++ {
		for ; i < len(lanes); i++ {
			l := &lanes[i]
			at := l.at[0]
			n := uint32(at) / entryScale
			e := &entries[n]
			t := l.time + l.draws.Exp[step&(blockSteps-1)]/e.total()
			if cores[n] != 0 || !(t <= l.next) {
				return step, i
			}
			u := l.draws.Unit[step&(blockSteps-1)] * e.total()
			p := 3 - (above(e[0], u) + above(e[1], u) + above(e[2], u))
			if bursty>>p&1 != 0 {
				return step, i
			}
			l.time = t
			l.at[0] = at + k.shifts[p&3][0]
		}
		i = 0
	}
	return step, 0
}
