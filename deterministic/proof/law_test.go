package proof

import (
	"math"
	"math/rand/v2"
	"testing"

	"holdfast/model"
)

// anyLaw draws a law of two species with every operation that a law may have.
// Exponents are constants, now and then not whole.
func anyLaw(r *rand.Rand, depth int) *model.Node {
	if depth == 0 || r.IntN(8) == 0 {
		switch r.IntN(4) {
		case 0:
			return model.Number([]float64{1, 2, 0.5, 0.3, 7}[r.IntN(5)])
		default:
			return model.SpeciesRef(r.IntN(2))
		}
	}
	sub := func() *model.Node { return anyLaw(r, depth-1) }
	exponent := model.Number([]float64{2, 3, 1, 2.5, 0.5, -1, -2, 4, 1.5, 0}[r.IntN(10)])
	switch r.IntN(16) {
	case 0:
		return model.Call(model.OpExp, model.Call(model.OpNeg, model.Call(model.OpAbs, sub())))
	case 1:
		return model.Call(model.OpLog, sub())
	case 2:
		return model.Call(model.OpSqrt, sub())
	case 3:
		return model.Call(model.OpMin, sub(), sub())
	case 4:
		return model.Call(model.OpMax, sub(), sub())
	case 5:
		return model.Call(model.OpHill, sub(), model.Number(0.5+r.Float64()), model.Number([]float64{1, 2, 3, 2.5}[r.IntN(4)]))
	case 6:
		return model.Call(model.OpHillFall, sub(), model.Number(0.5+r.Float64()), model.Number([]float64{1, 2, 3, 2.5}[r.IntN(4)]))
	case 7, 8:
		return model.Call(model.OpPow, sub(), exponent)
	case 9: // terms that the quotient can share
		u, v := sub(), sub()
		return model.Call(model.OpDiv, model.Call(model.OpAdd, u, v), model.Call(model.OpAdd, model.Number(1), model.Call(model.OpAdd, v, u)))
	case 10:
		return model.Call(model.OpDiv, sub(), sub())
	case 11, 12:
		return model.Call(model.OpMul, sub(), sub())
	case 13:
		return model.Call(model.OpSub, sub(), sub())
	case 14:
		return model.Call(model.OpPow, sub(), sub())
	}
	return model.Call(model.OpAdd, sub(), sub())
}

// largestPart is the largest value in the tree at x, not a number where a part has
// none: rounding errors of the plain evaluation are its last places, magnified by
// the slopes above it. Where a root, a logarithm or a power is taken of a number
// near 0, at which the slope is beyond measure, it is infinite.
func largestPart(n *model.Node, x []float64) float64 {
	big := 0.0
	n.Walk(func(m *model.Node) {
		big = max(big, math.Abs(m.Eval(x, nil)))
		steep := m.Op == model.OpSqrt || m.Op == model.OpLog || m.Op == model.OpPow
		if steep && math.Abs(m.Args[0].Eval(x, nil)) < 1e-6 {
			big = math.Inf(1)
		}
	})
	return big
}

func anyBox(r *rand.Rand) (b box, x []float64) {
	for range 2 {
		lo := math.Max(0, 4*r.Float64()-1)
		a := iv{Lo: lo, Hi: lo + math.Pow(10, -4*r.Float64())}
		b = append(b, a)
		x = append(x, min(max(a.Lo+r.Float64()*(a.Hi-a.Lo), a.Lo), a.Hi))
	}
	return b, x
}

// compiled is the graph of a law as one atom, ok is false where a constant part is
// not finite.
func compiled(law *model.Node) (g *graph, top scaled, ok bool) {
	b := newBuilder(nil, nil)
	b.species(0)
	b.species(1)
	top = b.tree(law)
	for _, n := range b.nodes {
		ok = n.c.Bounded()
		for _, c := range n.coef {
			ok = ok && c.Bounded()
		}
		if !ok {
			return nil, top, false
		}
	}
	return &b.graph, top, top.c.Bounded()
}

// TestLawsEnclosed draws laws, boxes and points in them: the value of the law by
// plain evaluation, and its derivatives, lie in the enclosures, to the rounding of
// plain evaluation. Conditions above 1e4 are left out; so the slack, 1e-9 of the
// largest part, is 1e3 times what rounding makes of the rest.
func TestLawsEnclosed(t *testing.T) {
	r := rand.New(rand.NewPCG(21, 22))
	tried, graded := 0, 0
	for range 10_000 {
		law := anyLaw(r, 1+r.IntN(4))
		b, x := anyBox(r)
		v := law.Eval(x, nil)
		part := largestPart(law, x)
		g, top, ok := compiled(law)
		if !ok || math.IsNaN(v) || math.IsInf(v, 0) || !(part < 1e4) {
			continue
		}
		tried++
		got := top.c
		var s sheet
		if top.node != none {
			s = make(sheet, len(g.nodes))
			s.forward(g, b)
			got = got.Mul(s[top.node])
		}
		slack := 1e-9 * (1 + part)
		if !(got.Lo-slack <= v && v <= got.Hi+slack) {
			t.Fatalf("%s on %v: %v lacks %v at %v", law.Format([]string{"x", "y"}, nil), b, got, v, x)
		}
		if top.node != none && gradesEnclosed(t, law, g, top, s, b, x) {
			graded++
		}
	}
	if tried < 4000 || graded < 1000 {
		t.Errorf("only %d laws and %d gradients were tried", tried, graded)
	}
}

// gradesEnclosed checks the derivatives where the law has them all over the box.
func gradesEnclosed(t *testing.T, law *model.Node, g *graph, top scaled, s sheet, b box, x []float64) bool {
	if ok, smooth := s.defined(g); !ok || !smooth {
		return false
	}
	dx := make([]float64, 2)
	law.Gradient(x, nil, dx, nil)
	a := g.atom(top.node)
	d := make([]iv, len(a.species))
	s.gradient(g, &a, d, make([]iv, len(g.nodes)))
	for j, i := range a.species {
		e := top.c.Mul(d[j])
		slack := 1e-7 * (1 + math.Abs(dx[i]) + e.Mig())
		if math.IsNaN(dx[i]) || math.Abs(dx[i]) > 1e6 {
			continue
		}
		if !(e.Lo-slack <= dx[i] && dx[i] <= e.Hi+slack) {
			t.Fatalf("%s on %v: derivative %d in %v lacks %v at %v", law.Format([]string{"x", "y"}, nil), b, i, e, dx[i], x)
		}
	}
	return true
}

// TestNarrowingLosesNothing: a box is narrowed under the condition that a law has
// the value that it has at a point of the box; the point must stay.
func TestNarrowingLosesNothing(t *testing.T) {
	r := rand.New(rand.NewPCG(23, 24))
	tried, cut := 0, 0
	for range 10_000 {
		law := anyLaw(r, 1+r.IntN(4))
		b, x := anyBox(r)
		v, part := law.Eval(x, nil), largestPart(law, x)
		g, top, ok := compiled(law)
		if !ok || math.IsNaN(v) || math.IsInf(v, 0) || !(part < 1e4) || top.node == none {
			continue
		}
		s, w := make(sheet, len(g.nodes)), &wings{}
		s.forward(g, b)
		slack := 1e-9 * (1 + part)
		s[top.node] = s[top.node].Meet(iv{Lo: v - slack, Hi: v + slack}.Div(top.c))
		tried++
		old := append(box(nil), b...)
		for range 3 {
			empty := s[top.node].IsEmpty() || s.backward(g, w)
			s.leaves(g, b)
			if empty || !b[0].Has(x[0]) || !b[1].Has(x[1]) {
				t.Fatalf("%s = %v on %v: %v was lost, left %v", law.Format([]string{"x", "y"}, nil), v, old, x, b)
			}
			if s.refresh(g) {
				t.Fatalf("%s = %v on %v: %v was lost", law.Format([]string{"x", "y"}, nil), v, old, x)
			}
		}
		if b.gain(old) > 0.5 {
			cut++
		}
	}
	if tried < 4000 || cut < 1000 {
		t.Errorf("only %d laws were tried, and %d boxes cut", tried, cut)
	}
}

// TestSharedForms: ways to write a saturating law that must all give a bounded, and
// nearly exact, enclosure over all amounts.
func TestSharedForms(t *testing.T) {
	x := model.SpeciesRef(0)
	call, num := model.Call, model.Number
	square := call(model.OpPow, x, num(2))
	all := box{{Lo: 0, Hi: math.Inf(1)}, {Lo: 0, Hi: math.Inf(1)}}
	for name, law := range map[string]*model.Node{
		"hill":                call(model.OpHill, x, num(3), num(2)),
		"x²/(9+x²)":           call(model.OpDiv, square, call(model.OpAdd, num(9), square)),
		"x·x/(x·x+9)":         call(model.OpDiv, call(model.OpMul, x, x), call(model.OpAdd, call(model.OpMul, x, x), num(9))),
		"(x/3)²/(1+(x/3)²)":   call(model.OpDiv, call(model.OpPow, call(model.OpDiv, x, num(3)), num(2)), call(model.OpAdd, num(1), call(model.OpPow, call(model.OpDiv, x, num(3)), num(2)))),
		"1 − 9/(9+x²)":        call(model.OpSub, num(1), call(model.OpDiv, num(9), call(model.OpAdd, num(9), square))),
		"1 − hill_fall":       call(model.OpSub, num(1), call(model.OpHillFall, x, num(3), num(2))),
		"(0 + x²)/(9+x²)":     call(model.OpDiv, call(model.OpAdd, num(0), square), call(model.OpAdd, num(9), square)),
		"2x²/(18+2x²)":        call(model.OpDiv, call(model.OpMul, num(2), square), call(model.OpAdd, num(18), call(model.OpMul, num(2), square))),
		"(9+2x²)/(9+x²) − 1":  call(model.OpSub, call(model.OpDiv, call(model.OpAdd, num(9), call(model.OpMul, num(2), square)), call(model.OpAdd, num(9), square)), num(1)),
		"1/(1+(3/x)²)":        call(model.OpDiv, num(1), call(model.OpAdd, num(1), call(model.OpPow, call(model.OpDiv, num(3), x), num(2)))),
		"x²/(9+x²) by powers": call(model.OpDiv, square, call(model.OpAdd, call(model.OpPow, num(3), num(2)), square)),
	} {
		g, top, _ := compiled(law)
		s := make(sheet, len(g.nodes))
		s.forward(g, all)
		if got := top.c.Mul(s[top.node]); !got.In(iv{Lo: -1e-15, Hi: 1 + 1e-15}) {
			t.Errorf("%s over all amounts: %v", name, got)
		}
		s.forward(g, box{{Lo: 3, Hi: 6}, {}})
		if got := top.c.Mul(s[top.node]); !got.In(iv{Lo: 0.5 - 1e-15, Hi: 0.8 + 1e-15}) || !got.Has(0.5) {
			t.Errorf("%s from 3 to 6: %v, want 0.5 to 0.8", name, got)
		}
		if k := g.nodes[top.node].kind; k != rise && k != sum {
			t.Errorf("%s is of kind %d", name, k)
		}
	}
}
