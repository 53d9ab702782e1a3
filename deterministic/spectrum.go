package deterministic

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"
)

// spectrum gives the eigenvalues at x along the class c, by real part descending,
// each with a bound on its error: a multiple of the rounding of the Jacobian. It
// is false where the derivatives are not finite.
func (w *workspace) spectrum(c *class, x, scale []float64) (values []complex128, slack float64, ok bool) {
	m := c.dim()
	if m == 0 {
		return nil, 0, true
	}
	w.sys.jacobian(x, w.jac, w.grad)
	a := scaledRestriction(c, w.jac, scale)
	size := norm(a)
	if math.IsInf(size, 1) {
		return nil, 0, false
	}
	var e mat.Eigen
	if !e.Factorize(mat.NewDense(m, m, a), mat.EigenNone) {
		return nil, 0, false
	}
	values = e.Values(nil)
	slices.SortFunc(values, slowestFirst)
	return values, float64(8*m) * epsilon * size, true
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

func slowestFirst(a, b complex128) int {
	switch {
	case real(a) != real(b):
		return sign(real(b) - real(a))
	default:
		return sign(imag(b) - imag(a))
	}
}

func sign(x float64) int {
	switch {
	case x > 0:
		return 1
	case x < 0:
		return -1
	}
	return 0
}

// kindOf classifies a state by its eigenvalues: those within slack of 0 make it
// degenerate.
func kindOf(values []complex128, slack float64) (k Kind, unstable int) {
	zero := false
	for _, v := range values {
		switch {
		case abs(real(v)) <= slack:
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
