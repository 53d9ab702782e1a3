package deterministic

import (
	"fmt"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
)

// countStates checks the number of resting states.
func countStates(t *testing.T, name string, n *model.Network, want int) {
	t.Helper()
	if m := survey(t, n); len(m.States) != want {
		t.Errorf("%s: %d states, want %d", name, len(m.States), want)
	}
}

// TestFolds checks the number of states on both sides of published folds, as near
// as the digits of the sources allow.
func TestFolds(t *testing.T) {
	// β/(γK) at the fold is n/(n−1)^{(n−1)/n} (algebra); state 0 is always there.
	for _, n := range []float64{2, 2.5, 3, 4} {
		ratio, _ := zoo.SelfActivatorFold(n)
		for _, e := range []float64{1e-2, 1e-6, 1e-10} {
			countStates(t, fmt.Sprint("self-activator above, n = ", n), zoo.SelfActivator(ratio*(1+e), 1, 1, n, 100), 3)
			countStates(t, fmt.Sprint("self-activator below, n = ", n), zoo.SelfActivator(ratio*(1-e), 1, 1, n, 100), 1)
		}
	}
	// Griffith, J. Theor. Biol. 20 (1968) 209: fold at ab = 1/2.
	for _, e := range []float64{1e-2, 1e-6, 1e-10} {
		countStates(t, "latch inside", zoo.LeaklessLatch(0.5*(1-e), 1, 100), 3)
		countStates(t, "latch outside", zoo.LeaklessLatch(0.5*(1+e), 1, 100), 1)
	}
	// Gardner, Cantor, Collins, Nature 403 (2000) 339, constants from memory; the
	// fold at I = 3.923e-5 M is computed, to the digits given.
	countStates(t, "inducer below", zoo.InducibleRepression(3.9225e-5, 1), 3)
	countStates(t, "inducer above", zoo.InducibleRepression(3.9235e-5, 1), 1)
}

// TestLeakyFolds: three states between the branches of the fold curve, one outside
// (Lewis, Slack, Wolpert, J. Theor. Biol. 65 (1977) 579, from memory; algebra
// re-derived). On the branch x < 1/√3 a larger r leads in, on the other out.
func TestLeakyFolds(t *testing.T) {
	for _, x := range []float64{0.1, 0.3, 0.5, 0.55} {
		r, s := zoo.LeakyFold(x)
		for _, e := range []float64{1e-5, 1e-9} {
			countStates(t, fmt.Sprint("inside, x = ", x), zoo.LeakyActivator(r*(1+e), s, 100), 3)
			countStates(t, fmt.Sprint("outside, x = ", x), zoo.LeakyActivator(r*(1-e), s, 100), 1)
		}
	}
	for _, x := range []float64{0.61, 0.7, 0.9} {
		r, s := zoo.LeakyFold(x)
		for _, e := range []float64{1e-5, 1e-9} {
			countStates(t, fmt.Sprint("inside, x = ", x), zoo.LeakyActivator(r*(1-e), s, 100), 3)
			countStates(t, fmt.Sprint("outside, x = ", x), zoo.LeakyActivator(r*(1+e), s, 100), 1)
		}
	}
	// Beyond the cusp at s = 1/8 there is one state whatever r.
	for _, r := range []float64{0.3, 0.5, 0.6495, 0.8, 1} {
		countStates(t, fmt.Sprint("beyond the cusp, r = ", r), zoo.LeakyActivator(r, 0.126, 100), 1)
	}
}

// TestPitchforks: one state below a = n(n−1)^{−(n+1)/n}, three above (computed;
// algebra), to the seven digits of the printed thresholds and closer.
func TestPitchforks(t *testing.T) {
	for n, quoted := range map[float64]float64{2: 2, 2.5: 1.4171383, 3: 1.1905508} {
		for _, e := range []float64{1e-2, 1e-5, 1e-7} {
			countStates(t, fmt.Sprint("above, n = ", n), zoo.AsymmetricRepression(quoted*(1+e), quoted*(1+e), n, n, 100), 3)
			countStates(t, fmt.Sprint("below, n = ", n), zoo.AsymmetricRepression(quoted*(1-e), quoted*(1-e), n, n, 100), 1)
		}
	}
}

// TestAsymmetricFolds: βγpq = 1 on the fold curve (computed, eight digits; algebra
// re-derived). At p = 0.3 a larger α₁ leads in, at p = 0.6 a smaller one.
func TestAsymmetricFolds(t *testing.T) {
	const e = 1e-6 // the digits are good to 2e-8
	for _, f := range zoo.AsymmetricFolds() {
		if f.Cusp {
			continue
		}
		sign := 1.0
		if f.P > 0.5 {
			sign = -1
		}
		inside := zoo.AsymmetricRepression(f.Alpha1*(1+sign*e), f.Alpha2, 2, 2, 100)
		outside := zoo.AsymmetricRepression(f.Alpha1*(1-sign*e), f.Alpha2, 2, 2, 100)
		countStates(t, fmt.Sprint("inside, p = ", f.P), inside, 3)
		countStates(t, fmt.Sprint("outside, p = ", f.P), outside, 1)
	}
}

// TestNoCooperativity: simple saturating repression has one state (Cherry and
// Adler, J. Theor. Biol. 203 (2000) 117, abstract).
func TestNoCooperativity(t *testing.T) {
	for _, a := range []float64{0.1, 1, 10, 1e3, 1e5} {
		for _, b := range []float64{0.1, 30, 1e4} {
			countStates(t, fmt.Sprint("α = ", a, ", ", b), zoo.AsymmetricRepression(a, b, 1, 1, 100), 1)
		}
	}
}

// TestDegenerate: on a fold or a pitchfork the state is there and said to be
// degenerate.
func TestDegenerate(t *testing.T) {
	ratio, x := zoo.SelfActivatorFold(2)
	m := survey(t, zoo.SelfActivator(ratio, 1, 1, 2, 100))
	if len(m.States) != 2 || m.States[1].Kind != Degenerate || m.States[1].SlowRate != 0 {
		t.Fatalf("states %+v", m.States)
	}
	// A double state can be located to the root of the rounding, √(2⁻⁵²) ≈ 1.5e-8,
	// times a few.
	near(t, "double state", m.States[1].Amounts[0], x, 1e-7)
	m = survey(t, zoo.LeaklessLatch(0.5, 1, 100))
	if len(m.States) != 2 || m.States[1].Kind != Degenerate {
		t.Fatalf("states %+v", m.States)
	}
	near(t, "double state of the latch", m.States[1].Amounts[1], 1, 1e-7)
}
