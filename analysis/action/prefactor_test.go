package action

import (
	"math"
	"testing"
)

// extinctionTime is the mean time of logistic from its resting point to no molecules:
// the sum of h_k, the mean times from k to k−1, with h_k = 1/d_k + (b_k/d_k)·h_{k+1}
// (one-step recursion; Gardiner, Handbook of Stochastic Methods).
func extinctionTime(copies float64) float64 {
	birth := func(n float64) float64 { return 2 * n }
	death := func(n float64) float64 { return 0.5*n + n*(n-1)/copies }
	h, total := 0.0, 0.0
	for n := 6 * copies; n >= 1; n-- {
		h = (1 + birth(n)*h) / death(n)
		if n <= 1.5*copies {
			total += h
		}
	}
	return total
}

// climbTime is the mean time of a chain with births Ω(0.05+x²/(1+x²)) and deaths
// Ω 0.5x from one amount up to another, by the same recursion upwards.
func climbTime(copies, from, to float64) float64 {
	h, total := 0.0, 0.0
	for n := 0.0; n < math.Round(to*copies); n++ {
		x := n / copies
		h = (1 + 0.5*n*h) / (copies * (0.05 + x*x/(1+x*x)))
		if n >= math.Round(from*copies) {
			total += h
		}
	}
	return total
}

const leakyChain = `
title = "one-step latch"
time = "min"
copies = 100
[species]
p = { start = 0, readout = true }
[[reaction]]
name = "expression"
makes = { p = 1 }
rate = "0.05 + p^2/(1+p^2)"
[[reaction]]
name = "dilution"
uses = { p = 1 }
mass_action = "0.5"
`

// TestPrefactor carries mean times of two chains, known at any copies, on from fewer
// copies to many: they must lie in the interval. The first dies out, and its power of
// copies is −1/2; with a power of 0 it would be off by half the logarithm of the
// factor between the copies, far outside.
func TestPrefactor(t *testing.T) {
	leaky := exponent(t, routes(t, parse(t, leakyChain, nil)), "low", "high")
	from, to := leaky.Points[0][0], leaky.Points[len(leaky.Points)-1][0]
	for name, c := range map[string]struct {
		path *Path
		time func(copies float64) float64
		most float64
	}{
		"extinction": {exponent(t, routes(t, parse(t, logistic, nil)), "only", Absorbed), extinctionTime, 24},
		"climb":      {leaky, func(copies float64) float64 { return climbTime(copies, from, to) }, 7 / leaky.S},
	} {
		f := Prefactor{Power: PowerOf(c.path)}
		for _, share := range []float64{0.5, 0.7, 1} {
			copies := math.Round(share * c.most)
			f.Add(copies, math.Log(c.time(copies)), c.path.S)
		}
		for _, times := range []float64{2, 4, 8, 16} {
			copies := math.Round(times * c.most)
			log, half := f.At(copies)
			want := math.Log(c.time(copies)) - copies*c.path.S
			if math.Abs(log-want) > half || half > 0.2 {
				t.Errorf("%s at %v copies: log %.5f ± %.5f, want %.5f", name, copies, log, half, want)
			}
		}
	}
}

// TestPrefactorErrors: with standard errors the interval is at least 1.96 of those that
// the polynomial carries on: for two points at 10 and 20 copies, at ∞, 2 and −1.
func TestPrefactorErrors(t *testing.T) {
	f := Prefactor{Copies: []float64{10, 20}, Logs: []float64{3, 3}, Deviations: []float64{0.01, 0.02}}
	log, half := f.At(1e300)
	near(t, "log", log, 3, 1e-12)
	near(t, "half", half, 1.96*math.Hypot(0.01, 0.04), 1e-9)
}
