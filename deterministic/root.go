package deterministic

import "math"

// Quality says how well a resting state is known.
type Quality struct {
	// Residual is the largest |dx/dt| of a species over the sum of the
	// magnitudes that it is the balance of; no unit.
	Residual float64
	// Error bounds the rounding error of each amount, to first order.
	Error []float64
	// Isolation is the share by which the determinant of the Newton equations
	// changes within twice Error of the state, sampled along the directions of the
	// error: the Newton–Kantorovich condition (Ortega, Am. Math. Monthly 75 (1968)
	// 658) for the one combination of amounts that may be flat. Well below 1 the
	// derivatives keep their rank and the state is the only one there; near or above
	// it the state is degenerate: a fold, say, to within rounding.
	Isolation float64
}

// root is a resting state as found: its point, its face and how well it is known.
type root struct {
	x       []float64
	face    *class
	quality Quality
	scale   []float64
}

// isolated is the largest Isolation of a state that counts as simple. At a fold
// the converged point has an Isolation near 1; two states that are told apart
// well have it far below this.
const isolated = 1.0 / 16

func (r *root) simple() bool { return r.quality.Isolation <= isolated }

// examine gives the root at the converged point x.
func (w *workspace) examine(c *class, x, floor []float64) *root {
	n := w.sys.n
	r := &root{x: append([]float64(nil), x...), face: c}
	w.rescale(x, floor)
	r.scale = append([]float64(nil), w.scale...)
	w.residuals(c, x, w.f, w.gross)
	for i := range n {
		if w.gross[i] > 0 {
			r.quality.Residual = max(r.quality.Residual, abs(w.f[i])/w.gross[i])
		}
	}
	bound := make([]float64, n)
	w.errorBound(c, x, bound)
	r.quality.Error = make([]float64, n)
	r.quality.Isolation = math.Inf(1)
	if !w.factor(c, x) {
		for i := range n {
			r.quality.Error[i] = math.Sqrt(epsilon) * w.scale[i]
		}
		return r
	}
	inverse := w.lu.inverse()
	for i := range n {
		sum := 0.0
		for j := range n {
			if bound[j] != 0 {
				sum += abs(inverse[i*n+j]) * bound[j]
			}
		}
		r.quality.Error[i] = sum * w.scale[i]
	}
	r.quality.Isolation = w.isolation(c, x, inverse, bound)
	return r
}

// isolation is the share by which the determinant of the equations' derivatives
// changes between x and the points y that an error in one equation of twice its
// bound moves the state to, on either side, the equations' shares added up. It uses
// up the factors in w.lu.
func (w *workspace) isolation(c *class, x, inverse, bound []float64) float64 {
	n := w.sys.n
	sign, size := w.lu.determinant()
	y := make([]float64, n)
	total := 0.0
	for j := range n {
		if bound[j] == 0 {
			continue
		}
		largest := 0.0
		for _, reach := range []float64{-2 * bound[j], 2 * bound[j]} {
			for i := range y {
				y[i] = max(x[i]+reach*inverse[i*n+j]*w.scale[i], 0)
			}
			if !w.factor(c, y) {
				return math.Inf(1)
			}
			s, d := w.lu.determinant()
			largest = max(largest, abs(s*sign*math.Exp(d-size)-1))
		}
		total += largest
	}
	return total
}

// same tells whether two converged points are one resting state: no further
// apart in any species than four times their error bounds. A degenerate state
// is only found to the root of the rounding along its flat direction, which its
// bound reflects.
func (r *root) same(o *root) bool {
	for i, v := range r.x {
		slack := 4 * (r.quality.Error[i] + o.quality.Error[i])
		if !(abs(v-o.x[i]) <= slack+4*epsilon*(v+o.x[i])) {
			return false
		}
	}
	return true
}
