package lattice

import (
	"math"

	"gonum.org/v1/gonum/mat"
)

// A krylov is an Arnoldi iteration (Arnoldi, Q. Appl. Math. 9 (1951) 17) of an
// operator that inverts the generator on part of the lattice: it finds the
// slowest mode in a few applications where plain inverse iteration creeps because
// the next mode is nearly as slow. Its vectors have both signs; what must keep
// the relative accuracy of positive numbers is finished by plain inverse
// iteration.
type krylov struct {
	apply   func(x []float64) []float64
	basis   [][]float64
	hess    [krylovSteps + 1][krylovSteps]float64
	slowest complex128 // the operator's eigenvalue of the slowest mode
}

const (
	krylovSteps    = 24
	krylovRestarts = 12
)

// run starts from x and gives the slowest mode when its residual is below
// tolerance of its eigenvalue, or else ok = false and the best so far.
func (k *krylov) run(x []float64, tolerance float64) (mode []float64, ok bool) {
	for range krylovRestarts {
		mode, ok = k.cycle(x, tolerance)
		if ok || mode == nil {
			return mode, ok
		}
		x = mode
	}
	return mode, false
}

// cycle builds one basis, as far as it is needed.
func (k *krylov) cycle(x []float64, tolerance float64) (mode []float64, ok bool) {
	k.basis = [][]float64{normalised(x)}
	k.hess = [krylovSteps + 1][krylovSteps]float64{}
	for n := range krylovSteps {
		y := k.apply(k.basis[n])
		if y == nil {
			return nil, false
		}
		for range 2 { // twice is enough
			for i, b := range k.basis {
				h := dot(b, y)
				k.hess[i][n] += h
				addMultiple(y, -h, b)
			}
		}
		rest := math.Sqrt(dot(y, y))
		weights, residual := k.ritz(n+1, rest)
		if residual <= tolerance || n == krylovSteps-1 || rest == 0 {
			return k.combine(weights), residual <= tolerance
		}
		k.hess[n+1][n] = rest
		k.basis = append(k.basis, normalised(y))
	}
	return nil, false
}

// ritz finds the slowest mode in a basis of n vectors: its weights, and the
// residual relative to its eigenvalue.
func (k *krylov) ritz(n int, rest float64) (weights []float64, residual float64) {
	h := mat.NewDense(n, n, nil)
	for i := range n {
		for j := range n {
			h.Set(i, j, k.hess[i][j])
		}
	}
	var e mat.Eigen
	if !e.Factorize(h, mat.EigenRight) {
		return nil, math.Inf(1)
	}
	best, rate := -1, math.Inf(1)
	values := e.Values(nil)
	for i, v := range values {
		// The generator's rate is the real part of 1/v.
		if r := real(v) / (real(v)*real(v) + imag(v)*imag(v)); r > 0 && r < rate {
			best, rate = i, r
		}
	}
	if best < 0 {
		return nil, math.Inf(1)
	}
	var vectors mat.CDense
	e.VectorsTo(&vectors)
	norm := 0.0
	for i := range n {
		v := vectors.At(i, best)
		weights = append(weights, real(v))
		norm += real(v)*real(v) + imag(v)*imag(v)
	}
	k.slowest = values[best]
	last := vectors.At(n-1, best)
	size := math.Hypot(real(k.slowest), imag(k.slowest))
	return weights, rest * math.Hypot(real(last), imag(last)) / (size * math.Sqrt(norm))
}

func (k *krylov) combine(weights []float64) []float64 {
	if weights == nil {
		return nil
	}
	out := make([]float64, len(k.basis[0]))
	for i, w := range weights {
		addMultiple(out, w, k.basis[i])
	}
	return out
}

func normalised(x []float64) []float64 {
	out := append([]float64(nil), x...)
	scale(out, 1/math.Sqrt(dot(x, x)))
	return out
}
