package sde_test

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"

	"holdfast/internal/race"
	"holdfast/sde"
)

// alarm is the two-sided limit of a standard normal statistic whose chance to fail
// although all is right is 1e-6.
const alarm = 4.892

func identity(v float64) float64 { return v }
func square(v float64) float64   { return v * v }

// ends runs a plan to its horizon and gives a coordinate there.
func ends(t *testing.T, p sde.Plan, coordinate int) []float64 {
	t.Helper()
	p.From = -1
	var out []float64
	for _, o := range run(t, p).Outcomes {
		if o.Ending != sde.Horizon || o.Time != p.Until {
			t.Fatalf("%v", o)
		}
		out = append(out, o.State[coordinate])
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

// long leaves a test of a law, with its many million steps, to the run without the
// race detector.
func long(t *testing.T) {
	t.Helper()
	if race.Enabled {
		t.Skip("long under the race detector")
	}
}

// near fails the test where a mean of x is not want: the statistic is its distance
// over its standard error, from the sample; false alarm 1e-6.
func near(t *testing.T, what string, x []float64, f func(float64) float64, want float64) {
	t.Helper()
	mean, variance := moments(x, f)
	z := (mean - want) / math.Sqrt(variance/float64(len(x)))
	t.Logf("%s: %.6g, want %.6g, z = %.2f", what, mean, want, z)
	if !(math.Abs(z) <= alarm) {
		t.Errorf("%s: %v, want %v, z = %v at n = %d", what, mean, want, z, len(x))
	}
}

// varies fails the test where the variance of normal numbers x of mean 0 is not
// want: Σx²/want is χ² with n degrees of freedom; false alarm 1e-6.
func varies(t *testing.T, what string, x []float64, want float64) {
	t.Helper()
	sum := 0.0
	for _, v := range x {
		sum += v * v / want
	}
	law := distuv.ChiSquared{K: float64(len(x))}
	p := min(law.CDF(sum), law.Survival(sum))
	t.Logf("%s: variance over %.6g is %.4f, p = %.2g", what, want, sum/float64(len(x)), p)
	if !(p >= 5e-7) {
		t.Errorf("%s: variance over %v is %v at n = %d, p = %v", what, want, sum/float64(len(x)), len(x), p)
	}
}

// Geometric Brownian motion dX = λX dt + μX dW at λ = 2, μ = 1, X₀ = 1, T = 1 with
// steps 2⁻⁹…2⁻⁵, against the exact path of the same noise, which is read off the
// path of the scheme: a step multiplies by 1 + λΔ + μ√Δ Z.
//
// The rms error is 0.394691, 0.576552, 0.862220, 1.329027, 2.101790 and the weak error
// e^λ − E X 0.0287325, 0.0572055, 0.1133863, 0.2227799, 0.4303893 (both computed, by
// the moments of products of independent factors; the setting is that of Higham, SIAM
// Review 43 (2001) 525). The error has so long a tail that its square could not be
// averaged; so the runs have the noise Z + tilt·√Δ, by a drift of 2 + tilt, and
// are weighed with its likelihood (Girsanov). 1500 runs a step and tilt.
func TestGeometric(t *testing.T) {
	long(t)
	rms := []float64{0.394691, 0.576552, 0.862220, 1.329027, 2.101790}
	weak := []float64{0.0287325, 0.0572055, 0.1133863, 0.2227799, 0.4303893}
	for k := range rms {
		step := math.Ldexp(1, k-9)
		near(t, "weak error", geometricErrors(t, step, 1, uint64(2*k), identity), identity, weak[k])
		near(t, "mean square error", geometricErrors(t, step, 2, uint64(2*k+1), square), identity, rms[k]*rms[k])
	}
}

// geometricErrors gives the weighed f of exact minus scheme at the end of each run.
func geometricErrors(t *testing.T, step, tilt float64, point uint64, f func(float64) float64) []float64 {
	t.Helper()
	const runs = 1500
	var times []float64
	for k := range int(1/step) + 1 {
		times = append(times, float64(k)*step)
	}
	noise, before := make([]float64, runs), make([]float64, runs)
	p := sde.Plan{System: line{linear(2 + tilt), linear(1)}, Start: []float64{1}, Step: step, Until: 1, Runs: runs, Seed: 5, Point: point, Times: times}
	p.Sample = func(run, k int, _ float64, x []float64) {
		if k > 0 {
			noise[run] += x[0]/before[run] - 1 - (2+tilt)*step
		}
		before[run] = x[0]
	}
	out := ends(t, p, 0)
	for i, scheme := range out {
		out[i] = f(math.Exp(1.5+noise[i]+tilt)-scheme) * math.Exp(-tilt*noise[i]-tilt*tilt/2)
	}
	return out
}

// The scheme of the Ornstein–Uhlenbeck process dX = −kX dt + σ dW is an
// autoregression, X' = (1−kΔ)X + σ√Δ Z; its stationary variance is
// σ²/(2k)/(1−kΔ/2), exactly (algebra). 5000 runs a step, to (1−kΔ)^2N < 1e-12.
func TestOrnsteinUhlenbeckVariance(t *testing.T) {
	long(t)
	const k, sigma = 2, 3
	for _, step := range []float64{0.4, 0.2, 0.05, 0.0125} {
		x := ends(t, sde.Plan{
			System: line{linear(-k), constant(sigma)}, Start: []float64{0}, Step: step, Until: 8, Runs: 5000, Seed: 6,
		}, 0)
		varies(t, "Ornstein–Uhlenbeck", x, sigma*sigma/(2.0*k)/(1-k*step/2))
	}
}
