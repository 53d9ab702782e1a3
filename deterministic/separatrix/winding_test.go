package separatrix

import (
	"context"
	"math"
	"testing"

	"holdfast/deterministic"
	"holdfast/model"
)

// wheel is, about (5, 5) in polar coordinates, r' = −r(r²−1)(r²−4)/2, θ' = 4 − r² + r
// sin θ: the centre attracts, the circle r = 1 repels, and on r = 2 there are a saddle
// at θ = 0 and a sink at θ = π. Backward in time the saddle's inner manifold winds
// onto r = 1 (algebra).
func wheel(t testing.TB) *model.Network {
	t.Helper()
	sub := func(a, b *model.Node) *model.Node { return model.Call(model.OpSub, a, b) }
	X, Y := sub(x(0), num(5)), sub(x(1), num(5))
	s := plus(times(X, X), times(Y, Y))
	inward := times(num(0.5), times(sub(s, num(1)), sub(s, num(4))))
	turning := plus(sub(num(4), s), Y)
	fx := sub(sub(num(500), times(X, inward)), times(Y, turning))
	fy := plus(sub(num(500), times(Y, inward)), times(X, turning))
	return planar(t, []*model.Node{fx, fy}, []*model.Node{num(500), num(500)})
}

func TestManifoldThatWindsOn(t *testing.T) {
	c, err := Manifold(context.Background(), wheel(t), []float64{7, 5}, Options{Low: []float64{2, 2}, High: []float64{8, 8}, Points: 3000})
	if err != nil {
		t.Fatal(err)
	}
	edges, inner := 0, c.Points[0]
	for i, e := range c.Ends {
		switch e.Ending {
		case AtEdge:
			edges++
			inner = c.Points[(1-i)*(len(c.Points)-1)]
		case AtState:
			t.Errorf("an end at a resting state: %v", c.Ends)
		}
	}
	if edges != 1 {
		t.Fatalf("ends %v, want one at the edge and one that winds on", c.Ends)
	}
	near(t, "radius that it winds onto", math.Hypot(inner[0]-5, inner[1]-5), 1, 1e-6)
}

// Where a repelling cycle parts the basins no curve of a saddle does: the pieces
// disagree, and the basins are sampled. The disc r < 1 is π/36 of the box of 6 by 6.
// The tolerance is 2.6 half widths of the 95 % interval, a false alarm of 3e-7.
func TestBasinInsideACycleIsSampled(t *testing.T) {
	n := wheel(t)
	m, err := deterministic.Survey(context.Background(), n, deterministic.Options{})
	if err != nil {
		t.Fatal(err)
	}
	b, err := Measure(context.Background(), m, Options{Low: []float64{2, 2}, High: []float64{8, 8}, Samples: 1000})
	if err != nil {
		t.Fatal(err)
	}
	if b.Method != BySample {
		t.Errorf("measured as %v, want sampled", b.Method)
	}
	for s, state := range m.Stable() {
		if math.Abs(state.Amounts[0]-5) < 0.1 {
			near(t, "share of the disc", b.Shares[s], math.Pi/36, 2.6*b.Errors[s])
		}
	}
}

// Two kinds that compete, x' = x(1 − x − 2y) and its mirror image: the separatrix is
// the diagonal, out of the state (0, 0), which repels (Lotka and Volterra's model).
func TestCurveOutOfTheEmptyState(t *testing.T) {
	loss := func(i, j int) *model.Node { return times(x(i), plus(x(i), times(num(2), x(j)))) }
	n := planar(t, []*model.Node{x(0), x(1)}, []*model.Node{loss(0, 1), loss(1, 0)})
	c, err := Manifold(context.Background(), n, []float64{1.0 / 3, 1.0 / 3}, Options{High: []float64{2, 2}})
	if err != nil {
		t.Fatal(err)
	}
	ends := map[Ending]bool{c.Ends[0].Ending: true, c.Ends[1].Ending: true}
	if !ends[AtEdge] || !ends[AtState] {
		t.Errorf("ends %v, want the edge and the empty state", c.Ends)
	}
	for _, p := range c.Points {
		near(t, "y "+at(p), p[1], p[0], 1e-12)
	}
}
