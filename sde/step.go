package sde

import (
	"errors"
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
)

// goodStep is the step that StepFor gives, in the time of the fastest mode. The
// variance of a mode of rate k is too large by the factor 1/(1−kΔ/2), 1 % at this.
const goodStep = 0.02

// eigenSize is the largest dimension for which the rates of modes are worked out;
// beyond it they are bounded by the norm of the Jacobian matrix.
const eigenSize = 128

// StepFor gives a step, in the system's time unit, that is good for the system at
// the points, coordinates each: 0.02 over the fastest rate there, the largest
// magnitude of an eigenvalue of the drift's Jacobian matrix. Resting states are
// the points to give. +Inf means that nothing moves at any rate.
//
// The error of the step is of its first order in means and variances: a mode of
// rate k gets the stationary variance σ²/(2k)/(1−kΔ/2) instead of σ²/(2k). Times of
// entering a core have one of order √Δ, since paths are looked at at the end of each
// step only: a core seems farther away by 0.5826 σ√Δ, with σ the noise across its
// border (Broadie, Glasserman, Kou, Math. Finance 7 (1997) 325, from memory).
func StepFor(s System, points ...[]float64) float64 {
	fastest := 0.0
	for _, x := range points {
		for _, v := range modes(s, x) {
			fastest = max(fastest, math.Hypot(real(v), imag(v)))
		}
	}
	return goodStep / fastest
}

// LargestStep gives the largest good step, in the system's time unit, at the
// points: the least |Re λ|/|λ|² of the eigenvalues λ of the drift's Jacobian matrix
// that have a negative real part. Beyond it a mode overshoots its rest at every step; at twice that,
// the path of the linear system grows without bound. +Inf means that no step is too
// large.
func LargestStep(s System, points ...[]float64) float64 {
	largest := math.Inf(1)
	for _, x := range points {
		for _, v := range modes(s, x) {
			if real(v) < 0 {
				size := math.Hypot(real(v), imag(v))
				largest = min(largest, -real(v)/size/size)
			}
		}
	}
	return largest
}

// modes gives the eigenvalues of the drift's Jacobian matrix at x; beyond
// eigenSize, or where they cannot be had, minus its norm. Those that are 0 to the
// accuracy of differences are left out.
func modes(s System, x []float64) []complex128 {
	n := s.Dimension()
	j := jacobian(s, x)
	norm := mat.Norm(j, math.Inf(1))
	if !(norm > 0) || math.IsInf(norm, 0) {
		return nil
	}
	var eigen mat.Eigen
	if n > eigenSize || !eigen.Factorize(j, mat.EigenNone) {
		return []complex128{complex(-norm, 0)}
	}
	var out []complex128
	for _, v := range eigen.Values(nil) {
		if math.Hypot(real(v), imag(v)) > 1e-7*norm {
			out = append(out, v)
		}
	}
	return out
}

// jacobian gives that of the drift at x by central differences, one-sided at a bound.
func jacobian(s System, x []float64) *mat.Dense {
	n := s.Dimension()
	low, high := s.Bounds()
	j := mat.NewDense(n, n, nil)
	at := append([]float64(nil), x...)
	up, down := make([]float64, n), make([]float64, n)
	for k := range n {
		d := 1e-5 * max(math.Abs(x[k]), 1e-3)
		right := min(x[k]+d, boundAt(high, k, math.Inf(1)))
		left := max(x[k]-d, boundAt(low, k, math.Inf(-1)))
		at[k] = right
		s.Drift(up, at)
		at[k] = left
		s.Drift(down, at)
		at[k] = x[k]
		for i := range n {
			j.Set(i, k, (up[i]-down[i])/(right-left))
		}
	}
	return j
}

// withStep gives the plan with its step chosen, or refuses the one asked for.
func (p Plan) withStep() (Plan, error) {
	points := [][]float64{p.Start}
	for _, c := range p.Cores {
		if c.Center != nil {
			points = append(points, scaled(c.Center, p.Cell))
		}
	}
	if largest := LargestStep(p.System, points...); p.Step > largest {
		return p, &StepError{p.Step, largest}
	}
	if p.Step == 0 {
		p.Step = StepFor(p.System, points...)
	}
	if !(p.Step > 0) || p.Step > longest {
		return p, errors.New("no step can be chosen, since nothing moves at any rate at the start and the cores; give one")
	}
	if p.Until/p.Step > mostSteps || last(p.Times)/p.Step > mostSteps {
		return p, fmt.Errorf("step %v is too small: it takes more than 2⁵³ steps to the end", p.Step)
	}
	if p.Until > 0 {
		p.steps = max(1, int64(math.Ceil(p.quotient(p.Until))))
		p.Step = p.Until / float64(p.steps)
	}
	return p, nil
}

func scaled(x []float64, by float64) []float64 {
	out := make([]float64, len(x))
	for i, v := range x {
		out[i] = v * by
	}
	return out
}

func last(times []float64) float64 {
	if len(times) == 0 {
		return 0
	}
	return times[len(times)-1]
}

// quotient gives t over the step; a quotient that is whole but for rounding is whole.
func (p *Plan) quotient(t float64) float64 {
	q := t / p.Step
	if r := math.Round(q); math.Abs(q-r) <= 0x1p-50*r {
		return r
	}
	return q
}

// stepOf gives the last step that ends not later than time t.
func (p *Plan) stepOf(t float64) int64 { return int64(p.quotient(t)) }

// timeOf gives the time after a number of steps.
func (j *job) timeOf(steps int64) float64 {
	if j.steps > 0 && steps == j.steps {
		return j.Until
	}
	return float64(steps) * j.Step
}
