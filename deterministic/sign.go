package deterministic

import "math"

// signSteps bounds the sign iteration, which converges quadratically once scaled.
const signSteps = 60

// lyapunovBySign solves A C + C Aᵀ + D = 0 for an A whose eigenvalues all have
// negative real parts, in time m³, by Newton's iteration for the sign of A, which is
// −1: Roberts, Int. J. Control 32 (1980) 677. It is false where that does not
// converge.
func lyapunovBySign(a, d []float64, m int) ([]float64, bool) {
	f := newLU(m)
	a, d = append([]float64(nil), a...), append([]float64(nil), d...)
	for range signSteps {
		copy(f.a, a)
		if !f.factor() {
			return nil, false
		}
		_, size := f.determinant()
		c := math.Exp(size / float64(m))
		inverse := f.inverse()
		spread := congruence(inverse, d, m)
		change := 0.0
		for k := range a {
			next := (a[k]/c + c*inverse[k]) / 2
			change = max(change, abs(next-a[k]))
			a[k] = next
			d[k] = (d[k]/c + c*spread[k]) / 2
		}
		if change <= float64(8*m)*epsilon {
			for k := range d {
				d[k] /= 2
			}
			return d, true
		}
	}
	return nil, false
}

// congruence is B D Bᵀ.
func congruence(b, d []float64, m int) []float64 { return times(b, transposed(times(b, d, m), m), m) }

// times is the product of two m×m matrices.
func times(a, b []float64, m int) []float64 {
	out := make([]float64, m*m)
	for i := range m {
		for k := range m {
			v := a[i*m+k]
			if v == 0 {
				continue
			}
			for j := range m {
				out[i*m+j] += v * b[k*m+j]
			}
		}
	}
	return out
}

func transposed(a []float64, m int) []float64 {
	out := make([]float64, m*m)
	for i := range m {
		for j := range m {
			out[j*m+i] = a[i*m+j]
		}
	}
	return out
}
