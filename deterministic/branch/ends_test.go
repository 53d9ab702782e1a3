package branch

import (
	"math"
	"strings"
	"testing"

	"holdfast/model"
)

// windowOf gives the window of the named state.
func windowOf(t *testing.T, d *Diagram, state string) Window {
	t.Helper()
	for _, w := range d.Windows {
		if w.State == state {
			return w
		}
	}
	t.Fatalf("no window of state %s among %d", state, len(d.Windows))
	return Window{}
}

func checkEnd(t *testing.T, what string, e End, kind Kind, knob float64) {
	t.Helper()
	if e.Mark.Kind != kind {
		t.Errorf("%s is a %v, want %v", what, e.Mark.Kind, kind)
	}
	near(t, what, e.Knob, knob, located)
}

// isola is x' = x (r² − (x−2)² − (p−2)²): besides x = 0 its states are a circle in x
// and p, with folds at p = 2 ± r where x = 2 (algebra).
func isola(t testing.TB, r, p float64) *model.Network {
	s := newSketch(30)
	x := s.species("x", 1)
	k := s.constant("p", p)
	times := func(a, b *model.Node) *model.Node { return model.Call(model.OpMul, a, b) }
	up := plus(plus(num(r*r), times(num(4), x)), times(num(4), k))
	down := plus(plus(raise(x, num(2)), raise(k, num(2))), num(8))
	s.law("make", times(x, up), nil, turn{x})
	s.law("lose", times(x, down), turn{x}, nil)
	return s.network(t)
}

func TestIsola(t *testing.T) {
	for _, p := range []float64{2.1, 0.5} { // today on the isola, and beside it
		d := follow(t, isola(t, 1, p), "p", 0.1, 5)
		closed := 0
		for i, b := range d.Branches {
			if !b.Closed() {
				continue
			}
			closed++
			for _, q := range b.Points {
				near(t, "radius", math.Hypot(q.Amounts[0]-2, q.Knob-2), 1, 1e-9)
			}
			if len(b.Points) < 20 {
				t.Errorf("branch %d: %d points make no circle", i, len(b.Points))
			}
		}
		folds := d.Folds()
		if closed != 1 || len(folds) != 2 || len(d.Branches) != 2 {
			t.Fatalf("%d closed of %d branches, %d folds; want 1 of 2 and 2", closed, len(d.Branches), len(folds))
		}
		near(t, "first fold", folds[0].Knob, 1, located)
		near(t, "second fold", folds[1].Knob, 3, located)
		if folds[0].Opens != 1 || folds[1].Opens != -1 {
			t.Errorf("folds open to %d and %d, want 1 and −1", folds[0].Opens, folds[1].Opens)
		}
		if p == 2.1 {
			w := windowOf(t, d, "high")
			checkEnd(t, "low end", w.Low, Fold, 1)
			checkEnd(t, "high end", w.High, Fold, 3)
			near(t, "distance to the low end", w.Low.Distance, 100*1.1/2.1, 1e-9)
			near(t, "distance to the high end", w.High.Distance, 100*0.9/2.1, 1e-9)
		}
	}
}

// cornered is x' = p + 1.5 min(max(x−1, 0), 2) − x − 1/2: straight pieces x = p − 1/2
// to x = 1, x = 4 − 2p from there to x = 3, x = p + 5/2 beyond; the branch turns
// sharply at p = 3/2 and p = 1/2, and reaches 0 at p = 1/2 (algebra).
func cornered(t testing.TB, p float64) *model.Network {
	s := newSketch(30)
	x := s.species("x", 1)
	k := s.constant("p", p)
	ramp := model.Call(model.OpMin, model.Call(model.OpMax, model.Call(model.OpSub, x, num(1)), num(0)), num(2))
	s.law("make", plus(k, model.Call(model.OpMul, num(1.5), ramp)), nil, turn{x})
	s.law("lose", plus(x, num(0.5)), turn{x}, nil)
	return s.network(t)
}

func TestKinks(t *testing.T) {
	d := follow(t, cornered(t, 1), "p", 0.2, 3)
	kinks := d.Marks(Kink)
	if len(kinks) != 2 || len(d.Folds()) != 0 {
		t.Fatalf("%d kinks and %d folds, want 2 and none: %v", len(kinks), len(d.Folds()), kinks)
	}
	for i, want := range [][2]float64{{0.5, 3}, {1.5, 1}} {
		near(t, "kink", kinks[i].Knob, want[0], located)
		near(t, "x at the kink", kinks[i].Amounts[0], want[1], located)
		if !kinks[i].Turns || !strings.Contains(kinks[i].Text, `law of reaction "make" has no derivative`) {
			t.Errorf("kink %d: turns %t, says %q", i, kinks[i].Turns, kinks[i].Text)
		}
	}
	low, high := windowOf(t, d, "low"), windowOf(t, d, "high")
	checkEnd(t, "low state's low end", low.Low, Emptied, 0.5)
	checkEnd(t, "low state's high end", low.High, Kink, 1.5)
	checkEnd(t, "high state's low end", high.Low, Kink, 0.5)
	checkEnd(t, "high state's high end", high.High, RangeEnd, 3)
	if low.Low.Mark.Species != "x" {
		t.Errorf("%q reaches 0, want x", low.Low.Mark.Species)
	}
	said := strings.Join(d.Warnings, "\n")
	if !strings.Contains(said, "no derivative") {
		t.Errorf("no warning of the kinks: %q", said)
	}
}

// A kink that the branch goes straight on through ends nothing: x' = min(p, 2) − x.
func TestKinkPassed(t *testing.T) {
	s := newSketch(30)
	x := s.species("x", 1)
	s.law("make", model.Call(model.OpMin, s.constant("p", 1), num(2)), nil, turn{x})
	s.massAction(num(1), turn{x}, nil, nil)
	d := follow(t, s.network(t), "p", 0.5, 5)
	m := one(t, d, Kink)
	near(t, "kink", m.Knob, 2, located)
	if m.Turns {
		t.Error("the branch turns at the kink")
	}
	w := windowOf(t, d, "only")
	checkEnd(t, "low end", w.Low, RangeEnd, 0.5)
	checkEnd(t, "high end", w.High, RangeEnd, 5)
}

// x' = 1 + p x − x rests at x = 1/(1−p), which leaves every box as p comes to 1.
func TestBranchLeavesTheBox(t *testing.T) {
	s := newSketch(30)
	x := s.species("x", 1)
	s.massAction(num(1), nil, nil, turn{x})
	s.massAction(s.constant("p", 0.3), nil, turn{x}, turn{x})
	s.massAction(num(1), turn{x}, nil, nil)
	n := s.network(t)
	k, err := NewKnob(n, "p", 0.1, 1.5)
	if err != nil {
		t.Fatal(err)
	}
	d, err := Follow(t.Context(), n, k, Options{High: []float64{20}})
	if err != nil {
		t.Fatal(err)
	}
	w := windowOf(t, d, "only")
	checkEnd(t, "high end", w.High, BoxEdge, 0.95)
	near(t, "x at the edge", w.High.Mark.Amounts[0], 20, located)
	if said := strings.Join(d.Warnings, "\n"); !strings.Contains(said, "leaves the box at p = 0.95, where x reaches 20") {
		t.Errorf("no warning that the branch leaves the box: %q", said)
	}
	if d = follow(t, n, "p", 0.1, 1.5); windowOf(t, d, "only").High.Mark.Kind != BoxEdge {
		t.Errorf("in the box of the samples the branch ends at %v", windowOf(t, d, "only").High.Mark.Kind)
	}
}

// a ⇌ b with the total turned: a = total·off/(on+off), with a copies' unit of 50.
func TestTotalTurned(t *testing.T) {
	s := newSketch(50)
	a, b := s.species("a", 2), s.species("b", 0)
	s.massAction(s.constant("on", 3), turn{a}, nil, turn{b})
	s.massAction(s.constant("off", 1), turn{b}, nil, turn{a})
	d := follow(t, s.network(t), "total", 10, 1000)
	if d.Today != 100 || len(d.Branches) != 1 {
		t.Fatalf("today %v, %d branches; want 100 molecules, 1 branch", d.Today, len(d.Branches))
	}
	for _, p := range d.Branches[0].Points {
		near(t, "a", p.Amounts[0], p.Knob/50/4, 1e-12)
		near(t, "b", p.Amounts[1], 3*p.Knob/50/4, 1e-12)
		if !p.Stable || len(p.Eigenvalues) != 1 {
			t.Errorf("stable %t with eigenvalues %v at %v", p.Stable, p.Eigenvalues, p.Knob)
		}
		near(t, "slow rate", p.SlowRate, 4, 1e-12)
		// A fixed number of molecules, each in one of two forms: binomial.
		near(t, "variance of a", p.Covariance[0], p.Knob*0.25*0.75, 1e-9)
	}
}
