package lattice

// A worker holds the scratch memory of one thread.
type worker struct {
	a, b []float64 // packed panels
	edge []float64 // a panel of c at the rim, six rows high
	temp []float64
	*triangles
	unit []float64   // ones
	free [][]float64 // remainders done with, to be used again
	fast bool        // the vector kernel may be used
}

// ones gives n ones.
func (w *worker) ones(n int) []float64 {
	for len(w.unit) < n {
		w.unit = append(w.unit, 1)
	}
	return w.unit[:n]
}

// zeros gives n zeros, in memory given back before if there is a piece that fits
// without much waste.
func (w *worker) zeros(n int) []float64 {
	best := -1
	for i, m := range w.free {
		if cap(m) >= n && cap(m) <= 2*n+64 && (best < 0 || cap(m) < cap(w.free[best])) {
			best = i
		}
	}
	if best < 0 {
		return make([]float64, n)
	}
	out := w.free[best][:n]
	w.free[best] = w.free[len(w.free)-1]
	w.free = w.free[:len(w.free)-1]
	clear(out)
	return out
}

// giveBack keeps memory for zeros.
func (w *worker) giveBack(m []float64) {
	const keep = 24
	if len(w.free) < keep {
		w.free = append(w.free, m)
	}
}

func newWorker() *worker {
	return &worker{
		a:    make([]float64, blockRows*blockDepth),
		b:    make([]float64, blockDepth*blockWide),
		edge: make([]float64, blockRows*panelColumns),

		triangles: new(triangles),
		fast:      vectorUnits(),
	}
}
