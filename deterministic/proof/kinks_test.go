package proof_test

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"holdfast/deterministic/proof"
	"holdfast/deterministic/proof/interval"
	"holdfast/internal/zoo"
	"holdfast/model"
)

// oneSpecies is x' = law − loss·x.
func oneSpecies(t *testing.T, loss float64, law func(x *model.Node) *model.Node) *model.Network {
	d := newDesign("x")
	return d.rate("", "x", law(d.x("x"))).mass("x", "", "", loss).network(t)
}

// TestKinks: laws with min, max and abs. Away from the kink they are as any other;
// at it a state is proved where the rates on both sides cross 0 alike, and said to
// lie at a kink; where they only touch 0, nothing is proved.
func TestKinks(t *testing.T) {
	call := model.Call
	// 0.1 + 2 min(x², 1) = x: 2x² − x + 0.1 = 0 below 1, and 2.1.
	away := oneSpecies(t, 1, func(x *model.Node) *model.Node {
		return plus(num(0.1), times(num(2), call(model.OpMin, raised(x, 2), num(1))))
	})
	root := math.Sqrt(1 - 0.8)
	wantComplete(t, "min", prove(t, away, nil, nil), [][]float64{{(1 - root) / 4}, {(1 + root) / 4}, {2.1}}, rounding)
	// max(1, x/2) = x at 1; abs(x − 3) = x at 1.5.
	wantComplete(t, "max", prove(t, oneSpecies(t, 1, func(x *model.Node) *model.Node {
		return call(model.OpMax, num(1), over(x, num(2)))
	}), []float64{0}, []float64{10}), [][]float64{{1}}, rounding)
	wantComplete(t, "abs", prove(t, oneSpecies(t, 1, func(x *model.Node) *model.Node {
		return call(model.OpAbs, minus(x, num(3)))
	}), []float64{0}, []float64{10}), [][]float64{{1.5}}, rounding)
	// min((x+1)/2, 1) = x at its kink, 1.
	r := prove(t, oneSpecies(t, 1, func(x *model.Node) *model.Node {
		return call(model.OpMin, over(plus(x, num(1)), num(2)), num(1))
	}), nil, nil)
	wantComplete(t, "at a kink", r, [][]float64{{1}}, rounding)
	if !r.Roots[0].Kink {
		t.Errorf("%v: the state at the kink is not said to be there", r)
	}
	// x + abs(x − 2) = x touches 0 at 2.
	r = prove(t, oneSpecies(t, 1, func(x *model.Node) *model.Node {
		return plus(x, call(model.OpAbs, minus(x, num(2))))
	}), []float64{0}, []float64{10})
	wantResisting(t, "touching at a kink", r, []float64{2})
	if len(r.Roots) != 0 {
		t.Errorf("touching at a kink: %v", r)
	}
}

// TestContinuum: networks whose resting states are not isolated.
func TestContinuum(t *testing.T) {
	// min(x, 1) = x for all x to 1.
	r := prove(t, oneSpecies(t, 1, func(x *model.Node) *model.Node { return model.Call(model.OpMin, x, num(1)) }), nil, nil)
	wantResisting(t, "from 0 to 1", r, []float64{0.5})
	// y is made from x and decays with x: no flux at all where x = 0.
	d := newDesign("x", "y")
	d.mass("x", "", "", 1).mass("", "x", "y", 2).mass("y", "x", "", 1)
	r = prove(t, d.network(t), []float64{0, 0}, []float64{10, 10})
	wantResisting(t, "any y without x", r, []float64{0, 5})
	// A line across the box: x' = y − x, y' = x − y, with another loss that cancels
	// another gain, so that x + y is kept by the rates but not by the reactions.
	d = newDesign("x", "y")
	d.mass("x", "", "y", 1).mass("y", "", "x", 1).mass("x", "", "", 0.5).mass("", "x", "x", 0.5)
	r = prove(t, d.network(t), []float64{0, 0}, []float64{3, 3})
	wantResisting(t, "a line", r, []float64{1, 1})
	if r.Boxes > 20_000 {
		t.Errorf("a line: %v: more boxes than it is worth", r)
	}
	// A reaction that never fires conserves more than the totals say.
	d = newDesign("x")
	r = prove(t, d.mass("x", "", "", 0).network(t), []float64{0}, []float64{1})
	wantResisting(t, "nothing happens", r, []float64{0.3})
	if r.Ending != proof.Unposed {
		t.Errorf("nothing happens: %v", r)
	}
}

// TestDegenerate: states whose Jacobian is singular are never counted.
func TestDegenerate(t *testing.T) {
	// x' = (x−1)²(3−x) and x' = −(x−1)³: x³ terms written out.
	d := newDesign("x")
	d.mass("x", "x x", "", 1).mass("", "x x", "x", 5).mass("x", "", "", 7).mass("", "", "x", 3)
	r := prove(t, d.network(t), nil, nil)
	wantResisting(t, "double root", r, []float64{1})
	if len(r.Roots) != 1 || math.Abs(r.Roots[0].Point[0]-3) > 1e-12 {
		t.Errorf("double root: %v; want the state at 3", r)
	}
	d = newDesign("x")
	d.mass("x", "x x", "", 1).mass("", "x x", "x", 3).mass("x", "", "", 3).mass("", "", "x", 1)
	r = prove(t, d.network(t), nil, nil)
	wantResisting(t, "triple root", r, []float64{1})
	if len(r.Roots) != 0 {
		t.Errorf("triple root: %v", r)
	}
	// x' = x² − x³: double at 0, single at 1.
	d = newDesign("x")
	d.mass("", "x x", "x", 1).mass("x", "x x", "", 1)
	r = prove(t, d.network(t), nil, nil)
	wantResisting(t, "double at 0", r, []float64{0})
	if len(r.Roots) != 1 {
		t.Errorf("double at 0: %v; want the state at 1", r)
	}
}

// TestFaces: species that are 0 at some states and not at others. x' = x(2 − x − y),
// y' = y(3 − y − x/2)... competition: the states are (0,0), (2,0), (0,3) and the
// crossing of the lines, if it is positive (algebra).
func TestFaces(t *testing.T) {
	compete := func(a, b float64) *model.Network {
		d := newDesign("x", "y")
		return d.mass("", "x", "x", 2).mass("x", "x", "", 1).mass("x", "y", "", a).
			mass("", "y", "y", 3).mass("y", "y", "", 1).mass("y", "x", "", b).network(t)
	}
	// x = 2 − a y, y = 3 − b x: x = (2 − 3a)/(1 − ab), y = (3 − 2b)/(1 − ab).
	wantComplete(t, "coexisting", prove(t, compete(0.5, 0.5), nil, nil),
		[][]float64{{0, 0}, {0, 3}, {0.5 / 0.75, 2 / 0.75}, {2, 0}}, rounding)
	wantComplete(t, "one wins", prove(t, compete(1, 0.5), nil, nil), [][]float64{{0, 0}, {0, 3}, {2, 0}}, rounding)
	r := prove(t, compete(0.5, 0.5), []float64{0, 0}, []float64{1, 1})
	wantComplete(t, "a corner", r, [][]float64{{0, 0}}, 0)
}

// TestUndefined: laws without a value somewhere in the box.
func TestUndefined(t *testing.T) {
	call := model.Call
	// log(x) + 2 = x has two roots, w = −W(−e^{−2}) on both branches (computed by
	// Newton's method in double precision to the last digit).
	r := prove(t, oneSpecies(t, 1, func(x *model.Node) *model.Node { return plus(num(2), call(model.OpLog, x)) }), []float64{0}, []float64{10})
	wantComplete(t, "log", r, [][]float64{{0.15859433956303937}, {3.1461932206205825}}, rounding)
	// 1/x = x at 1; sqrt(x) = x at 1, and at 0, where the slope is infinite.
	r = prove(t, oneSpecies(t, 1, func(x *model.Node) *model.Node { return over(num(1), x) }), []float64{0}, []float64{10})
	wantComplete(t, "1/x", r, [][]float64{{1}}, rounding)
	r = prove(t, oneSpecies(t, 1, func(x *model.Node) *model.Node { return call(model.OpSqrt, x) }), []float64{0}, []float64{10})
	if len(r.Roots) != 1 || r.Complete {
		t.Errorf("√x: %v; want the state at 1, and 0 not proved", r)
	}
	// exp(−x) = x at the omega constant 0.567143290409783873 (W(1)).
	r = prove(t, oneSpecies(t, 1, func(x *model.Node) *model.Node { return call(model.OpExp, call(model.OpNeg, x)) }), nil, nil)
	wantComplete(t, "exp", r, [][]float64{{0.567143290409783873}}, 1e-15)
}

func TestBadProblems(t *testing.T) {
	latch := zoo.Latch(100)
	for _, c := range []struct {
		p    proof.Problem
		want string
	}{
		{proof.Problem{}, "no network"},
		{proof.Problem{Network: latch, Low: []float64{0}}, "1 lower and 0 upper bounds for 2 species"},
		{proof.Problem{Network: latch, Low: []float64{0, 2}, High: []float64{1, 1}}, "protein from 2 to 1"},
		{proof.Problem{Network: latch, Low: []float64{0, -1}, High: []float64{1, 1}}, "protein from -1 to 1"},
		{proof.Problem{Network: latch, Low: []float64{0, 0}, High: []float64{1, math.Inf(1)}}, "must be finite"},
		{proof.Problem{Network: latch, Low: []float64{0, 0}, High: []float64{1, math.NaN()}}, "must be finite"},
		{proof.Problem{Network: latch, Totals: []float64{1}}, "1 totals for a network that conserves 0"},
		{proof.Problem{Network: latch, Width: 2}, "width"},
		{proof.Problem{Network: zoo.Chain(40, 1, 1)}, "too large for a proof: 41 species"},
		{proof.Problem{Network: zoo.Dimerisation(), Totals: []float64{math.NaN()}}, "total"},
	} {
		_, err := proof.Prove(context.Background(), c.p)
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("error %v, want %q in it", err, c.want)
		}
	}
	undefined := oneSpecies(t, 1, func(*model.Node) *model.Node { return over(num(1), num(0)) })
	if _, err := proof.Prove(context.Background(), proof.Problem{Network: undefined}); err == nil || !strings.Contains(err.Error(), "not a finite number") {
		t.Errorf("1/0 as a law: error %v", err)
	}
	grows := oneSpecies(t, 1, func(x *model.Node) *model.Node { return plus(num(1), raised(x, 2)) })
	if _, err := proof.Prove(context.Background(), proof.Problem{Network: grows, High: nil}); err != nil && !errors.Is(err, proof.ErrUnbounded) {
		t.Errorf("growth: error %v", err)
	}
}

// TestEndings: a limit and a cancelled context leave the rest unresolved.
func TestEndings(t *testing.T) {
	p := proof.Problem{Network: zoo.SymmetricRepression(2, 10), MaxBoxes: 40}
	r, err := proof.Prove(context.Background(), p)
	if err != nil || r.Complete || r.Ending != proof.OutOfBoxes || !r.Ending.Early() || len(r.Unresolved) == 0 {
		t.Errorf("limit: %v, %v", r, err)
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	r, err = proof.Prove(ctx, proof.Problem{Network: zoo.Latch(100)})
	if err != nil || r.Complete || r.Ending != proof.Cancelled || len(r.Unresolved) != 1 {
		t.Errorf("cancelled: %v, %v", r, err)
	}
	if s := r.String(); !strings.HasPrefix(s, "not proved: 0 resting states found, 0 boxes, cancelled; what resisted: mrna 0.0224") {
		t.Errorf("says %q", s)
	}
}

// TestThreads: the result does not depend on their number.
func TestThreads(t *testing.T) {
	for _, n := range []*model.Network{zoo.DimerSwitch(), zoo.SymmetricRepression(2, 10), zoo.SymmetricRepression(2.0001, 10)} {
		one, err := proof.Prove(context.Background(), proof.Problem{Network: n, Threads: 1})
		if err != nil {
			t.Fatal(err)
		}
		three, err := proof.Prove(context.Background(), proof.Problem{Network: n, Threads: 3})
		if err != nil {
			t.Fatal(err)
		}
		if one.String() != three.String() || one.Boxes != three.Boxes {
			t.Errorf("one thread: %v; three: %v", one, three)
		}
		for k, root := range one.Roots {
			for i, a := range root.Box {
				if a != three.Roots[k].Box[i] {
					t.Errorf("state %d: %v and %v", k, a, three.Roots[k].Box[i])
				}
			}
		}
	}
}

// TestEdges: a state on the edge of the box is listed from either side.
func TestEdges(t *testing.T) {
	below := prove(t, zoo.Schlogl(), []float64{0}, []float64{220})
	wantComplete(t, "up to 220", below, [][]float64{{100}, {220}}, rounding)
	above := prove(t, zoo.Schlogl(), []float64{220}, []float64{1000})
	wantComplete(t, "from 220", above, [][]float64{{220}, {400}}, rounding)
	if below.Roots[0].Edge || above.Roots[1].Edge {
		t.Errorf("edges: %v, %v", below.Roots, above.Roots)
	}
	for _, root := range []proof.Root{below.Roots[1], above.Roots[0]} {
		if inside := root.Box[0].In(interval.Interval{Lo: 220, Hi: 1000}) || root.Box[0].In(interval.Interval{Hi: 220}); inside == root.Edge {
			t.Errorf("edge %v for %v", root.Edge, root.Box)
		}
	}
	if s := below.String(); !strings.HasPrefix(s, "complete (proved) in the box searched: 2 resting states") {
		t.Errorf("says %q", s)
	}
	outside := prove(t, zoo.Schlogl(), []float64{221}, []float64{399})
	wantComplete(t, "between", outside, nil, 0)
}

// TestTotals: the total may be set; P + 2 P2 = 50, 0.0005 P² = 0.01 P2.
func TestTotals(t *testing.T) {
	r, err := proof.Prove(context.Background(), proof.Problem{Network: zoo.Dimerisation(), Totals: []float64{50}})
	if err != nil {
		t.Fatal(err)
	}
	p := (-1 + math.Sqrt(1+4*0.1*50)) / 0.2
	wantComplete(t, "half the total", r, [][]float64{{p, (50 - p) / 2}}, rounding)
}
