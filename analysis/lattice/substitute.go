package lattice

// columns is a set of vectors over the positions of the elimination order, one
// slice a vector.
type columns [][]float64

func (f *factors) newColumns(n int) columns {
	out := make(columns, n)
	for i := range out {
		out[i] = make([]float64, f.nodes())
	}
	return out
}

// tails is scratch memory for what fronts pass on to their parents: for each
// front its border's part, vector after vector.
type tails [][]float64

// upward visits all fronts, children before parents, with the sum that the
// children passed on, and keeps what the front passes on; at the end the sums
// that reach the kept nodes are added to x.
func (f *factors) upward(x columns, visit func(w *worker, fr *front, x, tail []float64)) {
	passed := make(tails, len(f.fronts))
	step := func(w *worker, k int) {
		fr := &f.fronts[k]
		b := len(fr.border)
		passed[k] = make([]float64, b*len(x))
		for v := range x {
			tail := passed[k][v*b : (v+1)*b]
			for _, c := range fr.children {
				child := &f.fronts[c]
				n := len(child.border)
				fr.accept(child, passed[c][v*n:(v+1)*n], x[v], tail)
			}
			visit(w, fr, x[v][fr.low:fr.high], tail)
		}
		for _, c := range fr.children {
			passed[c] = nil
		}
	}
	f.subtrees(func(w *worker, low, high int) {
		for k := low; k < high && f.ctx.Err() == nil; k++ {
			step(w, k)
		}
	})
	if f.ctx.Err() != nil {
		return // some fronts were left out, and have passed nothing on
	}
	for _, k := range f.top {
		step(f.team[0], k)
	}
	f.finish(x, passed)
}

func (f *factors) finish(x columns, passed tails) {
	for _, k := range f.roots {
		b := len(f.fronts[k].border)
		for v := range x {
			for i, position := range f.fronts[k].border {
				x[v][position] += passed[k][v*b+i]
			}
		}
	}
}

// accept adds what a child passed on to the front's own nodes and to its tail.
func (fr *front) accept(child *front, from, x, tail []float64) {
	at := 0
	for i, position := range child.border {
		if int(position) < fr.high {
			x[position] += from[i]
			continue
		}
		for fr.border[at] != position {
			at++
		}
		tail[at] += from[i]
	}
}

// downward visits all fronts, parents before children, with the values at the
// front's border.
func (f *factors) downward(x columns, visit func(w *worker, fr *front, x, tail []float64)) {
	step := func(w *worker, k int, scratch []float64) []float64 {
		fr := &f.fronts[k]
		for v := range x {
			scratch = scratch[:0]
			for _, position := range fr.border {
				scratch = append(scratch, x[v][position])
			}
			visit(w, fr, x[v][fr.low:fr.high], scratch)
		}
		return scratch
	}
	var scratch []float64
	for i := len(f.top) - 1; i >= 0; i-- {
		scratch = step(f.team[0], f.top[i], scratch)
	}
	f.subtrees(func(w *worker, low, high int) {
		var scratch []float64
		for k := high - 1; k >= low && f.ctx.Err() == nil; k-- {
			scratch = step(w, k, scratch)
		}
	})
}

// The four substitutions with the factors of M = (I−L)(D−U), M being the negative
// generator. All numbers stay non-negative where the given ones are.

// forward replaces r by (I−L)⁻¹r, which at the kept nodes is the right-hand side
// of the censored chain.
func (f *factors) forward(r columns) {
	f.upward(r, func(w *worker, fr *front, x, tail []float64) {
		s := fr.system()
		w.lowerRight(s.diagonal, x)
		w.addRight(tail, s.below, x)
	})
}

// backward solves (D−U)x = r, given x at the kept nodes and r elsewhere, in place.
func (f *factors) backward(x columns) {
	f.downward(x, func(w *worker, fr *front, x, tail []float64) {
		s := fr.system()
		w.addRight(x, s.right, tail)
		w.upperRight(s.diagonal, x)
	})
}

// forwardLeft replaces s by z with z(D−U) = s, which at the kept nodes is the
// left-hand side of the censored chain.
func (f *factors) forwardLeft(s columns) {
	f.upward(s, func(w *worker, fr *front, x, tail []float64) {
		s := fr.system()
		w.upperLeft(s.diagonal, x)
		w.addLeft(tail, x, s.right)
	})
}

// backwardLeft solves y(I−L) = z, given y at the kept nodes and z elsewhere, in
// place.
func (f *factors) backwardLeft(y columns) {
	f.downward(y, func(w *worker, fr *front, x, tail []float64) {
		s := fr.system()
		w.addLeft(x, tail, s.below)
		w.lowerLeft(s.diagonal, x)
	})
}
