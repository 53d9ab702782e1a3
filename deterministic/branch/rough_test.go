package branch

import (
	"errors"
	"strings"
	"testing"

	"holdfast/deterministic"
	"holdfast/internal/zoo"
	"holdfast/model"
)

// At x = 0 the law x^(1/2) has no derivative: the empty state cannot be followed, and
// that is said; the other state, x = (β/γ)², can.
func TestStateWithoutDerivative(t *testing.T) {
	s := newSketch(30)
	x := s.species("x", 1)
	s.law("make", model.Call(model.OpMul, s.constant("beta", 2), model.Call(model.OpSqrt, x)), nil, turn{x})
	s.massAction(num(1), turn{x}, nil, nil)
	d := follow(t, s.network(t), "beta", 1, 4)
	for _, b := range d.Branches {
		for _, p := range b.Points {
			near(t, "x", p.Amounts[0], p.Knob*p.Knob, 1e-9)
		}
	}
	if len(d.Branches) != 1 {
		t.Errorf("%d branches, want 1", len(d.Branches))
	}
}

// With the half-amount turned down to 0 the empty state's law is 0/0 at the end: the
// branch is lost there, in words, and all others reach the end.
func TestLawNotFiniteAtTheEnd(t *testing.T) {
	n := zoo.SelfActivator(3, 1, 1, 2, 100)
	d := follow(t, n, "half", 0, 2)
	lost := d.Marks(Lost)
	for _, m := range lost {
		if m.Text == "" || m.Amounts[0] > 1e-6 {
			t.Errorf("lost at x = %v, half = %v: %q", m.Amounts, m.Knob, m.Text)
		}
	}
	near(t, "fold", one(t, d, Fold).Knob, 1.5, located)
	w := windowOf(t, d, "high")
	checkEnd(t, "the high state's fold", w.High, Fold, 1.5)
	if w.Low.Mark.Kind != RangeEnd || w.Low.Knob != 0 {
		t.Errorf("the high state ends at %v, half = %v; want the range's end at 0", w.Low.Mark.Kind, w.Low.Knob)
	}
}

// Three genes that all shut each other off, x' = α/(1+y³+z³) − x and so on: on the
// symmetric branch, α = x(1+2x³), the two eigenvalues off the diagonal are both −1 +
// 3x³/(1+2x³) and pass 0 at once at x = 1, α = 3 (algebra). That is marked, no fold
// and no Hopf point, and the branches through it are found from the samples. The
// equations are doubly singular there, so the place is known to the root of rounding,
// 1.5e-8, times a few.
func TestSeveralEigenvaluesAtOnce(t *testing.T) {
	s := newSketch(100)
	genes := turn{s.species("x", 0), s.species("y", 0), s.species("z", 0)}
	alpha := s.constant("alpha", 6)
	for i, x := range genes {
		y, z := genes[(i+1)%3], genes[(i+2)%3]
		s.law("make", over(alpha, plus(num(1), plus(raise(y, num(3)), raise(z, num(3))))), nil, turn{x})
		s.massAction(num(1), turn{x}, nil, nil)
	}
	n := s.network(t)
	d := follow(t, n, "alpha", 0.5, 10)
	m := one(t, d, Crossing)
	near(t, "α", m.Knob, 3, 6e-8)
	near(t, "x", m.Amounts[0], 1, 6e-8)
	if len(d.Marks(Hopf)) != 0 {
		t.Errorf("Hopf points %v", d.Marks(Hopf))
	}
	survey, err := deterministic.Survey(t.Context(), n, deterministic.Options{})
	if err != nil {
		t.Fatal(err)
	}
	compareStates(t, "today", statesAt(d, 6), survey)
}

func TestBoxWithoutAnEdge(t *testing.T) {
	n := zoo.Latch(100)
	k, err := NewKnob(n, "b", 0.2, 2)
	if err != nil {
		t.Fatal(err)
	}
	_, err = Follow(t.Context(), n, k, Options{High: []float64{3}})
	var box *BoxError
	if !errors.As(err, &box) || !strings.Contains(err.Error(), "protein") {
		t.Errorf("error %v, want *BoxError of protein", err)
	}
}

// β = 2 is the fold of x' = βx²/(1+x²) − x, at x = 1: today's setting is on it.
func TestTodayOnAFold(t *testing.T) {
	d := follow(t, zoo.SelfActivator(2, 1, 1, 2, 100), "beta", 1, 3)
	near(t, "fold", one(t, d, Fold).Knob, 2, located)
	if said := strings.Join(d.Warnings, "\n"); !strings.Contains(said, "today's setting lies on a fold") {
		t.Errorf("no warning that today's setting lies on the fold: %q", said)
	}
	if len(d.Windows) != 1 || d.Windows[0].Amounts[0] != 0 {
		t.Errorf("windows %v, want that of the empty state only", d.Windows)
	}
}

// A fold on the end of the knob's range by rounding is not put outside it: x' = s +
// x²/(1+x²) − x/2 folds at s = 0, x = 1.
func TestFoldOnTheEndOfTheRange(t *testing.T) {
	d := follow(t, zoo.LeakyActivator(0.5, 1e-3, 100), "s", 0, 1)
	for _, m := range d.Folds() {
		if m.Knob < 0 {
			t.Errorf("fold at s = %g", m.Knob)
		}
	}
	w := windowOf(t, d, "high")
	if w.Low.Knob > 1e-15 {
		t.Errorf("the high state ends at s = %g, want 0", w.Low.Knob)
	}
}
