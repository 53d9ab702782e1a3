package lattice

// addRight sets y += m·x.
func (w *worker) addRight(y []float64, m matrix, x []float64) {
	if m.rows == 0 || m.columns == 0 {
		return
	}
	if w.fast {
		rowSums(m.rows, m.columns, &m.data[0], m.stride, &x[0], &y[0])
		return
	}
	for i := range m.rows {
		y[i] += dot(m.row(i), x)
	}
}

// addLeft sets y += x·m.
func (w *worker) addLeft(y, x []float64, m matrix) {
	if m.rows == 0 || m.columns == 0 {
		return
	}
	if w.fast {
		columnSums(m.rows, m.columns, &m.data[0], m.stride, &x[0], &y[0])
		return
	}
	for i := range m.rows {
		addMultiple(y, x[i], m.row(i))
	}
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

// addMultiple sets x += f·y.
func addMultiple(x []float64, f float64, y []float64) {
	if f == 0 {
		return
	}
	y = y[:len(x)]
	for i := range x {
		x[i] += f * y[i]
	}
}

// The four triangular solves with (I−L) and (D−U), in place, in blocks so that
// most of the work is in addRight and addLeft.

const triangle = 16

// lowerRight solves (I−L)x = b.
func (w *worker) lowerRight(m matrix, x []float64) {
	for k := 0; k < len(x); k += triangle {
		end := min(k+triangle, len(x))
		w.addRight(x[k:end], m.part(k, end, 0, k), x)
		for i := k + 1; i < end; i++ {
			x[i] += dot(m.row(i)[k:i], x[k:i])
		}
	}
}

// upperRight solves (D−U)x = b.
func (w *worker) upperRight(m matrix, x []float64) {
	for end := len(x); end > 0; end -= triangle {
		k := max(end-triangle, 0)
		w.addRight(x[k:end], m.part(k, end, end, len(x)), x[end:])
		for i := end - 1; i >= k; i-- {
			x[i] = (x[i] + dot(m.row(i)[i+1:end], x[i+1:end])) / m.row(i)[i]
		}
	}
}

// upperLeft solves z(D−U) = b.
func (w *worker) upperLeft(m matrix, z []float64) {
	for k := 0; k < len(z); k += triangle {
		end := min(k+triangle, len(z))
		for i := k; i < end; i++ {
			z[i] /= m.row(i)[i]
			addMultiple(z[i+1:end], z[i], m.row(i)[i+1:end])
		}
		w.addLeft(z[end:], z[k:end], m.part(k, end, end, len(z)))
	}
}

// lowerLeft solves y(I−L) = b.
func (w *worker) lowerLeft(m matrix, y []float64) {
	for end := len(y); end > 0; end -= triangle {
		k := max(end-triangle, 0)
		for i := end - 1; i > k; i-- {
			addMultiple(y[k:i], y[i], m.row(i)[k:i])
		}
		w.addLeft(y[:k], y[k:end], m.part(k, end, 0, k))
	}
}
