package ssa

// rushPair is the rush of two rows of at most two reactions each, the shape of a
// gene with its transcript or of two genes.
//
// A total that is not known, or 0, makes t NaN or later than any l.next.
func rushPair(k *lookup, lanes []lane, step, i int) (int, int) {
	entries, cores := k.entries, k.cores
	shifts := k.pairShifts()
	for ; step < blockSteps; step++ {
		for ; i < len(lanes); i++ {
			l := &lanes[i]
			at := l.at[0]
			n, m := uint32(at)/entryScale, at>>32/entryScale
			x, y := &entries[n], &entries[m]
			total := x.total() + y.total()
			t := l.time + l.draws.Exp[step&(blockSteps-1)]/total
			if cores[n]&cores[m] != 0 || !(t <= l.next) {
				return step, i
			}
			u := l.draws.Unit[step&(blockSteps-1)] * total
			r := above(x[0], u) + above(x.total(), u) + above(x.total()+y[0], u)
			l.time = t
			l.at[0] = at + shifts[r&3]
		}
		i = 0
	}
	return step, 0
}

// pairShifts are the shifts of two rows of two reactions, by the number of running
// sums above u.
func (k *lookup) pairShifts() [4]uint64 {
	return [4]uint64{k.shifts[groupWidth+1][0], k.shifts[groupWidth][0], k.shifts[1][0], k.shifts[0][0]}
}

// above is 1 where sum is above u, and else 0, without a branch.
func above(sum, u float64) uint64 {
	if sum > u {
		return 1
	}
	return 0
}
