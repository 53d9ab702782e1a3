package branch

import (
	"context"
	"errors"
	"math"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
)

func foldCurves(t testing.TB, n *model.Network, first string, low, high float64, second string, low2, high2 float64) *FoldDiagram {
	t.Helper()
	a, err := NewKnob(n, first, low, high)
	if err != nil {
		t.Fatal(err)
	}
	b, err := NewKnob(n, second, low2, high2)
	if err != nil {
		t.Fatal(err)
	}
	d, err := FoldCurves(context.Background(), n, a, b, Options{})
	if err != nil {
		t.Fatal(err)
	}
	return d
}

// oneCurve gives the only curve and its only cusp.
func oneCurve(t testing.TB, d *FoldDiagram) (FoldCurve, FoldPoint) {
	t.Helper()
	if len(d.Curves) != 1 || len(d.Curves[0].Cusps()) != 1 {
		t.Fatalf("%d curves, want one with one cusp: %+v", len(d.Curves), d.Curves)
	}
	return d.Curves[0], d.Curves[0].Cusps()[0]
}

// The fold curve of x' = s − rx + x²/(1+x²), and its cusp at x = 1/√3, r = 3√3/8, s
// = 1/8: Lewis, Slack, Wolpert, J. Theor. Biol. 65 (1977) 579 (from memory;
// algebra re-derived).
func TestLeakyActivatorFoldCurve(t *testing.T) {
	c, cusp := oneCurve(t, foldCurves(t, zoo.LeakyActivator(0.6, 0.05, 100), "r", 0.1, 1, "s", 0, 0.3))
	for _, p := range c.Points {
		r, s := zoo.LeakyFold(p.Amounts[0])
		near(t, "r", p.First, r, located)
		if math.Abs(p.Second-s) > located {
			t.Errorf("s = %.15g, want %.15g", p.Second, s)
		}
	}
	near(t, "x at the cusp", cusp.Amounts[0], 1/math.Sqrt(3), located)
	near(t, "r at the cusp", cusp.First, 3*math.Sqrt(3)/8, located)
	near(t, "s at the cusp", cusp.Second, 0.125, located)
	if c.Ends[0].Kind != RangeEnd || c.Ends[0].Knob != "s" || c.Ends[1].Kind != RangeEnd || c.Ends[1].Knob != "r" {
		t.Errorf("ends %v, want the ranges of s and r", c.Ends)
	}
}

// The folds of the latch with a leak in transcript and protein lie on the same curve
// with r = ab: it is the slow form of the same law (algebra).
func TestLatchFoldCurve(t *testing.T) {
	c, cusp := oneCurve(t, foldCurves(t, zoo.Latch(100), "b", 0.2, 2, "leak", 0.001, 0.5))
	for _, p := range c.Points {
		r, s := zoo.LeakyFold(p.Amounts[1])
		near(t, "ab", 0.45*p.First, r, located)
		near(t, "leak", p.Second, s, 100*located) // s is a small difference near x = 1
	}
	near(t, "leak at the cusp", cusp.Second, 0.125, located)
}

// The fold curve of asymmetric repression with β = γ = 2 by p = v²/(1+v²), q = 1/(4p)
// = u²/(1+u²): α₁ = u(1+v²), α₂ = v(1+u²); the cusp at (2, 2), p = 1/2 (algebra).
// Rows at p = 0.3 and 0.6: zoo.AsymmetricFolds.
func TestAsymmetricRepressionFoldCurve(t *testing.T) {
	c, cusp := oneCurve(t, foldCurves(t, zoo.SymmetricRepression(3, 100), "alpha1", 0.5, 8, "alpha2", 0.5, 8))
	for _, p := range c.Points {
		u, v := p.Amounts[0], p.Amounts[1]
		share := v * v / (1 + v*v)
		other := 1 / (4 * share)
		near(t, "q", u*u/(1+u*u), other, 10*located)
		near(t, "α₁", p.First, math.Sqrt(other/(1-other))/(1-share), 100*located) // 1/(1−q)^{3/2} magnifies
		near(t, "α₂", p.Second, math.Sqrt(share/(1-share))/(1-other), 100*located)
	}
	near(t, "α₁ at the cusp", cusp.First, 2, located)
	near(t, "α₂ at the cusp", cusp.Second, 2, located)
	near(t, "u at the cusp", cusp.Amounts[0], 1, located)
}

// With α₂ held at a point of that curve, α₁ is a fold there. The table's values are
// good to half a unit of their seventh digit (its α₁ at p = 0.3 is 4e-7 below the
// closed form's 3.19438282).
func TestAsymmetricRepressionFoldTable(t *testing.T) {
	for _, row := range zoo.AsymmetricFolds() {
		if row.Cusp {
			continue
		}
		p, q := row.P, 1/(4*row.P)
		u, v := math.Sqrt(q/(1-q)), math.Sqrt(p/(1-p))
		alpha1, alpha2 := u*(1+v*v), v*(1+u*u)
		near(t, "α₁ of the table", row.Alpha1, alpha1, 5e-7)
		near(t, "α₂ of the table", row.Alpha2, alpha2, 5e-7)
		d := follow(t, zoo.AsymmetricRepression(3, alpha2, 2, 2, 100), "alpha1", 0.5, 8)
		best := math.Inf(1)
		for _, m := range d.Folds() {
			best = min(best, math.Abs(m.Knob/alpha1-1))
		}
		if !(best <= located) {
			t.Errorf("p = %g: no fold at α₁ = %v: the nearest is %.2g of it away", p, alpha1, best)
		}
	}
}

// ab = 1/2 all along the fold curve of the leakless latch, which has no cusp.
func TestLeaklessLatchFoldCurve(t *testing.T) {
	d := foldCurves(t, zoo.LeaklessLatch(0.45, 1, 100), "a", 0.1, 2, "b", 0.1, 2)
	if len(d.Curves) != 1 || len(d.Curves[0].Cusps()) != 0 {
		t.Fatalf("%d curves, want one without cusps", len(d.Curves))
	}
	for _, p := range d.Curves[0].Points {
		near(t, "ab", p.First*p.Second, 0.5, located)
	}
}

func TestFoldCurvesNeedTwoKnobs(t *testing.T) {
	n := zoo.LeaklessLatch(0.45, 1, 100)
	a, _ := NewKnob(n, "a", 0.1, 2)
	ab, _ := NewKnob(n, "a*b", 0.1, 2)
	_, err := FoldCurves(context.Background(), n, a, ab, Options{})
	var shared *SharedKnobError
	if !errors.As(err, &shared) {
		t.Errorf("error %v, want *SharedKnobError", err)
	}
}

// x' = x (1 − (x−2)² − (p−2)² − (q−2)²) has, besides x = 0, the unit sphere about (2, 2,
// 2) of states: its folds are the circle about (2, 2) in p and q, x = 2 (algebra).
func TestClosedFoldCurve(t *testing.T) {
	s := newSketch(30)
	x := s.species("x", 1)
	p, q := s.constant("p", 2.2), s.constant("q", 1.9)
	linear, square := num(1), num(12)
	for _, v := range []*model.Node{x, p, q} {
		linear = plus(linear, model.Call(model.OpMul, num(4), v))
		square = plus(square, raise(v, num(2)))
	}
	s.law("make", model.Call(model.OpMul, x, linear), nil, turn{x})
	s.law("lose", model.Call(model.OpMul, x, square), turn{x}, nil)
	d := foldCurves(t, s.network(t), "p", 0.5, 4, "q", 0.5, 4)
	if len(d.Curves) != 1 {
		t.Fatalf("%d curves, want 1", len(d.Curves))
	}
	c := d.Curves[0]
	if c.Ends[0].Kind != Closed || c.Ends[1].Kind != Closed || len(c.Cusps()) != 0 {
		t.Errorf("ends %v and %d cusps, want a loop without cusps", c.Ends, len(c.Cusps()))
	}
	for _, v := range c.Points {
		near(t, "radius", math.Hypot(v.First-2, v.Second-2), 1, located)
		near(t, "x", v.Amounts[0], 2, located)
	}
	if first, last := c.Points[0], c.Points[len(c.Points)-1]; first.First != last.First || first.Second != last.Second {
		t.Errorf("the loop runs from %v to %v", first, last)
	}
}

func TestNoFoldCurve(t *testing.T) {
	d := foldCurves(t, zoo.LeaklessLatch(0.3, 0.3, 100), "a", 0.1, 0.4, "b", 0.1, 0.4)
	if len(d.Curves) != 0 || len(d.Warnings) != 1 {
		t.Errorf("%d curves, warnings %q; want none, and one that says so", len(d.Curves), d.Warnings)
	}
}

func TestCurveEndsInWords(t *testing.T) {
	for want, e := range map[string]CurveEnd{
		"end of the range of a":          {Kind: RangeEnd, Knob: "a"},
		"protein at the edge of the box": {Kind: BoxEdge, Species: "protein"},
		"protein reaches 0":              {Kind: Emptied, Species: "protein"},
		"lost: no step succeeds":         {Kind: Lost, Text: "no step succeeds"},
		"closed":                         {Kind: Closed},
	} {
		if e.String() != want {
			t.Errorf("%q, want %q", e.String(), want)
		}
	}
}
