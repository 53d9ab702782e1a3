package ssa

// sparseFrom is the number of reactions from which on Auto takes Sparse.
const sparseFrom = 64

// sparse tells whether the Sparse method is to be used.
func (s *system) sparse() bool {
	return s.Method == Sparse || s.Method == Auto && len(s.Network.Reactions) >= sparseFrom
}

// newKernel gives a worker the loop that fits its network.
func newKernel(w *worker) kernel {
	if w.sparse() {
		return newSparse(w)
	}
	if k := newLookup(w); k != nil {
		return newBlocks(k, k.rush())
	}
	return newDirect(w)
}

// rush gives the fastest rush for the rows.
func (k *lookup) rush() rush {
	if r := k.wideRush(); r != nil {
		return r
	}
	return k.plainRush()
}

// plainRush gives the fastest rush in Go for the rows.
func (k *lookup) plainRush() rush {
	if k.pair() {
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

// pair tells whether there are two rows of at most two reactions each, without bursts.
func (k *lookup) pair() bool {
	narrow := k.bursty == 0
	for _, r := range k.rows {
		narrow = narrow && len(r.reactions) <= 2
	}
	return len(k.rows) == 2 && narrow
}

// rushNone leaves all events to be done with care.
func rushNone(_ *lookup, _ []lane, step, i int) (int, int) { return step, i }

// lanes gives the number of runs that one goroutine advances in turn: as many as
// hide the latencies of each other where they are advanced event by event, else one.
func (j *job) lanes() int {
	switch {
	case j.Lanes > 0:
		return j.Lanes
	case j.sparse() || len(j.groups) == 0 || j.groups[0].species == nil:
		return 1
	}
	return 8
}
