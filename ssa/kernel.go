package ssa

// sparseFrom is the number of reactions from which on Auto takes Sparse.
const sparseFrom = 64

// newKernel gives a worker the loop that fits its network.
func newKernel(w *worker) kernel {
	if w.Method == Sparse || w.Method == Auto && len(w.changes) >= sparseFrom {
		return newSparse(w)
	}
	if k := newLookup(w); k != nil {
		return newBlocks(k, k.rush())
	}
	return newDirect(w)
}

// rush gives the fastest rush for the rows.
func (k *lookup) rush() rush {
	narrow := k.bursty == 0
	for _, r := range k.rows {
		narrow = narrow && len(r.reactions) <= 2
	}
	if len(k.rows) == 2 && narrow {
		return rushPair
	}
	switch k.width() {
	case 1:
		return rushOne
	case 4:
		return rushFour
	case 6:
		return rushSix
	}
	return rushEight
}

// rushNone leaves all events to be done with care.
func rushNone(_ *lookup, _ []lane, step, i int) (int, int) { return step, i }

// lanes gives the number of runs that one goroutine advances in turn.
func (j *job) lanes() int {
	if j.Lanes > 0 {
		return j.Lanes
	}
	return 8
}
