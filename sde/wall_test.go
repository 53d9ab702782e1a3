package sde_test

import (
	"fmt"
	"math"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"
	"gonum.org/v1/gonum/mat"

	"holdfast/internal/zoo"
	"holdfast/sde"
)

// wallMean gives the stationary mean of the scheme for immigration–death reflected at 0: the
// Markov chain with the kernel of a step folded at 0, its stationary law found by
// solving for it on the points of Gauss and Legendre in √x (computed).
func wallMean(in, out, step float64) float64 {
	const n = 400
	y, weight := make([]float64, n), make([]float64, n)
	quad.Legendre{}.FixedLocations(y, weight, 0, math.Sqrt(12+8*in/out))
	a, b, p := mat.NewDense(n, n, nil), mat.NewVecDense(n, nil), mat.NewVecDense(n, nil)
	for i := range n {
		for k := range n {
			x := y[k] * y[k]
			m, s := x+step*(in-out*x), math.Sqrt(step*(in+out*x))
			bell := func(z float64) float64 { return math.Exp(-(z-m)*(z-m)/(2*s*s)) / (s * math.Sqrt(2*math.Pi)) }
			a.Set(i, k, -(bell(y[i]*y[i])+bell(-y[i]*y[i]))*2*y[k]*weight[k])
		}
		a.Set(i, i, 1+a.At(i, i))
	}
	for k := range n { // one equation is the others' sum; the norm takes its place
		a.Set(0, k, 2*y[k]*weight[k])
	}
	b.SetVec(0, 1)
	if err := p.SolveVec(a, b); err != nil {
		return math.NaN()
	}
	mean := 0.0
	for k := range n {
		mean += p.AtVec(k) * y[k] * y[k] * 2 * y[k] * weight[k]
	}
	return mean
}

// reflectedMean is the stationary mean of the equation itself, without a step: the density
// is (in + out x)^{4 in/out−1} e^{−2x} up to a factor (computed: no flux through the wall).
func reflectedMean(in, out float64) float64 {
	density := func(x float64) float64 { return math.Exp((4*in/out-1)*math.Log(in+out*x) - 2*x - 50*in/out) }
	top := 40 + 8*in/out
	norm := quad.Fixed(density, 0, top, 1000, nil, 0)
	return quad.Fixed(func(x float64) float64 { return x * density(x) }, 0, top, 1000, nil, 0) / norm
}

// What the wall at 0 does to immigration–death with mean 2: runs are held against the
// stationary mean of the scheme at their step, n = 8000; and that tends to the mean
// of the reflected equation as the step does to 0, at which the exact mean is missed still.
func TestWall(t *testing.T) {
	s := sde.Chemical(zoo.ImmigrationDeath(2, 1))
	limit := reflectedMean(2, 1)
	before := math.Inf(1)
	for _, step := range []float64{0.4, 0.2, 0.1, 0.05} {
		mean := wallMean(2, 1, step)
		near(t, "mean at the wall", ends(t, sde.Plan{System: s, Start: []float64{2}, Step: step, Until: 8, Runs: 8000, Seed: 16}, 0), identity, mean)
		t.Logf("step %v: scheme %.6f, equation %.6f", step, mean, limit)
		if math.Abs(mean-limit) > before*0.6 {
			t.Errorf("step %v: the scheme's mean is %v, that without a step %v: twice the step was %v off", step, mean, limit, before)
		}
		before = math.Abs(mean - limit)
	}
	for mean, off := range map[float64]string{1: "0.21", 2: "0.063", 5: "0.0037", 10: "5.6e-05"} { // as Chemical states
		if got := fmt.Sprintf("%.2g", reflectedMean(mean, 1)/mean-1); got != off {
			t.Errorf("at a mean of %v molecules the reflected equation is off by %v, not %v", mean, got, off)
		}
	}
}
