package ssa

// The rushes of up to four, six and eight rows go the same way: of the sums of all
// rows up to each, those above u are counted, which gives the row; then those above
// u within it, which gives the place. Row and place are looked up rather than
// branched on.

// rushFour is the rush of up to four rows.
func rushFour(k *lookup, lanes []lane, step, i int) (int, int) {
	entries, cores, bursty := k.entries, k.cores, k.bursty
	for ; step < blockSteps; step++ {
		for ; i < len(lanes); i++ {
			l := &lanes[i]
			w0, w1 := l.at[0], l.at[1]
			n0, n1 := uint32(w0)/entryScale, w0>>32/entryScale
			n2, n3 := uint32(w1)/entryScale, w1>>32/entryScale
			end0 := entries[n0].total()
			end1 := end0 + entries[n1].total()
			end2 := end1 + entries[n2].total()
			total := end2 + entries[n3].total()
			t := l.time + l.draws.Exp[step&(blockSteps-1)]/total
			if cores[n0]&cores[n1]&cores[n2]&cores[n3] != 0 || !(t <= l.next) {
				return step, i
			}
			u := l.draws.Unit[step&(blockSteps-1)] * total
			l.before[1], l.before[2], l.before[3] = end0, end1, end2
			g := 3 - (above(end0, u) + above(end1, u) + above(end2, u))
			b, e := l.before[g&7], &entries[uint32(l.at[g>>1&3]>>(g<<5&32))/entryScale]
			p := (g<<2 + 3 - (above(b+e[0], u) + above(b+e[1], u) + above(b+e[2], u))) & (maxRows*groupWidth - 1)
			if bursty>>p&1 != 0 {
				return step, i
			}
			l.time = t
			shift := &k.shifts[p]
			l.at[0], l.at[1] = w0+shift[0], w1+shift[1]
		}
		i = 0
	}
	return step, 0
}

// rushSix is the rush of up to six rows.
func rushSix(k *lookup, lanes []lane, step, i int) (int, int) {
	entries, cores, bursty := k.entries, k.cores, k.bursty
	for ; step < blockSteps; step++ {
		for ; i < len(lanes); i++ {
			l := &lanes[i]
			w0, w1, w2 := l.at[0], l.at[1], l.at[2]
			n0, n1 := uint32(w0)/entryScale, w0>>32/entryScale
			n2, n3 := uint32(w1)/entryScale, w1>>32/entryScale
			n4, n5 := uint32(w2)/entryScale, w2>>32/entryScale
			end0 := entries[n0].total()
			end1 := end0 + entries[n1].total()
			end2 := end1 + entries[n2].total()
			end3 := end2 + entries[n3].total()
			end4 := end3 + entries[n4].total()
			total := end4 + entries[n5].total()
			t := l.time + l.draws.Exp[step&(blockSteps-1)]/total
			if cores[n0]&cores[n1]&cores[n2]&cores[n3]&cores[n4]&cores[n5] != 0 || !(t <= l.next) {
				return step, i
			}
			u := l.draws.Unit[step&(blockSteps-1)] * total
			l.before[1], l.before[2], l.before[3], l.before[4], l.before[5] = end0, end1, end2, end3, end4
			g := 5 - (above(end0, u) + above(end1, u) + above(end2, u) + above(end3, u) + above(end4, u))
			b, e := l.before[g&7], &entries[uint32(l.at[g>>1&3]>>(g<<5&32))/entryScale]
			p := (g<<2 + 3 - (above(b+e[0], u) + above(b+e[1], u) + above(b+e[2], u))) & (maxRows*groupWidth - 1)
			if bursty>>p&1 != 0 {
				return step, i
			}
			l.time = t
			shift := &k.shifts[p]
			l.at[0], l.at[1], l.at[2] = w0+shift[0], w1+shift[1], w2+shift[2]
		}
		i = 0
	}
	return step, 0
}

// rushEight is the rush of up to eight rows.
func rushEight(k *lookup, lanes []lane, step, i int) (int, int) {
	entries, cores, bursty := k.entries, k.cores, k.bursty
	for ; step < blockSteps; step++ {
		for ; i < len(lanes); i++ {
			l := &lanes[i]
			w0, w1, w2, w3 := l.at[0], l.at[1], l.at[2], l.at[3]
			n0, n1 := uint32(w0)/entryScale, w0>>32/entryScale
			n2, n3 := uint32(w1)/entryScale, w1>>32/entryScale
			n4, n5 := uint32(w2)/entryScale, w2>>32/entryScale
			n6, n7 := uint32(w3)/entryScale, w3>>32/entryScale
			end0 := entries[n0].total()
			end1 := end0 + entries[n1].total()
			end2 := end1 + entries[n2].total()
			end3 := end2 + entries[n3].total()
			end4 := end3 + entries[n4].total()
			end5 := end4 + entries[n5].total()
			end6 := end5 + entries[n6].total()
			total := end6 + entries[n7].total()
			t := l.time + l.draws.Exp[step&(blockSteps-1)]/total
			if cores[n0]&cores[n1]&cores[n2]&cores[n3]&cores[n4]&cores[n5]&cores[n6]&cores[n7] != 0 || !(t <= l.next) {
				return step, i
			}
			u := l.draws.Unit[step&(blockSteps-1)] * total
			l.before[1], l.before[2], l.before[3], l.before[4], l.before[5], l.before[6], l.before[7] = end0, end1, end2, end3, end4, end5, end6
			g := 7 - (above(end0, u) + above(end1, u) + above(end2, u) + above(end3, u) + above(end4, u) + above(end5, u) + above(end6, u))
			b, e := l.before[g&7], &entries[uint32(l.at[g>>1&3]>>(g<<5&32))/entryScale]
			p := (g<<2 + 3 - (above(b+e[0], u) + above(b+e[1], u) + above(b+e[2], u))) & (maxRows*groupWidth - 1)
			if bursty>>p&1 != 0 {
				return step, i
			}
			l.time = t
			shift := &k.shifts[p]
			l.at[0], l.at[1], l.at[2], l.at[3] = w0+shift[0], w1+shift[1], w2+shift[2], w3+shift[3]
		}
		i = 0
	}
	return step, 0
}
