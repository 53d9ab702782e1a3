package deterministic

import (
	"math"
	"math/rand/v2"
	"testing"

	"holdfast/internal/zoo"
)

// TestDriftLatch: the latch's rate equations written out by hand.
func TestDriftLatch(t *testing.T) {
	n := zoo.Latch(100)
	x := []float64{0.3, 1.7}
	dx := make([]float64, 2)
	Drift(n, x, dx)
	h := x[1] * x[1] / (1 + x[1]*x[1])
	near(t, "transcript", dx[0], 0.02+h-x[0], 1e-15)
	near(t, "protein", dx[1], x[0]-0.45*x[1], 1e-15)
	j := Jacobian(n, x)
	want := []float64{-1, 2 * x[1] / math.Pow(1+x[1]*x[1], 2), 1, -0.45}
	for k := range want {
		near(t, "Jacobian", j[k], want[k], 1e-15)
	}
}

// TestDriftUnits: with fixed-count species a reaction that changes one moves the
// others by 1/copies of an amount.
func TestDriftUnits(t *testing.T) {
	d := newDraft(50, "site", "bound", "x")
	d.Species[0].Fixed, d.Species[1].Fixed = true, true
	d.Species[0].Start = 1
	d.add(terms(0, 2), nil, terms(1), 3)
	n := d.network(t)
	dx := make([]float64, 3)
	Drift(n, []float64{0.5, 0.5, 2}, dx)
	for i, want := range []float64{-3, 3, -3.0 / 50} {
		near(t, n.Species[i].Name, dx[i], want, 1e-15)
	}
}

// TestJacobianDifferences holds the Jacobian against central differences at random
// points: their error is h²f‴/6 plus rounding ε·gross/h, below 1e-6 of the gross
// rates for h = 1e-5 of the amounts.
func TestJacobianDifferences(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 8))
	n := zoo.DimerSwitch()
	s := newSystem(n)
	for range 20 {
		x, up, down := make([]float64, s.n), make([]float64, s.n), make([]float64, s.n)
		gross := make([]float64, s.n)
		for i := range x {
			x[i] = logUniform(r, 0.1, 10)
		}
		s.turnover(x, up, gross)
		j := Jacobian(n, x)
		for k := range x {
			h := 1e-5 * x[k]
			y := append([]float64(nil), x...)
			y[k] = x[k] + h
			s.drift(y, up)
			y[k] = x[k] - h
			s.drift(y, down)
			for i := range x {
				got, want := j[i*s.n+k], (up[i]-down[i])/(2*h)
				if math.Abs(got-want) > 1e-6*gross[i]/x[k] {
					t.Errorf("∂%d/∂%d = %g, differences give %g", i, k, got, want)
				}
			}
		}
	}
}

// TestRounding: the bound on the rounding of the rates holds against the same sum in
// which each law is scaled by a power of two, which rounds alike, and against
// equations written another way: p²/(1+p²) as 1/(1+1/p²).
func TestRounding(t *testing.T) {
	s := newSystem(zoo.Latch(100))
	dx, bound := make([]float64, 2), make([]float64, 2)
	for k := range 100 {
		x := []float64{1 / float64(k+3), float64(k)/7 + 0.1}
		s.drift(x, dx)
		s.rounding(x, bound)
		other := 0.02 + 1/(1+1/(x[1]*x[1])) - x[0]
		if d := math.Abs(dx[0] - other); d > 2*bound[0] || bound[0] > 20*epsilon*(0.02+1+x[0]) {
			t.Errorf("at %v: two ways differ by %g, bound %g", x, d, bound[0])
		}
	}
}
