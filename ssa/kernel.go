package ssa

// sparseFrom is the number of reactions from which on Auto takes Sparse.
const sparseFrom = 64

// newKernel gives a worker the loop that fits its network.
func newKernel(w *worker) kernel {
	if w.Method == Sparse || w.Method == Auto && len(w.changes) >= sparseFrom {
		return newSparse(w)
	}
	return newDirect(w)
}

// lanes gives the number of runs that one goroutine advances in turn.
func (j *job) lanes() int {
	if j.Lanes > 0 {
		return j.Lanes
	}
	return 8
}
