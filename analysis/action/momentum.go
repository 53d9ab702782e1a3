package action

import "math"

const (
	// boldest is the largest change of an exponent ν·θ in one step of the search for
	// the momenta: a factor of 5 in the rate that a path makes of a reaction's.
	boldest = 1.6
	// momentumSteps is the most such steps. From rest they are four to eight, and one
	// or two from the momenta of a path near by.
	momentumSteps = 200
	// momentumTolerance ends the search, as the square of the last relative step: the
	// steps converge quadratically, so that what is left is about its square.
	momentumTolerance = 1e-14
)

// momenta finds the momenta p that belong to the direction v at the point of at:
// H(p) = 0 and H_θ = λ v with λ ≥ 0. p is where the search starts, and is
// overwritten. It is Newton's method for the pair (p, λ), with H = 0 kept to second
// order (Heymann and Vanden-Eijnden, Comm. Pure Appl. Math. 61 (2008) 1052, §3.2).
// False where no reactions go that way.
func (l *local) momenta(v, p []float64) (lambda float64, ok bool) {
	m := l.sys.m
	if !l.evaluate(p) {
		clear(p)
		if !l.evaluate(p) {
			return 0, false
		}
	}
	last := false
	for range momentumSteps {
		if !factorise(l.hpp, m) {
			return 0, false
		}
		copy(l.u, l.hp)
		solveFactor(l.hpp, m, l.u)
		copy(l.w, v)
		solveFactor(l.hpp, m, l.w)
		energy, along := dot(l.hp, l.u), dot(v, l.w)
		if !(along > 0) {
			return 0, false
		}
		lambda = math.Sqrt(max(energy-2*l.h, 0) / along)
		if last {
			return lambda, true
		}
		size := l.newtonStep(lambda, v)
		scale := lambda*lambda*along + energy
		last = size <= momentumTolerance*scale+l.blur()
		if !l.move(p) {
			return 0, false
		}
	}
	return 0, false
}

// blur is the square, in the metric of newtonStep, below which a step is rounding: H_θ
// is a sum of a·c, each off by a few ε of itself, and (Σ aηc)ᵀM⁻¹(Σ aηc) ≤ Σ aη² by
// Cauchy and Schwarz, since M = Σ a c cᵀ.
func (l *local) blur() float64 {
	const few = 8 * 0x1p-52
	sum := 0.0
	for c, a := range l.rate {
		sum += a * math.Exp(l.exponent[c])
	}
	return few * few * sum
}

// newtonStep finds step = λ M⁻¹v − M⁻¹H_θ, M = H_θθ, and its square in the metric of M.
func (l *local) newtonStep(lambda float64, v []float64) float64 {
	for i := range l.step {
		l.step[i] = lambda*l.w[i] - l.u[i]
	}
	return dot(l.step, v)*lambda - dot(l.step, l.hp)
}

// move goes the step from p, shortened where an exponent would change too much or
// a burst's pole be passed.
func (l *local) move(p []float64) bool {
	most := 0.0
	for c := range l.sys.channels {
		ch := &l.sys.channels[c]
		most = max(most, math.Abs(dot(ch.change, l.step)))
		for i := range ch.bursts {
			most = max(most, math.Abs(dot(ch.bursts[i].change, l.step)))
		}
	}
	t := min(1, boldest/most)
	if !(most <= math.MaxFloat64) {
		return false
	}
	for range 60 {
		copy(l.trial, p)
		addScaled(l.trial, t, l.step)
		if l.evaluate(l.trial) {
			copy(p, l.trial)
			return true
		}
		t /= 2
	}
	return false
}
