package sde_test

import (
	"math"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"
	"gonum.org/v1/gonum/mat"

	"holdfast/internal/zoo"
	"holdfast/model"
	"holdfast/sde"
)

// above is the core at or above a value, in cells; the value must be half a cell
// above a whole number of them.
func above(value, cell float64) []model.Core {
	return []model.Core{{State: "target", Low: []int64{int64(math.Round(value/cell + 0.5))}, High: []int64{math.MaxInt64}}}
}

// passages gives the times of runs from a start to a value above it.
func passages(t *testing.T, p sde.Plan, from, to float64) []float64 {
	t.Helper()
	p.From, p.Start = -1, []float64{from}
	if p.Cell == 0 {
		p.Cell = 1
	}
	p.Cores = above(to, p.Cell)
	var out []float64
	for _, o := range run(t, p).Outcomes {
		if o.Ending != sde.Flipped {
			t.Fatalf("%v", o)
		}
		out = append(out, o.Time)
	}
	return out
}

// schemePassage gives the mean time that the scheme itself takes, at this step, from a
// start to the first step that ends at or above to; see schemePassages.
func schemePassage(s sde.System, step, from, low, to float64) float64 {
	return schemePassages(s, step, low, to)(from)
}

// schemePassages gives the mean time that the scheme itself takes, at this step, to the
// first step that ends at or above to, by its start: the Markov chain with the normal
// kernel of a step, solved on the points of Gauss and Legendre, closer than the
// narrowest kernel (computed; the method of Nyström). Below low there must be
// nothing of weight.
func schemePassages(s sde.System, step, low, to float64) func(from float64) float64 {
	narrowest := math.Inf(1)
	for k := range 101 {
		_, g := rates(s, low+(to-low)*float64(k)/100)
		narrowest = min(narrowest, g*math.Sqrt(step))
	}
	n := int((to-low)/narrowest*2) + 20
	x, weight := make([]float64, n), make([]float64, n)
	quad.Legendre{}.FixedLocations(x, weight, low, to)
	kernel := func(from float64, k int) float64 {
		f, g := rates(s, from)
		z := (x[k] - from - f*step) / (g * math.Sqrt(step))
		return weight[k] * math.Exp(-z*z/2) / (g * math.Sqrt(2*math.Pi*step))
	}
	a, b, times := mat.NewDense(n, n, nil), mat.NewVecDense(n, nil), mat.NewVecDense(n, nil)
	for i := range n {
		for k := range n {
			a.Set(i, k, -kernel(x[i], k))
		}
		a.Set(i, i, 1+a.At(i, i))
		b.SetVec(i, step)
	}
	err := times.SolveVec(a, b)
	return func(from float64) float64 {
		mean := step
		for k := range n {
			mean += kernel(from, k) * times.AtVec(k)
		}
		if err != nil {
			return math.NaN()
		}
		return mean
	}
}

func rates(s sde.System, x float64) (drift, noise float64) {
	var f, g [1]float64
	s.Drift(f[:], []float64{x})
	s.Noise(g[:], []float64{x})
	return f[0], g[0]
}

// levels are the schemePassages at the steps Δ, Δ/4, Δ/16, Δ/64.
func levels(s sde.System, step, low, to float64) (out [4]func(float64) float64) {
	for k := range out {
		out[k] = schemePassages(s, step/math.Pow(4, float64(k)), low, to)
	}
	return out
}

// limit extrapolates passage times, whose errors go in powers of √Δ, to no step
// (Richardson), and gives the last improvement too.
func limit(passages [4]func(float64) float64, from float64) (value, change float64) {
	var t [4]float64
	for k, p := range passages {
		t[k] = p(from)
	}
	for order := 1; order < len(t); order++ {
		c := math.Pow(2, float64(order))
		for k := 0; k+order < len(t); k++ {
			t[k] = (c*t[k+1] - t[k]) / (c - 1)
		}
		if order == 2 {
			change = t[1]
		}
	}
	return t[0], t[0] - change
}

// Mean times of dX = (X − X³)dt + √(2D)dW from −1 to 0 and to 1 (computed by
// quadrature): D = 0.1: 30.82130, 66.26863; D = 0.2: 7.934022, 19.09390. The runs are
// held against the mean time of the scheme at their step, n = 2000; that, at steps that go
// to zero, against the values, to the change by the last order of extrapolation.
func TestDoubleWell(t *testing.T) {
	long(t)
	const cell = 1e-3
	for _, c := range []struct{ d, to, want float64 }{{0.1, 0, 30.82130}, {0.2, 0, 7.934022}, {0.2, 1, 19.09390}} {
		s, to := doubleWell{c.d}, c.to-cell/2
		x := passages(t, sde.Plan{System: s, Step: 0.02, Cell: cell, Runs: 2000, Seed: 7}, -1, to)
		near(t, "double well", x, identity, schemePassage(s, 0.02, -1, -3, to))
		tends(t, levels(s, 0.04, -2.6, c.to), -1, c.want)
	}
}

// tends holds the limit of the scheme's passage times against a value.
func tends(t *testing.T, passages [4]func(float64) float64, from, want float64) {
	t.Helper()
	got, change := limit(passages, from)
	t.Logf("limit from %v: %.6g, want %.6g; last change %.2g", from, got, want, change)
	if !(math.Abs(got-want) <= math.Abs(change)+1e-4*want) {
		t.Errorf("limit from %v: %v, want %v; last change %v", from, got, want, change)
	}
}

// Mean times of dX = (−1e-3X³+0.75X²−165X+1e4)dt + 200dW to 250 from 0, 200, 245:
// 59.4871, 52.4663, 7.64529 (published: data to the example in Erban and Chapman,
// Stochastic Modelling of Reaction–Diffusion Processes, CUP 2020, attribution from
// memory; quadrature agrees). n = 200 a start.
func TestCubicDrift(t *testing.T) {
	long(t)
	s := line{func(x float64) float64 { return ((-1e-3*x+0.75)*x-165)*x + 1e4 }, constant(200)}
	coarse, fine := schemePassages(s, 0.004, -100, 249.5), levels(s, 4e-4, -30, 250)
	for _, c := range []struct{ from, want float64 }{{0, 59.4871}, {200, 52.4663}, {245, 7.64529}} {
		x := passages(t, sde.Plan{System: s, Step: 0.004, Runs: 200, Seed: 8}, c.from, 249.5)
		near(t, "cubic drift", x, identity, coarse(c.from))
		tends(t, fine, c.from, c.want)
	}
}

// Passage of the saddle-node dX = (μ+X²)dt + √(2D)dW from −∞ to +∞: at μ = 0
// T = 4.976054 D^{−1/3}; at D = 0.01, μ = −0.1: 739.4847 (computed). From −a to a it is
// shorter by 2∫_a^∞ dx/(μ+x²), to D/a⁴ of that. n = 2000 and 100. The paths
// rush past a, so the scheme's time has an error of first order in the step;
// extrapolated, it is held to the change that this makes.
func TestSaddleNode(t *testing.T) {
	long(t)
	const d, a, cell = 0.01, 3, 1e-3
	for _, c := range []struct {
		mu, want float64
		runs     int
	}{{0, 4.976054 / math.Cbrt(d), 2000}, {-0.1, 739.4847, 100}} {
		s := line{func(x float64) float64 { return c.mu + x*x }, constant(math.Sqrt(2 * d))}
		x := passages(t, sde.Plan{System: s, Step: 0.02, Cell: cell, Runs: c.runs, Seed: 9}, -a, a-cell/2)
		fine, coarse := schemePassage(s, 0.02, -a, -a-0.6, a-cell/2), schemePassage(s, 0.04, -a, -a-0.6, a-cell/2)
		near(t, "saddle-node", x, identity, fine)
		if got, want := 2*fine-coarse, c.want-tail(c.mu, a); math.Abs(got-want) > math.Abs(fine-coarse) {
			t.Errorf("saddle-node without a step: %v, want %v; at the step %v", got, want, fine)
		}
	}
}

// tail is 2∫_a^∞ dx/(μ+x²).
func tail(mu, a float64) float64 {
	if mu == 0 {
		return 2 / a
	}
	r := math.Sqrt(-mu)
	return math.Log((a+r)/(a-r)) / r
}

// The chain of Schlögl as a network: runs from 100 to 400 against the scheme's own
// mean time, n = 500. (The exact chain takes 28.6719 min.)
func TestSchlogl(t *testing.T) {
	long(t)
	s := sde.Chemical(zoo.Schlogl())
	x := passages(t, sde.Plan{System: s, Step: 0.002, Runs: 500, Seed: 10}, 100, 399.5)
	near(t, "Schlögl", x, identity, schemePassage(s, 0.002, 100, 0, 399.5))
}
