package deterministic

import "math"

// The six-stage Rosenbrock method of order 4 with an embedded estimate of order
// 3, stiffly accurate and L-stable, of Hairer and Wanner, Solving Ordinary
// Differential Equations II, 2nd ed. (1996), §IV.10 (RODAS, p. 421; coefficients
// from memory: the tests confirm order 4 and the damping of stiff parts).
const rosenbrockGamma = 0.25

var (
	rosenbrockA = [5][4]float64{
		{},
		{1.544},
		{0.9466785280815826, 0.2557011698983284},
		{3.314825187068521, 2.896124015972201, 0.9986419139977817},
		{1.221224509226641, 6.019134481288629, 12.53708332932087, -0.6878860361058950},
	}
	rosenbrockC = [6][5]float64{
		{},
		{-5.6688},
		{-2.430093356833875, -0.2063599157091915},
		{-0.1073529058151375, -9.594562251023355, -20.47028614809616},
		{7.496443313967647, -10.24680431464352, -33.99990352819905, 11.70890893206160},
		{8.083246795921522, -7.981132988064893, -31.52159432874371, 16.31930543123136, -6.058818238834054},
	}
)

// integrator follows the rate equations from one point. It is scratch: one a
// goroutine.
type integrator struct {
	w         *workspace
	tolerance float64
	floor     []float64 // amounts below this are not resolved relatively
	time      float64
	h         float64
	k         [6][]float64
	next      []float64
	evals     int
}

func newIntegrator(w *workspace, tolerance float64, floor []float64) *integrator {
	g := &integrator{w: w, tolerance: tolerance, floor: floor, next: make([]float64, w.sys.n)}
	for i := range g.k {
		g.k[i] = make([]float64, w.sys.n)
	}
	return g
}

// start sets the first step from the rates at x.
func (g *integrator) start(x []float64) {
	g.time = 0
	g.w.sys.drift(x, g.next)
	fastest := 0.0
	for i, f := range g.next {
		fastest = max(fastest, abs(f)/(x[i]+g.floor[i]))
	}
	g.h = 1e-2 / fastest
	if fastest == 0 || math.IsInf(g.h, 0) || math.IsNaN(g.h) {
		g.h = 1
	}
}

// leastStep, relative to the time gone, below which the equations are not
// followed any further.
const leastStep = 1e-14

// advance makes one accepted step from x, in place, and gives the largest
// relative change in it; false where no step short enough can be taken.
func (g *integrator) advance(x []float64) (moved float64, ok bool) {
	w := g.w
	w.sys.jacobian(x, w.jac, w.grad)
	for range 60 {
		errorNorm := math.Inf(1)
		if g.stages(x) {
			errorNorm = g.errorNorm(x)
		}
		factor := 0.1
		if !math.IsInf(errorNorm, 0) {
			factor = min(max(0.9*math.Pow(errorNorm, -0.25), 0.1), 6)
		}
		if errorNorm <= 1 {
			g.time += g.h
			g.h *= factor
			return g.accept(x), true
		}
		g.h *= min(factor, 0.7)
		if g.h < leastStep*g.time || g.h == 0 {
			return 0, false
		}
	}
	return 0, false
}

// stages computes the six stages of a step of g.h from x into g.k and the result
// into g.next.
func (g *integrator) stages(x []float64) bool {
	w, n := g.w, g.w.sys.n
	d := 1 / (rosenbrockGamma * g.h)
	for i, v := range w.jac {
		w.lu.a[i] = -v
	}
	for i := range n {
		w.lu.a[i*n+i] += d
	}
	if !w.lu.factor() {
		return false
	}
	for s := range 6 {
		g.stage(x, s)
	}
	for i := range g.next {
		g.next[i] += g.k[5][i]
	}
	return true
}

// stage computes stage s; g.next is the point it is evaluated at. Stages 4 and 5
// start from the same sum, the last with stage 4 added.
func (g *integrator) stage(x []float64, s int) {
	w := g.w
	for i, v := range x {
		sum := v
		if s == 5 {
			sum = g.next[i] + g.k[4][i]
		} else {
			for j := range s {
				sum += rosenbrockA[s][j] * g.k[j][i]
			}
		}
		g.next[i] = sum
		w.try[i] = max(sum, 0)
	}
	k := g.k[s]
	w.sys.drift(w.try, k)
	g.evals++
	for i := range k {
		for j := range s {
			k[i] += rosenbrockC[s][j] / g.h * g.k[j][i]
		}
	}
	w.lu.solve(k)
}

// errorNorm is the estimated error of the step, relative to the tolerance in
// every species; a result below zero counts as an error of its size.
func (g *integrator) errorNorm(x []float64) float64 {
	worst := 0.0
	for i, e := range g.k[5] {
		scale := g.tolerance * (max(abs(x[i]), abs(g.next[i])) + g.floor[i])
		e = max(abs(e), -g.next[i])
		if !(e <= math.MaxFloat64) {
			return math.Inf(1)
		}
		worst = max(worst, e/scale)
	}
	return worst
}

func (g *integrator) accept(x []float64) float64 {
	moved := 0.0
	for i, v := range g.next {
		v = max(v, 0)
		moved = max(moved, abs(v-x[i])/(max(v, x[i])+g.floor[i]))
		x[i] = v
	}
	return moved
}
