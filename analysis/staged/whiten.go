package staged

import "gonum.org/v1/gonum/mat"

// whiten gives C⁺d, with the pseudo-inverse of a covariance that may be singular
// since totals are conserved.
func whiten(c, d []float64) []float64 {
	s := len(d)
	var eigen mat.EigenSym
	if !eigen.Factorize(mat.NewSymDense(s, append([]float64(nil), c...)), true) {
		return d
	}
	var vectors mat.Dense
	eigen.VectorsTo(&vectors)
	values, out := eigen.Values(nil), make([]float64, s)
	for k, value := range values {
		if !(value > 1e-9*values[s-1]) {
			continue
		}
		along := 0.0
		for i := range d {
			along += vectors.At(i, k) * d[i]
		}
		for i := range out {
			out[i] += vectors.At(i, k) * along / value
		}
	}
	return out
}
