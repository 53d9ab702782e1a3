package deterministic

import "math"

// Quality says how well a resting state is known.
type Quality struct {
	// Residual is the largest |dx/dt| of a species over the sum of the
	// magnitudes that it is the balance of; no unit.
	Residual float64
	// Error bounds the rounding error of each amount, to first order.
	Error []float64
	// Isolation is the share by which the Newton equations change within twice
	// Error of the state (the Newton–Kantorovich number; Ortega, Am. Math. Monthly
	// 75 (1968) 658), sampled along each species. Below 1/2 the state is the only
	// one there; near or above it the state is degenerate: a fold, say, to within
	// rounding.
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
	reach := 0.0
	for i := range n {
		sum := 0.0
		for j := range n {
			if bound[j] != 0 {
				sum += abs(inverse[i*n+j]) * bound[j]
			}
		}
		r.quality.Error[i] = sum * w.scale[i]
		reach = max(reach, sum)
	}
	r.quality.Isolation = w.isolation(c, x, inverse, 2*reach)
	return r
}

// isolation is ‖A⁻¹(A(y) − A(x))‖ over the points y at reach (in units of
// w.scale) along each species from x, the directions' shares added up.
func (w *workspace) isolation(c *class, x, inverse []float64, reach float64) float64 {
	n := w.sys.n
	base := append([]float64(nil), w.jac...)
	y := append([]float64(nil), x...)
	total := 0.0
	for j := range n {
		if c.frozen[j] {
			continue
		}
		largest := 0.0
		for _, sign := range []float64{-1, 1} {
			y[j] = max(x[j]+sign*reach*w.scale[j], 0)
			w.sys.jacobian(y, w.jac, w.grad)
			largest = max(largest, w.changeNorm(c, inverse, base))
		}
		y[j] = x[j]
		total += largest
	}
	return total
}

// changeNorm is the largest row sum of inverse·(w.jac − base), columns in units
// of w.scale, over the rows of the independent species.
func (w *workspace) changeNorm(c *class, inverse, base []float64) float64 {
	n := w.sys.n
	largest := 0.0
	for i := range n {
		row := 0.0
		for k := range n {
			sum := 0.0
			for _, j := range c.independent {
				sum += inverse[i*n+j] * (w.jac[j*n+k] - base[j*n+k])
			}
			row += abs(sum) * w.scale[k]
		}
		if math.IsNaN(row) {
			return math.Inf(1)
		}
		largest = max(largest, row)
	}
	return largest
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
