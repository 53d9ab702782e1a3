package proof

import "math"

// invert fills inverse with an approximate inverse of the square matrix a, row by
// row, by Gauss–Jordan elimination with row pivots; a is overwritten. ok is false
// where a is singular in floating point. Nothing rests on its accuracy.
func invert(a, inverse []float64, m int) (ok bool) {
	clear(inverse)
	for i := range m {
		inverse[i*m+i] = 1
	}
	for col := range m {
		p := pivot(a, m, col)
		if v := a[p*m+col]; v == 0 || math.IsNaN(v) || math.IsInf(v, 0) {
			return false
		}
		exchange(a, m, p, col)
		exchange(inverse, m, p, col)
		eliminate(a, inverse, m, col)
	}
	for _, v := range inverse {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return false
		}
	}
	return true
}

// pivot is the row, from col on, whose entry in column col is the largest against
// the rest of its row.
func pivot(a []float64, m, col int) int {
	best, at := 0.0, col
	for i := col; i < m; i++ {
		size := 0.0
		for j := col; j < m; j++ {
			size = max(size, math.Abs(a[i*m+j]))
		}
		if v := math.Abs(a[i*m+col]) / size; v > best {
			best, at = v, i
		}
	}
	return at
}

func exchange(a []float64, m, p, q int) {
	if p == q {
		return
	}
	for j := range m {
		a[p*m+j], a[q*m+j] = a[q*m+j], a[p*m+j]
	}
}

func eliminate(a, inverse []float64, m, col int) {
	scale := 1 / a[col*m+col]
	for j := range m {
		a[col*m+j] *= scale
		inverse[col*m+j] *= scale
	}
	for i := range m {
		factor := a[i*m+col]
		if i == col || factor == 0 {
			continue
		}
		for j := range m {
			a[i*m+j] -= factor * a[col*m+j]
			inverse[i*m+j] -= factor * inverse[col*m+j]
		}
	}
}
