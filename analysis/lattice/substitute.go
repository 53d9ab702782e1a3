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
func (f *factors) upward(x columns, visit func(fr *front, x, tail []float64)) {
	passed := make(tails, len(f.fronts))
	step := func(k int) {
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
			visit(fr, x[v][fr.low:fr.high], tail)
		}
		for _, c := range fr.children {
			passed[c] = nil
		}
	}
	f.subtrees(func(_ *worker, low, high int) {
		for k := low; k < high && f.ctx.Err() == nil; k++ {
			step(k)
		}
	})
	for _, k := range f.top {
		step(k)
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
func (f *factors) downward(x columns, visit func(fr *front, x, tail []float64)) {
	step := func(k int, scratch []float64) []float64 {
		fr := &f.fronts[k]
		for v := range x {
			scratch = scratch[:0]
			for _, position := range fr.border {
				scratch = append(scratch, x[v][position])
			}
			visit(fr, x[v][fr.low:fr.high], scratch)
		}
		return scratch
	}
	var scratch []float64
	for i := len(f.top) - 1; i >= 0; i-- {
		scratch = step(f.top[i], scratch)
	}
	f.subtrees(func(_ *worker, low, high int) {
		var scratch []float64
		for k := high - 1; k >= low && f.ctx.Err() == nil; k-- {
			scratch = step(k, scratch)
		}
	})
}

// The four substitutions with the factors of M = (I−L)(D−U), M being the negative
// generator. All numbers stay non-negative where the given ones are.

// forward replaces r by (I−L)⁻¹r, which at the kept nodes is the right-hand side
// of the censored chain.
func (f *factors) forward(r columns) {
	f.upward(r, func(fr *front, x, tail []float64) {
		p := len(x)
		for i := 1; i < p; i++ {
			x[i] += dot(fr.diagonal[i*p:i*p+i], x[:i])
		}
		for i := range tail {
			tail[i] += dot(fr.below[i*p:(i+1)*p], x)
		}
	})
}

// backward solves (D−U)x = r, given x at the kept nodes and r elsewhere, in place.
func (f *factors) backward(x columns) {
	f.downward(x, func(fr *front, x, tail []float64) {
		p, b := len(x), len(tail)
		for k := p - 1; k >= 0; k-- {
			sum := x[k] + dot(fr.diagonal[k*p+k+1:(k+1)*p], x[k+1:]) + dot(fr.right[k*b:(k+1)*b], tail)
			x[k] = sum / fr.diagonal[k*p+k]
		}
	})
}

// forwardLeft replaces s by z with z(D−U) = s, which at the kept nodes is the
// left-hand side of the censored chain.
func (f *factors) forwardLeft(s columns) {
	f.upward(s, func(fr *front, x, tail []float64) {
		p, b := len(x), len(tail)
		for k := range p {
			x[k] /= fr.diagonal[k*p+k]
			addMultiple(x[k+1:], x[k], fr.diagonal[k*p+k+1:(k+1)*p])
			addMultiple(tail, x[k], fr.right[k*b:(k+1)*b])
		}
	})
}

// backwardLeft solves y(I−L) = z, given y at the kept nodes and z elsewhere, in
// place.
func (f *factors) backwardLeft(y columns) {
	f.downward(y, func(fr *front, x, tail []float64) {
		p := len(x)
		for i, v := range tail {
			addMultiple(x, v, fr.below[i*p:(i+1)*p])
		}
		for i := p - 1; i > 0; i-- {
			addMultiple(x[:i], x[i], fr.diagonal[i*p:i*p+i])
		}
	})
}

// dot is the scalar product, in four sums so that additions overlap.
func dot(x, y []float64) float64 {
	y = y[:len(x)]
	var a, b, c, d float64
	i := 0
	for ; i+4 <= len(x); i += 4 {
		a += x[i] * y[i]
		b += x[i+1] * y[i+1]
		c += x[i+2] * y[i+2]
		d += x[i+3] * y[i+3]
	}
	for ; i < len(x); i++ {
		a += x[i] * y[i]
	}
	return (a + b) + (c + d)
}
