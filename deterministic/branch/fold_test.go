package branch

import (
	"fmt"
	"math"
	"testing"

	"holdfast/internal/zoo"
)

// located is the accuracy promised for folds.
const located = 1e-10

// The leakless latch has its fold at ab = 1/2, where x = 1 and y = a: Griffith, J.
// Theor. Biol. 20 (1968) 209 (the model); the closed form is common practice.
func TestLeaklessLatchFoldAtHalf(t *testing.T) {
	const a, b = 0.4, 0.9
	for _, c := range []struct {
		knob      string
		low, high float64
		want      float64
		y         float64
	}{
		{"a*b", 0.1, 2, 0.5, math.Sqrt(0.5 * a / b)},
		{"a", 0.01, 5, 0.5 / b, 0.5 / b},
		{"b", 0.1, 3, 0.5 / a, a},
	} {
		d := follow(t, zoo.LeaklessLatch(a, b, 100), c.knob, c.low, c.high)
		m := one(t, d, Fold)
		near(t, "fold in "+c.knob, m.Knob, c.want, located)
		near(t, "protein at the fold", m.Amounts[1], 1, located)
		near(t, "transcript at the fold", m.Amounts[0], c.y, located)
		if m.Opens != -1 {
			t.Errorf("the states exist at %+d of the fold, want below", m.Opens)
		}
		if len(d.Marks(Transcritical)) != 0 || len(d.Marks(Pitchfork)) != 0 {
			t.Errorf("in %s the fold was taken for a crossing", c.knob)
		}
	}
}

// x' = βxⁿ/(Kⁿ+xⁿ) − γx folds at β/(γK) = n/(n−1)^{(n−1)/n}, x/K = (n−1)^{1/n}:
// 2, 1; 1.8898816, 1.2599210; 1.7547654, 1.3160740 (computed; algebra).
func TestSelfActivatorFolds(t *testing.T) {
	for _, n := range []float64{2, 3, 4} {
		const k, gamma = 3, 0.7
		ratio, x := zoo.SelfActivatorFold(n)
		d := follow(t, zoo.SelfActivator(2.5*k*gamma, k, gamma, n, 50), "beta", 0, 10)
		m := one(t, d, Fold)
		near(t, fmt.Sprintf("fold for n = %g", n), m.Knob, ratio*gamma*k, located)
		near(t, fmt.Sprintf("x for n = %g", n), m.Amounts[0], x*k, located)
	}
}

// Both folds of x' = s − rx + x²/(1+x²) at s lie on r = 2x/(1+x²)², s =
// x²(1−x²)/(1+x²)²: Lewis, Slack, Wolpert, J. Theor. Biol. 65 (1977) 579 (from
// memory; algebra re-derived).
func TestLeakyActivatorFoldsLieOnTheCurve(t *testing.T) {
	const s = 0.05
	d := follow(t, zoo.LeakyActivator(0.5, s, 10), "r", 0.05, 2)
	folds := d.Folds()
	if len(folds) != 2 {
		t.Fatalf("%d folds, want 2", len(folds))
	}
	for _, m := range folds {
		r, at := zoo.LeakyFold(m.Amounts[0])
		near(t, "r", m.Knob, r, located)
		near(t, "s", at, s, 10*located) // s has a derivative in x; 10 covers its slope
	}
}

// The fold of the two-repressor switch in its inducer, 3.923e-5 M: computed for
// the model of Gardner, Cantor, Collins, Nature 403 (2000) 339 (constants from
// memory), given to four digits.
func TestInducerFold(t *testing.T) {
	d := follow(t, zoo.InducibleRepression(0, 100), "inducer", 0, 1e-4)
	m := one(t, d, Fold)
	near(t, "inducer at the fold", m.Knob, zoo.InducibleFold(), 0.5e-8/zoo.InducibleFold())
	want := zoo.InducibleStates()
	if len(d.Windows) != 2 {
		t.Fatalf("%d windows, want 2", len(d.Windows))
	}
	// The states at I = 0 are given to five digits or more.
	near(t, "low u", d.Windows[0].Amounts[0], want[0], 1e-5)
	near(t, "high u", d.Windows[1].Amounts[0], want[2], 1e-5)
	if w := d.Windows[1].High; w.Mark.Kind != Fold || w.Knob != m.Knob || !math.IsNaN(w.Distance) {
		t.Errorf("the high state ends at %v %v, %v per cent away; want the fold, and no per cent of 0", w.Mark.Kind, w.Knob, w.Distance)
	}
	if w := d.Windows[0].High; w.Mark.Kind != RangeEnd || w.Knob != 1e-4 {
		t.Errorf("the low state ends at %v %v, want the range's end", w.Mark.Kind, w.Knob)
	}
}

// The null vectors of a fold are those of the exact Jacobian: for the leakless
// latch in (transcript, protein), J = [−b, h′; 1, −a] with h′(1) = 1/2, so J·(a, 1) =
// (−ab + 1/2, 0) = 0 (algebra).
func TestFoldNullVectors(t *testing.T) {
	const a = 0.8
	m := one(t, follow(t, zoo.LeaklessLatch(a, 0.5, 10), "b", 0.1, 2), Fold)
	near(t, "null vector's ratio", m.Null[0]/m.Null[1], a, located)
	near(t, "left null vector's ratio", m.Left[1]/m.Left[0], 0.5/a, located)
	near(t, "product", m.Null[0]*m.Left[0]+m.Null[1]*m.Left[1], 1, located)
}
