package separatrix

import (
	"context"
	"errors"
	"math"
	"testing"

	"holdfast/deterministic"
	"holdfast/internal/zoo"
	"holdfast/model"
)

// The separatrix of symmetric repression is the diagonal, by symmetry, from 0 to the
// corner of the box.
func TestSymmetricRepressionDiagonal(t *testing.T) {
	m := surveyed(t, zoo.SymmetricRepression(3, 100))
	o := Options{High: []float64{4, 4}}
	c := traced(t, m, o)
	if len(c) != 1 {
		t.Fatalf("%d curves, want 1", len(c))
	}
	for _, p := range c[0].Points {
		near(t, "v "+at(p), p[1], p[0], 1e-12)
	}
	first, last := c[0].Points[0], c[0].Points[len(c[0].Points)-1]
	near(t, "one end", max(first[0], last[0]), 4, 0)
	near(t, "the other end", min(first[0], last[0]), 0, 0)
	near(t, "u at the saddle", c[0].Points[c[0].At][0], zoo.SymmetricSaddle(3), 1e-12)
	if c[0].Ends[0].Ending != AtEdge || c[0].Ends[1].Ending != AtEdge || c[0].Saddle != "saddle" {
		t.Errorf("ends %v of %s, want the edge twice", c[0].Ends, c[0].Saddle)
	}
}

// x' = y − 1, y' = x − 1 is linear: eigenvalues ±1, the stable line x + y = 2.
func TestLinearSaddle(t *testing.T) {
	n := planar(t, []*model.Node{x(1), x(0)}, []*model.Node{num(1), num(1)})
	c, err := Manifold(context.Background(), n, []float64{1, 1}, Options{High: []float64{3, 1.5}})
	if err != nil {
		t.Fatal(err)
	}
	for _, p := range c.Points {
		near(t, "x + y "+at(p), p[0]+p[1], 2, 1e-12)
	}
	first, last := c.Points[0], c.Points[len(c.Points)-1]
	if first[0] > last[0] {
		first, last = last, first
	}
	near(t, "y at one end", first[1], 1.5, 0)
	near(t, "y at the other end", last[1], 0, 0)
}

// x' = −x, y' = y − x² has the stable manifold y = x²/3 (algebra: the coefficient c
// of y = c x² has −2c = c − 1); here about (2, 2): X' = 2 − X, Y' = (Y + 4X) − (X² +
// 6). Its error is that of up to 1,000 steps of 1e-10 and of the start, 1e-10.
func TestCurvedManifold(t *testing.T) {
	n := planar(t,
		[]*model.Node{num(2), plus(x(1), times(num(4), x(0)))},
		[]*model.Node{x(0), plus(times(x(0), x(0)), num(6))})
	c, err := Manifold(context.Background(), n, []float64{2, 2}, Options{High: []float64{6, 5}})
	if err != nil {
		t.Fatal(err)
	}
	for _, p := range c.Points {
		near(t, "Y "+at(p), p[1], 2+(p[0]-2)*(p[0]-2)/3, 1e-7)
	}
	low, high := math.Inf(1), 0.0
	for _, p := range c.Points {
		low, high = min(low, p[0]), max(high, p[0])
	}
	near(t, "X at the left end", low, 0, 0)
	near(t, "X at the right end", high, 5, 1e-7)
}

// Two latches side by side have four stable states, four saddles and a state that
// repels: the separatrices are the straight lines through the middle states, and
// each saddle's ends at the repelling state on one side, on the edge on the other.
func TestTwoLatchesSideBySide(t *testing.T) {
	m := surveyed(t, latches(t, 2))
	c := traced(t, m, Options{})
	if len(c) != 4 {
		t.Fatalf("%d curves, want 4", len(c))
	}
	middle := middleState()
	for _, c := range c {
		ends := map[Ending]int{}
		for _, e := range c.Ends {
			ends[e.Ending]++
		}
		if ends[AtEdge] != 1 || ends[AtState] != 1 {
			t.Errorf("ends %v, want one at the edge and one at the repelling state", c.Ends)
		}
		for _, p := range c.Points {
			off := min(math.Abs(p[0]-middle), math.Abs(p[1]-middle))
			near(t, "distance from the lines "+at(p), off, 0, 1e-9)
		}
	}
}

// A class of two dimensions among three species: an operator in two forms and its
// activator. Points on either side of the curve must flow to different states.
func TestTwoFreeAmountsOfThree(t *testing.T) {
	m := surveyed(t, operator(t))
	c := traced(t, m, Options{})
	if len(c) != 1 {
		t.Fatalf("%d curves, want 1", len(c))
	}
	for k := 20; k < len(c[0].Points)-20; k += 25 {
		p := c[0].Points[k]
		near(t, "operators "+at(p), p[0]+p[1], 10, 1e-9)
		up, errUp := m.Basin([]float64{p[0], p[1], p[2] * 1.001})
		down, errDown := m.Basin([]float64{p[0], p[1], p[2] * 0.999})
		if errUp != nil || errDown != nil || up != 1 || down != 0 {
			t.Errorf("%s: basins %d, %d (%v, %v) above and below, want 1 and 0", at(p), up, down, errUp, errDown)
		}
	}
}

func TestManifoldRefuses(t *testing.T) {
	ctx := context.Background()
	n := planar(t, []*model.Node{x(1), x(0)}, []*model.Node{num(1), num(1)})
	var box *BoxError
	if _, err := Manifold(ctx, n, []float64{1, 1}, Options{Low: []float64{2, 0}, High: []float64{1, 3}}); !errors.As(err, &box) {
		t.Errorf("a box the wrong way round gives %v, want *BoxError", err)
	}
	if _, err := Manifold(ctx, n, []float64{1, 1}, Options{}); !errors.As(err, &box) {
		t.Errorf("no box gives %v, want *BoxError", err)
	}
	sink := planar(t, []*model.Node{num(1), num(1)}, []*model.Node{x(0), x(1)})
	var saddle *SaddleError
	if _, err := Manifold(ctx, sink, []float64{1, 1}, Options{High: []float64{3, 3}}); !errors.As(err, &saddle) {
		t.Errorf("a sink gives %v, want *SaddleError", err)
	}
	var dimension *DimensionError
	if _, err := Trace(ctx, surveyed(t, latches(t, 3)), Options{}); !errors.As(err, &dimension) || dimension.Dimension != 3 {
		t.Errorf("three species give %v, want *DimensionError of 3", err)
	}
	done, cancel := context.WithCancel(ctx)
	cancel()
	if _, err := Trace(done, surveyed(t, latches(t, 2)), Options{}); !errors.Is(err, context.Canceled) {
		t.Errorf("a cancelled context gives %v", err)
	}
}

// latches is so many copies, side by side, of x' = 1/40 + x²/(1+x²) − x/2.
func latches(t testing.TB, count int) *model.Network {
	var made, lost []*model.Node
	for i := range count {
		made = append(made, plus(num(1.0/40), model.Call(model.OpHill, x(i), num(1), num(2))))
		lost = append(lost, times(num(0.5), x(i)))
	}
	return planar(t, made, lost)
}

// middleState is the middle root of 1/40 + x²/(1+x²) = x/2, by bisection.
func middleState() float64 {
	low, high := 0.2, 1.0
	for range 200 {
		mid := (low + high) / 2
		if 1.0/40+mid*mid/(1+mid*mid)-mid/2 < 0 {
			low = mid
		} else {
			high = mid
		}
	}
	return low
}

// operator is ten operators that two molecules of their product turn on: free + 2p
// ⇌ bound, made by both, more by the bound.
func operator(t testing.TB) *model.Network {
	one := func(i, n int) model.Term { return model.Term{Species: i, Count: n} }
	d := model.Draft{
		Title: "operator", TimeUnit: "min", Copies: 20, Readout: 2,
		Species: []model.Species{{Name: "free", Start: 10}, {Name: "bound"}, {Name: "p"}},
		Reactions: []model.DraftReaction{
			{Name: "bind", MassAction: num(0.02), Uses: []model.Term{one(0, 1), one(2, 2)}, Makes: []model.Term{one(1, 1)}},
			{Name: "unbind", MassAction: num(2), Uses: []model.Term{one(1, 1)}, Makes: []model.Term{one(0, 1), one(2, 2)}},
			{Name: "leak", MassAction: num(0.05), Needs: []model.Term{one(0, 1)}, Makes: []model.Term{one(2, 1)}},
			{Name: "make", MassAction: num(3), Needs: []model.Term{one(1, 1)}, Makes: []model.Term{one(2, 1)}},
			{Name: "lose", MassAction: num(1), Uses: []model.Term{one(2, 1)}},
		},
	}
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

func BenchmarkTrace(b *testing.B) {
	m, err := deterministic.Survey(context.Background(), zoo.SymmetricRepression(3, 100), deterministic.Options{})
	if err != nil {
		b.Fatal(err)
	}
	points := 0
	for b.Loop() {
		c, err := Trace(context.Background(), m, Options{})
		if err != nil {
			b.Fatal(err)
		}
		points += len(c[0].Points)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(points), "ns/point")
}
