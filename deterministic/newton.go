package deterministic

import "math"

// workspace is the scratch of one goroutine's Newton steps on one system.
type workspace struct {
	sys       *system
	jac, grad []float64
	f, gross  []float64
	step, try []float64
	scale     []float64
	bar       []float64
	lu        *lu
	// perCapita makes newton solve for the rates over the amounts, ẋᵢ/xᵢ = 0, which
	// states where the species is absent do not satisfy: they do not draw it in.
	perCapita bool
}

func newWorkspace(s *system) *workspace {
	row := func() []float64 { return make([]float64, s.n) }
	return &workspace{
		sys: s, jac: make([]float64, s.n*s.n), grad: row(), f: row(), gross: row(),
		step: row(), try: row(), scale: row(), bar: row(), lu: newLU(s.n),
	}
}

// residuals writes the n equations of a resting state on the class at x into f:
// dx/dt of the independent species, and the excess over each conserved total;
// gross is the magnitude that each is the balance of.
func (w *workspace) residuals(c *class, x, f, gross []float64) {
	w.sys.turnover(x, f, gross)
	for k, d := range c.dependent {
		f[d], gross[d] = c.excess(k, x)
	}
}

// factor sets up and factors the equations' derivatives at x, with amounts in
// units of w.scale. It is false where they are singular or not finite.
func (w *workspace) factor(c *class, x []float64) bool {
	w.sys.jacobian(x, w.jac, w.grad)
	copy(w.lu.a, w.jac)
	return w.factorRows(c)
}

// factorFrom is factor for the step from x, where w.f holds the residuals: of the
// rates, or of the rates over the amounts times those at x.
func (w *workspace) factorFrom(c *class, x []float64) bool {
	w.sys.jacobian(x, w.jac, w.grad)
	copy(w.lu.a, w.jac)
	if w.perCapita {
		for _, i := range c.independent {
			w.lu.a[i*w.sys.n+i] -= w.f[i] / x[i]
		}
	}
	return w.factorRows(c)
}

// factorRows puts the totals in, scales the columns and factors.
func (w *workspace) factorRows(c *class) bool {
	n, a := w.sys.n, w.lu.a
	for k, d := range c.dependent {
		copy(a[d*n:(d+1)*n], c.rows[k])
	}
	for i := range n {
		for j := range n {
			a[i*n+j] *= w.scale[j]
		}
	}
	return w.lu.factor()
}

// rescale sets the unit that each species is measured in near x: its own amount,
// or the given floor where that is larger.
func (w *workspace) rescale(x, floor []float64) {
	for i, v := range x {
		w.scale[i] = max(abs(v), floor[i])
	}
}

// correct solves for the Newton step from residuals f, in units of w.scale, and
// gives its largest entry.
func (w *workspace) correct(f, step []float64) float64 {
	copy(step, f)
	w.lu.solve(step)
	return norm(step)
}

func norm(v []float64) float64 {
	largest := 0.0
	for _, e := range v {
		if !(abs(e) <= math.MaxFloat64) {
			return math.Inf(1)
		}
		largest = max(largest, abs(e))
	}
	return largest
}

// Limits of the damped Newton iteration.
const (
	newtonSteps  = 80
	leastDamping = 1.0 / 1024
	nearRoot     = 1e-5 // a step this short in every species starts the final polish
	shrink       = 0.1  // of an amount is left at least by one step
)

// newton looks for a resting state on the class from x, which it overwrites, by
// damped Newton steps that stay positive. Steps are measured in the amounts
// themselves, so that every species counts alike whatever its size; a step is
// accepted by the natural monotonicity test, which does not depend on how the
// equations are scaled (Deuflhard, Newton Methods for Nonlinear Problems, 2004,
// §3.3). floor is the smallest amount that is told from 0, ceiling the largest
// searched.
func (w *workspace) newton(c *class, x, floor, ceiling []float64) bool {
	damping := 1.0
	for range newtonSteps {
		w.rescale(x, floor)
		w.residuals(c, x, w.f, w.gross)
		if !w.factorFrom(c, x) {
			return false
		}
		size := w.correct(w.f, w.step)
		if math.IsInf(size, 1) {
			return false
		}
		if size <= nearRoot {
			return w.polish(c, x, floor)
		}
		var ok bool
		if damping, ok = w.advance(c, x, ceiling, size, min(1, 4*damping)); !ok {
			return false
		}
	}
	return false
}

// advance takes the longest step of damping, damping/2, … that passes the
// monotonicity test.
func (w *workspace) advance(c *class, x, ceiling []float64, size, damping float64) (float64, bool) {
	for ; damping >= leastDamping; damping /= 2 {
		for i, v := range x {
			if c.frozen[i] {
				w.try[i] = 0
				continue
			}
			next := v - damping*w.step[i]*w.scale[i]
			w.try[i] = min(max(next, shrink*v), max(ceiling[i], v/shrink))
		}
		w.residuals(c, w.try, w.bar, w.gross)
		if w.perCapita {
			for _, i := range c.independent {
				w.bar[i] *= x[i] / w.try[i]
			}
		}
		if after := w.correct(w.bar, w.bar); after <= (1-damping/4)*size {
			copy(x, w.try)
			return damping, true
		}
	}
	return damping, false
}

// polish takes full Newton steps while they shrink, and keeps the best point.
func (w *workspace) polish(c *class, x, floor []float64) bool {
	last := math.Inf(1)
	for range newtonSteps {
		w.rescale(x, floor)
		if !w.factor(c, x) {
			break
		}
		w.residuals(c, x, w.f, w.gross)
		size := w.correct(w.f, w.step)
		if !(size < last) {
			break
		}
		copy(w.try, x)
		for i := range x {
			x[i] -= w.step[i] * w.scale[i]
			if x[i] < 0 || c.frozen[i] {
				x[i] = 0
			}
		}
		last = size
		if size <= 2*epsilon {
			break
		}
	}
	return w.atRest(c, x)
}

// atRest tells whether x is a resting state to within the rounding of the
// equations there.
func (w *workspace) atRest(c *class, x []float64) bool {
	bound := w.bar
	w.residuals(c, x, w.f, w.gross)
	w.errorBound(c, x, bound)
	for i := range x {
		if !(abs(w.f[i]) <= bound[i]) {
			return false
		}
	}
	return true
}

// errorBound writes bounds on what the equations at a resting state rounded to
// float64 come to: the rounding of the evaluation, and of the amounts themselves.
func (w *workspace) errorBound(c *class, x, bound []float64) {
	n := w.sys.n
	w.sys.rounding(x, bound)
	w.sys.jacobian(x, w.jac, w.grad)
	for i := range n {
		for j := range n {
			if v := w.jac[i*n+j]; v != 0 && x[j] != 0 {
				bound[i] += 2 * epsilon * abs(v) * x[j]
			}
		}
	}
	for k, d := range c.dependent {
		_, gross := c.excess(k, x)
		bound[d] = float64(n+2) * epsilon * gross
	}
}
