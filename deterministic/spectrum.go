package deterministic

import (
	"cmp"
	"math"
	"math/cmplx"
	"slices"

	"gonum.org/v1/gonum/mat"
)

// spectrum gives the eigenvalues at x along the class c, by real part descending,
// each with a bound on what rounding puts into it. It is false where the
// derivatives are not finite.
//
// Rates may differ by more than the digits of a number, so that the slow
// eigenvalues drown in the rounding of the fast ones; those are taken from the
// inverse of the Jacobian, where they are the large ones.
func (w *workspace) spectrum(c *class, x, scale []float64) (values []complex128, slack []float64, ok bool) {
	m := c.dim()
	if m == 0 {
		return nil, nil, true
	}
	w.sys.jacobian(x, w.jac, w.grad)
	a := scaledRestriction(c, w.jac, scale)
	size := norm(a)
	if math.IsInf(size, 1) {
		return nil, nil, false
	}
	values, ok = eigenvalues(a, m)
	if !ok {
		return nil, nil, false
	}
	rounding := float64(8*m) * epsilon
	slack = slices.Repeat([]float64{rounding * size}, m)
	if cmplx.Abs(values[m-1]) < 1e-6*size {
		w.slowFromInverse(a, values, slack, rounding)
	}
	order := make([]int, m)
	for k := range order {
		order[k] = k
	}
	slices.SortFunc(order, func(p, q int) int { return slowestFirst(values[p], values[q]) })
	return permuted(values, order), permuted(slack, order), true
}

// slowFromInverse replaces, from the end, the eigenvalues that the inverse of a
// knows better.
func (w *workspace) slowFromInverse(a []float64, values []complex128, slack []float64, rounding float64) {
	m := len(values)
	f := newLU(m)
	copy(f.a, a)
	if !f.factor() {
		return
	}
	inverse := f.inverse()
	size := norm(componentwise(inverse, a, m)) // what rounding each entry of a changes
	if math.IsInf(size, 1) {
		return
	}
	other, ok := eigenvalues(inverse, m)
	if !ok {
		return
	}
	slices.Reverse(other)
	from := m
	for k := m - 1; k >= 0; k-- {
		v := cmplx.Abs(1 / other[k])
		if rounding*size*v*v >= slack[k] {
			break
		}
		from = k
	}
	if from > 0 && from < m && (paired(values[from-1], values[from]) || paired(other[from-1], other[from])) {
		from++ // keep complex pairs whole
	}
	for k := from; k < m; k++ {
		values[k] = 1 / other[k]
		slack[k] = rounding * size * cmplx.Abs(values[k]) * cmplx.Abs(values[k])
	}
}

// componentwise is |B||A||B| in magnitudes, for B the inverse of A: errors of relative
// size ε in the entries of A move the entries of B by up to ε times it.
func componentwise(b, a []float64, m int) []float64 {
	b, a = magnitudes(b), magnitudes(a)
	return times(times(b, a, m), b, m)
}

func magnitudes(a []float64) []float64 {
	out := make([]float64, len(a))
	for k, v := range a {
		out[k] = abs(v)
	}
	return out
}

func paired(a, b complex128) bool { return imag(a) != 0 && a == cmplx.Conj(b) }

// eigenvalues gives those of an m×m matrix, by magnitude descending.
func eigenvalues(a []float64, m int) ([]complex128, bool) {
	var e mat.Eigen
	if !e.Factorize(mat.NewDense(m, m, slices.Clone(a)), mat.EigenNone) {
		return nil, false
	}
	values := e.Values(nil)
	slices.SortStableFunc(values, func(p, q complex128) int {
		return cmp.Or(cmp.Compare(cmplx.Abs(q), cmplx.Abs(p)), slowestFirst(p, q))
	})
	return values, true
}

func permuted[T any](list []T, order []int) []T {
	out := make([]T, len(order))
	for k, i := range order {
		out[k] = list[i]
	}
	return out
}

// scaledRestriction is the Jacobian along the class with each independent species
// measured in units of scale: the same eigenvalues, better conditioned.
func scaledRestriction(c *class, jac, scale []float64) []float64 {
	m := c.dim()
	a := c.restrict(jac)
	for p, i := range c.independent {
		for q, j := range c.independent {
			a[p*m+q] *= scale[j] / scale[i]
		}
	}
	return a
}

// slowestFirst orders by real part descending, then imaginary part descending.
func slowestFirst(a, b complex128) int {
	return cmp.Or(cmp.Compare(real(b), real(a)), cmp.Compare(imag(b), imag(a)))
}

func sign(x float64) int { return cmp.Compare(x, 0) }

// kindOf classifies a state by its eigenvalues: one whose real part is within its
// slack of 0 makes it degenerate.
func kindOf(values []complex128, slack []float64) (k Kind, unstable int) {
	zero := false
	for i, v := range values {
		switch {
		case abs(real(v)) <= slack[i]:
			zero = true
		case real(v) > 0:
			unstable++
		}
	}
	switch {
	case zero:
		return Degenerate, unstable
	case unstable == 0 && len(values) > 0 && imag(values[0]) != 0:
		return StableFocus, 0
	case unstable == 0:
		return StableNode, 0
	case unstable == len(values):
		return Unstable, unstable
	}
	return Saddle, unstable
}

// slowRate is the smallest |Re λ|.
func slowRate(values []complex128) float64 {
	rate := math.Inf(1)
	for _, v := range values {
		rate = min(rate, abs(real(v)))
	}
	return rate
}
