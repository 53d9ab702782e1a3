package branch

import (
	"context"
	"math"
	"testing"

	"holdfast/model"
)

// sketch builds networks for tests, species and constants by name.
type sketch struct{ model.Draft }

func newSketch(copies float64) *sketch {
	return &sketch{model.Draft{Title: "test", TimeUnit: "min", Copies: copies}}
}

func (s *sketch) species(name string, start float64) *model.Node {
	s.Species = append(s.Species, model.Species{Name: name, Start: start})
	return model.SpeciesRef(len(s.Species) - 1)
}

func (s *sketch) constant(name string, value float64) *model.Node {
	s.Constants = append(s.Constants, model.Constant{Name: name, Value: value})
	return model.ConstantRef(len(s.Constants) - 1)
}

// turn is a list of species, each named once for every molecule.
type turn []*model.Node

func (l turn) terms() []model.Term {
	counts := map[int]int{}
	var out []model.Term
	for _, x := range l {
		counts[x.Index]++
	}
	for _, x := range l {
		if n := counts[x.Index]; n > 0 {
			out = append(out, model.Term{Species: x.Index, Count: n})
			delete(counts, x.Index)
		}
	}
	return out
}

func (s *sketch) massAction(k *model.Node, uses, needs, makes turn) {
	s.Reactions = append(s.Reactions, model.DraftReaction{
		Name: "mass action", MassAction: k, Uses: uses.terms(), Needs: needs.terms(), Makes: makes.terms(),
	})
}

func (s *sketch) law(name string, rate *model.Node, uses, makes turn) {
	s.Reactions = append(s.Reactions, model.DraftReaction{Name: name, Rate: rate, Uses: uses.terms(), Makes: makes.terms()})
}

func (s *sketch) network(t testing.TB) *model.Network {
	t.Helper()
	n, err := s.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

func plus(a, b *model.Node) *model.Node  { return model.Call(model.OpAdd, a, b) }
func over(a, b *model.Node) *model.Node  { return model.Call(model.OpDiv, a, b) }
func raise(a, b *model.Node) *model.Node { return model.Call(model.OpPow, a, b) }
func num(v float64) *model.Node          { return model.Number(v) }

// follow is Follow with the knob made on the way.
func follow(t testing.TB, n *model.Network, knob string, low, high float64) *Diagram {
	t.Helper()
	k, err := NewKnob(n, knob, low, high)
	if err != nil {
		t.Fatal(err)
	}
	d, err := Follow(context.Background(), n, k, Options{})
	if err != nil {
		t.Fatal(err)
	}
	checkDiagram(t, d)
	return d
}

// checkDiagram holds what must be true of any diagram: marks at both ends of every
// branch and at their own points, and stability that changes at marks only.
func checkDiagram(t testing.TB, d *Diagram) {
	t.Helper()
	for i, b := range d.Branches {
		if len(b.Marks) < 2 || b.Marks[0].Index != 0 || b.Marks[len(b.Marks)-1].Index != len(b.Points)-1 {
			t.Errorf("branch %d of %d points has no marks at its ends: %v", i, len(b.Points), b.Marks)
		}
		marked := map[int]bool{}
		for _, m := range b.Marks {
			marked[m.Index] = true
			if b.Points[m.Index].Knob != m.Knob {
				t.Errorf("branch %d: mark %v at %v stands at point %v", i, m.Kind, m.Knob, b.Points[m.Index].Knob)
			}
		}
		for j := 1; j < len(b.Points); j++ {
			if !marked[j] && !marked[j-1] && b.Points[j].Unstable != b.Points[j-1].Unstable {
				t.Errorf("branch %d: %d unstable directions become %d between %v and %v without a mark", i,
					b.Points[j-1].Unstable, b.Points[j].Unstable, b.Points[j-1].Knob, b.Points[j].Knob)
			}
		}
	}
}

// near checks a relative error.
func near(t testing.TB, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance*math.Abs(want)) {
		t.Errorf("%s = %.15g, want %.15g: off by %.2g of it, more than %.2g", what, got, want, math.Abs(got-want)/math.Abs(want), tolerance)
	}
}

// one gives the only mark of a kind.
func one(t testing.TB, d *Diagram, kind Kind) Mark {
	t.Helper()
	list := d.Marks(kind)
	if len(list) != 1 {
		t.Fatalf("%d marks of kind %v, want 1: %v", len(list), kind, list)
	}
	return list[0]
}
