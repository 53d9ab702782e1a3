package sde_test

import (
	"math"
	"testing"

	"holdfast/sde"
)

// alarm is the two-sided limit of a standard normal statistic whose chance to fail
// although all is right is 1e-6.
const alarm = 4.892

// ends runs a plan of one coordinate to its horizon and gives the coordinate there.
func ends(t *testing.T, p sde.Plan) []float64 {
	t.Helper()
	p.From = -1
	var out []float64
	for _, o := range run(t, p).Outcomes {
		if o.Ending != sde.Horizon || o.Time != p.Until {
			t.Fatalf("%v", o)
		}
		out = append(out, o.State[0])
	}
	return out
}

// moments gives the mean and the variance of f over x.
func moments(x []float64, f func(float64) float64) (mean, variance float64) {
	for _, v := range x {
		mean += f(v) / float64(len(x))
	}
	for _, v := range x {
		variance += (f(v) - mean) * (f(v) - mean) / float64(len(x)-1)
	}
	return mean, variance
}

// A step of the scheme on geometric Brownian motion dX = λX dt + μX dW multiplies
// by 1 + λΔ + μ√Δ Z: all moments at the end are known. The weak error
// e^{λ} − (1+λΔ)^{1/Δ} at λ = 2, μ = 1, X₀ = 1, T = 1 and steps 2⁻⁹…2⁻⁵ is 0.0287325,
// 0.0572055, 0.1133863, 0.2227799, 0.4303893 (computed; the setting is that of
// Higham, SIAM Review 43 (2001) 525). n = 8,000 to 32,000 runs a step; the statistic is the
// mean's distance over its standard error; false alarm 1e-6.
func TestGeometricWeakError(t *testing.T) {
	weak := []float64{0.0287325, 0.0572055, 0.1133863, 0.2227799, 0.4303893}
	s := line{linear(2), linear(1)}
	for k, want := range weak {
		step := math.Ldexp(1, k-9)
		n := 8_000 << min(k, 2)
		x := ends(t, sde.Plan{System: s, Start: []float64{1}, Step: step, Until: 1, Runs: n, Seed: 5, Point: uint64(k)})
		mean, _ := moments(x, func(v float64) float64 { return v })
		// Exact variance of the scheme: ((1+λΔ)²+μ²Δ)^N − (1+λΔ)^{2N}.
		steps := 1 / step
		variance := math.Pow((1+2*step)*(1+2*step)+step, steps) - math.Pow(1+2*step, 2*steps)
		z := (mean - (math.Exp(2) - want)) / math.Sqrt(variance/float64(n))
		t.Logf("step 2^%d: mean %.5f, z = %.2f", k-9, mean, z)
		if math.Abs(z) > alarm {
			t.Errorf("step %v: mean %v, z = %v", step, mean, z)
		}
	}
}
