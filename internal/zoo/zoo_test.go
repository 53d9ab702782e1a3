package zoo

import (
	"math"
	"testing"

	"holdfast/model"
)

// residual is the largest |dx/dt| of the rate equations at x.
func residual(n *model.Network, x ...float64) float64 {
	worst := 0.0
	for i := range x {
		sum := 0.0
		for r := range n.Reactions {
			sum += n.AmountChange(r, i) * n.Flux(r, x)
		}
		worst = max(worst, math.Abs(sum))
	}
	return worst
}

// TestStatesRest checks that every known state is at rest in its network; the
// tolerance is the digits that the state is given with times the steepest slope.
func TestStatesRest(t *testing.T) {
	latch := Latch(100)
	for _, s := range LatchStates() {
		check(t, "latch", residual(latch, s[0], s[1]), 1e-14)
	}
	saddle, sink := LeaklessStates(0.45, 0.9)
	leakless := LeaklessLatch(0.45, 0.9, 100)
	for _, x := range []float64{0, saddle, sink} {
		check(t, "leakless latch", residual(leakless, 0.45*x, x), 1e-14)
	}
	low, high := SymmetricStates(3)
	mid := SymmetricSaddle(3)
	sym := SymmetricRepression(3, 10)
	check(t, "symmetric repression", residual(sym, low, high), 1e-14)
	check(t, "symmetric repression", residual(sym, mid, mid), 1e-14)
	powers, _ := SchloglRoots()
	for _, x := range powers {
		check(t, "Schlögl", residual(Schlogl(), x), 1e-9)
	}
	ind := InducibleRepression(0, 1)
	for _, u := range InducibleStates() {
		v := 15.6 / (1 + u)
		check(t, "inducible", residual(ind, u, v), 0.02) // six digits of u, slope to 40
	}
}

func check(t *testing.T, name string, got, tolerance float64) {
	t.Helper()
	if !(got <= tolerance) {
		t.Errorf("%s: dx/dt = %g at a resting state, want at most %g", name, got, tolerance)
	}
}

// TestFoldsSingular checks that the Jacobian is singular at each known fold.
func TestFoldsSingular(t *testing.T) {
	for _, n := range []float64{2, 3, 4} {
		ratio, x := SelfActivatorFold(n)
		net := SelfActivator(ratio, 1, 1, n, 1)
		check(t, "self-activator", residual(net, x), 1e-14)
		check(t, "self-activator slope", math.Abs(slope(net, x)), 1e-14)
	}
	for _, x := range []float64{0.2, 1 / math.Sqrt(3), 0.9} {
		r, s := LeakyFold(x)
		net := LeakyActivator(r, s, 1)
		check(t, "leaky activator", residual(net, x), 1e-15)
		check(t, "leaky activator slope", math.Abs(slope(net, x)), 1e-15)
	}
}

// slope is d(dx/dt)/dx of a one-species network.
func slope(n *model.Network, x float64) float64 {
	sum, dx := 0.0, make([]float64, 1)
	for r := range n.Reactions {
		n.FluxGradient(r, []float64{x}, dx)
		sum += n.AmountChange(r, 0) * dx[0]
	}
	return sum
}

// TestFoldsPublished holds the fold formulas against the digits they are quoted with.
func TestFoldsPublished(t *testing.T) {
	quoted := map[float64][3]float64{ // n: β/(γK), x/K; 0 where not quoted
		2: {2, 1, 2}, 3: {1.8898816, 1.2599210, 1.1905508}, 4: {1.7547654, 1.3160740, 0},
	}
	for n, want := range quoted {
		ratio, x := SelfActivatorFold(n)
		got := [3]float64{ratio, x, SymmetricPitchfork(n)}
		for i, w := range want {
			if w != 0 && math.Abs(got[i]-w) > 0.5e-7 {
				t.Errorf("n = %v: fold value %d is %.9f, want %.7f", n, i, got[i], w)
			}
		}
	}
	if got := SymmetricPitchfork(2.5); math.Abs(got-1.4171383) > 0.5e-7 {
		t.Errorf("pitchfork at n = 2.5 is %.9f, want 1.4171383", got)
	}
}

// TestChainMean checks that the means of a chain add to its molecules.
func TestChainMean(t *testing.T) {
	sum := 0.0
	for i := range 9 {
		sum += ChainMean(8, i, 0.7, 100, 3)
	}
	if math.Abs(sum-100) > 1e-11 {
		t.Errorf("the chain's means sum to %v, want 100", sum)
	}
	if n := Chain(8, 1, 10); len(n.Reactions) != 8 || len(n.Species) != 9 {
		t.Errorf("the chain has %d reactions and %d species", len(n.Reactions), len(n.Species))
	}
}

// TestPropensities checks the combinatorics of the networks that have any.
func TestPropensities(t *testing.T) {
	s := Schlogl()
	want := []float64{2.5e-4 * 10 * 9 * 8, 0.18 * 10 * 9, 375, 2200}
	for r, w := range want {
		if got := s.Propensity(r, []int64{10}); math.Abs(got-w) > 1e-12*w {
			t.Errorf("Schlögl %s: propensity %v, want %v", s.Reactions[r].Name, got, w)
		}
	}
	d := DimerSwitch()
	if got := d.Propensity(0, []int64{3, 0, 0, 0, 1, 0, 0, 0}); got != 5*3*2 {
		t.Errorf("dimer join: propensity %v, want 30", got)
	}
	if n := len(d.Reactions); n != 18 {
		t.Errorf("the dimer switch has %d reactions, want 18", n)
	}
}
