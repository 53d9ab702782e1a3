package branch

import "math"

// equations is as many equations as unknowns.
type equations interface {
	columns() int
	evaluate(u, out, jac []float64)
}

// newton solves square equations from u, in place, unknowns in units of weight.
// The last step is left to quadratic convergence: steps go on while they shrink.
func newton(e equations, u, weight []float64) bool {
	n := e.columns()
	out, jac := make([]float64, n), make([]float64, n*n)
	last := math.Inf(1)
	for range 2 * newtonSteps {
		e.evaluate(u, out, jac)
		for i := range n {
			for j := range n {
				jac[i*n+j] *= weight[j]
			}
		}
		s, ok := factor(jac, n)
		if !ok || !s.solve(out) {
			return false
		}
		size := largest(out)
		if size >= last && last <= coarseStep {
			return true
		}
		if size > 10*last || size > 10 {
			return false
		}
		for j := range u {
			u[j] -= out[j] * weight[j]
		}
		if size <= fineStep {
			return true
		}
		last = size
	}
	return last <= coarseStep
}
