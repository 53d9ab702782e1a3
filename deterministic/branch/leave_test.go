package branch

import (
	"strings"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
)

// fromTodayOnly follows the branches of today's states and those that cross them:
// what the other samples would find must be found by leaving at crossings.
func fromTodayOnly(t *testing.T, n *model.Network, knob string, low, high float64) *Diagram {
	t.Helper()
	k, err := NewKnob(n, knob, low, high)
	if err != nil {
		t.Fatal(err)
	}
	samples, err := surveyAll(t.Context(), n, k, settings(k, k.Today(n), 5))
	if err != nil {
		t.Fatal(err)
	}
	b := newBuilder(t.Context(), n, k, samples, Options{}.withDefaults())
	if err := b.build(samples[:1]); err != nil {
		t.Fatal(err)
	}
	d := b.diagram(k.Today(n), samples[0])
	checkDiagram(t, d)
	return d
}

// From the symmetric state alone the pair beyond the pitchfork is found: one branch,
// which turns back at the pitchfork and reaches the range's end on both sides, with uv
// = 1 all along (algebra: n = 2).
func TestPairIsFoundFromThePitchfork(t *testing.T) {
	d := fromTodayOnly(t, zoo.SymmetricRepression(1.5, 100), "alpha1*alpha2", 0.5, 25)
	if len(d.Branches) != 2 {
		t.Fatalf("%d branches, want 2", len(d.Branches))
	}
	pair := d.Branches[1]
	if len(pair.Marks) != 3 || pair.Marks[1].Kind != Pitchfork || !pair.Marks[1].Turns {
		t.Fatalf("marks %v, want the pitchfork between two ends", pair.Marks)
	}
	for _, m := range []Mark{pair.Marks[0], pair.Marks[2]} {
		if m.Kind != RangeEnd || m.Knob != 25 {
			t.Errorf("an end is a %v at %v, want the range's at 25", m.Kind, m.Knob)
		}
	}
	for _, p := range pair.Points {
		near(t, "uv", p.Amounts[0]*p.Amounts[1], 1, 1e-9)
	}
}

// From the empty state alone the other branch, x = β/γ − K, is found where they cross;
// it begins there.
func TestBranchIsFoundFromTheTranscriticalPoint(t *testing.T) {
	d := fromTodayOnly(t, zoo.SelfActivator(0.5, 2, 0.5, 1, 100), "beta", 0.1, 5)
	if len(d.Branches) != 2 {
		t.Fatalf("%d branches, want 2", len(d.Branches))
	}
	other := d.Branches[1]
	ends := map[Kind]bool{other.Marks[0].Kind: true, other.Marks[len(other.Marks)-1].Kind: true}
	if !ends[Transcritical] || !ends[RangeEnd] {
		t.Errorf("the other branch ends at %v, want the crossing and the range's end", other.Marks)
	}
	for _, p := range other.Points {
		if want := p.Knob/0.5 - 2; p.Amounts[0] > 1e-9 || want > 1e-9 {
			near(t, "x", p.Amounts[0], want, 1e-9)
		}
	}
}

// A kink with a slight bend is stepped over, and marked all the same: x' = min(p, 1 +
// p/2) − x bends at p = 2.
func TestSlightKink(t *testing.T) {
	s := newSketch(30)
	x := s.species("x", 1)
	p := s.constant("p", 1)
	s.law("make", model.Call(model.OpMin, p, plus(num(1), over(p, num(2)))), nil, turn{x})
	s.massAction(num(1), turn{x}, nil, nil)
	d := follow(t, s.network(t), "p", 0.5, 5)
	m := one(t, d, Kink)
	near(t, "kink", m.Knob, 2, located)
	if said := strings.Join(d.Warnings, "\n"); !strings.Contains(said, `at p = 2 the law of reaction "make" has no derivative`) {
		t.Errorf("no warning of the kink: %q", said)
	}
}

// x' = 2p − x − min(x, y), y' = p − y rests at x = y = p: the whole branch lies on the
// kink. Whether the state is stable is not known; that is said, with the law.
func TestBranchAlongAKink(t *testing.T) {
	s := newSketch(30)
	x, y := s.species("x", 1), s.species("y", 1)
	p := s.constant("p", 1)
	s.massAction(p, nil, nil, turn{x, x})
	s.massAction(p, nil, nil, turn{y})
	s.law("lose x", plus(x, model.Call(model.OpMin, x, y)), turn{x}, nil)
	s.massAction(num(1), turn{y}, nil, nil)
	n := s.network(t)
	k, err := NewKnob(n, "p", 0.5, 2)
	if err != nil {
		t.Fatal(err)
	}
	d, err := Follow(t.Context(), n, k, Options{})
	said := ""
	if err != nil {
		said = err.Error()
	} else {
		said = strings.Join(d.Warnings, "\n")
	}
	if !strings.Contains(said, "kink of min(x, y)") {
		t.Errorf("the kink is not said: %q", said)
	}
}

// What is said of a state that cannot be followed names the law.
func TestReasons(t *testing.T) {
	s := newSketch(30)
	x := s.species("x", 1)
	s.law("make", model.Call(model.OpMul, s.constant("beta", 2), model.Call(model.OpSqrt, x)), nil, turn{x})
	s.massAction(num(1), turn{x}, nil, nil)
	n := s.network(t)
	k, err := NewKnob(n, "beta", 1, 4)
	if err != nil {
		t.Fatal(err)
	}
	b := newBuilder(t.Context(), n, k, nil, Options{High: []float64{10}}.withDefaults())
	for want, at := range map[string]float64{
		`the law of reaction "make" has no finite derivative there`: 0,
		"it lies outside the box":                                   11,
		"the equations are singular there":                          4,
	} {
		if got := b.reason([]float64{at}, 2); got != want {
			t.Errorf("at %g: %q, want %q", at, got, want)
		}
	}
}
