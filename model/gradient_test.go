package model

import (
	"math"
	"math/rand/v2"
	"testing"
)

// law parses a formula over the species x, y, z and the constants a, b.
func law(t *testing.T, text string) *Node {
	t.Helper()
	p := lawParser{text: text, names: testNames(), hinter: &hinter{}}
	tree := p.parse()
	if tree == nil {
		t.Fatalf("%s: %+v", text, p.errors)
	}
	return tree
}

func testNames() nameTable {
	return nameTable{
		"x": {kind: speciesName, index: 0}, "y": {kind: speciesName, index: 1}, "z": {kind: speciesName, index: 2},
		"a": {kind: constantName, index: 0}, "b": {kind: constantName, index: 1},
	}
}

// near tells whether got is want to within a few roundings of the larger of want
// and 1.
func near(got, want float64) bool {
	if math.IsNaN(want) || math.IsInf(want, 0) {
		return got == want || math.IsNaN(got) && math.IsNaN(want)
	}
	return math.Abs(got-want) <= 1e-14*max(1, math.Abs(want))
}

// TestGradientClosedForms holds derivatives against the rules of calculus worked
// out by hand, at x, y, z, a, b = 0.7, 1.3, 0, 2.1, 3.
func TestGradientClosedForms(t *testing.T) {
	x, y, a, b := 0.7, 1.3, 2.1, 3.0
	q := x * x / (a*a + x*x)
	h := math.Pow(x, b) / (math.Pow(a, b) + math.Pow(x, b))
	for _, c := range []struct {
		text       string
		dx, dy, da float64
	}{
		{"a*x*y", a * y, a * x, x * y},
		{"x/y - y/x", 1/y + y/(x*x), -x/(y*y) - 1/x, 0},
		{"x^2/(a^2 + x^2)", 2 * x * a * a / math.Pow(a*a+x*x, 2), 0, -2 * a * q / (a*a + x*x)},
		{"hill(x, a, b)", b * h * (1 - h) / x, 0, -b * h * (1 - h) / a},
		{"hill_fall(x, a, b)", -b * h * (1 - h) / x, 0, b * h * (1 - h) / a},
		{"x^y", y * math.Pow(x, y-1), math.Pow(x, y) * math.Log(x), 0},
		{"exp(-a*x)", -a * math.Exp(-a*x), 0, -x * math.Exp(-a*x)},
		{"log(a + x)", 1 / (a + x), 0, 1 / (a + x)},
		{"sqrt(x*y)", 0.5 * math.Sqrt(y/x), 0.5 * math.Sqrt(x/y), 0},
		{"min(x, y)*a", a, 0, x},
		{"max(x, y, 1)", 0, 1, 0},
		{"abs(x - y)", -1, 1, 0},
		{"-x^2", -2 * x, 0, 0},
		{"2^-x", -math.Ln2 * math.Pow(2, -x), 0, 0},
	} {
		dx, dc := make([]float64, 3), make([]float64, 2)
		tree := law(t, c.text)
		at, k := []float64{x, y, 0}, []float64{a, b}
		v := tree.Gradient(at, k, dx, dc)
		if want := tree.Eval(at, k); v != want {
			t.Errorf("%s: Gradient gives the value %v, Eval %v", c.text, v, want)
		}
		if !near(dx[0], c.dx) || !near(dx[1], c.dy) || !near(dc[0], c.da) {
			t.Errorf("%s: ∂x %v ∂y %v ∂a %v, want %v %v %v", c.text, dx[0], dx[1], dc[0], c.dx, c.dy, c.da)
		}
	}
}

// TestGradientEdges checks derivatives at 0 and at kinks, where the formulas need
// limits. The values are the one-sided limits from above.
func TestGradientEdges(t *testing.T) {
	inf := math.Inf(1)
	for _, c := range []struct {
		text      string
		value, dx float64
	}{
		{"hill(x, 2, 1)", 0, 0.5},
		{"hill(x, 2, 2)", 0, 0},
		{"hill(x, 2, 0.5)", 0, inf},
		{"hill(x, 2, -1)", 1, -0.5},
		{"hill_fall(x, 2, 1)", 1, -0.5},
		{"hill_fall(x, 2, 4)", 1, 0},
		{"hill(x, 2, 0)", 0.5, 0},
		{"hill(2, x, 1)", 1, -0.5},
		{"hill(2, x, 3)", 1, 0},
		{"x^1", 0, 1},
		{"x^2", 0, 0},
		{"x^1.5", 0, 0},
		{"x^0.5", 0, inf},
		{"sqrt(x)", 0, inf},
		{"x^0", 1, 0},
		{"(x - 3)^3", -27, 27},
		{"abs(x)", 0, 1},
		{"min(x, 0)", 0, 1},
		{"max(x, 0)", 0, 1},
		{"min(1, x)", 0, 1},
		{"min(-1, sqrt(x))", -1, 0}, // the branch not taken has no finite slope
		{"x*0", 0, 0},
	} {
		dx := make([]float64, 3)
		tree := law(t, c.text)
		v := tree.Gradient([]float64{0, 0, 0}, nil, dx, nil)
		if v != c.value || dx[0] != c.dx {
			t.Errorf("%s at 0: %v with slope %v, want %v with %v", c.text, v, dx[0], c.value, c.dx)
		}
		v = newSweep(tree).gradient([]float64{0, 0, 0}, nil, dx, nil)
		if v != c.value || dx[0] != c.dx {
			t.Errorf("%s at 0, compiled: %v with slope %v, want %v with %v", c.text, v, dx[0], c.value, c.dx)
		}
	}
}

// randomTree grows a tree of the given depth that is smooth and moderate for
// amounts between 0.5 and 2.
func randomTree(rng *rand.Rand, depth int) *Node {
	if depth == 0 {
		switch rng.IntN(3) {
		case 0:
			return Number(0.5 + rng.Float64())
		case 1:
			return ConstantRef(rng.IntN(2))
		}
		return SpeciesRef(rng.IntN(3))
	}
	sub := func() *Node { return randomTree(rng, depth-1) }
	positive := func() *Node { return Call(OpAdd, Number(0.3), Call(OpMul, sub(), Call(OpNeg, Call(OpNeg, sub())))) }
	square := func() *Node { return Call(OpPow, sub(), Number(2)) }
	switch rng.IntN(10) {
	case 0, 1:
		return Call(OpAdd, sub(), sub())
	case 2:
		return Call(OpSub, sub(), sub())
	case 3:
		return Call(OpMul, sub(), sub())
	case 4:
		return Call(OpDiv, sub(), Call(OpAdd, Number(1), square()))
	case 5:
		return Call(OpSqrt, Call(OpAdd, Number(1), square()))
	case 6:
		return Call(OpLog, Call(OpAdd, Number(2), square()))
	case 7:
		return Call(OpExp, Call(OpNeg, square()))
	case 8:
		return Call(OpHill, Call(OpAdd, Number(0.5), square()), Number(1.2), Number(2.5))
	}
	return Call(OpHillFall, Call(OpAbs, Call(OpAdd, Number(9), positive())), Number(8), Number(2))
}

// TestGradientDifferences holds the derivatives of random trees against a central
// difference of eighth order (Fornberg, Math. Comp. 51 (1988) 699, table 1).
//
// The step is 2⁻⁶; the truncation error is h⁸ f⁽⁹⁾/630 and the rounding error
// about ε f/h, so that agreement to 1e-9 of the size of the law and its slope is
// asked; the trees have derivatives that grow too fast for that in less than one
// case in a thousand, which a step four times as small then shows to be truncation.
func TestGradientDifferences(t *testing.T) {
	rng := rand.New(rand.NewPCG(11, 7))
	for range 600 {
		tree := randomTree(rng, 1+rng.IntN(4))
		x := []float64{0.5 + 1.5*rng.Float64(), 0.5 + 1.5*rng.Float64(), 0.5 + 1.5*rng.Float64()}
		c := []float64{0.5 + rng.Float64(), 0.5 + rng.Float64()}
		dx, dc := make([]float64, 3), make([]float64, 2)
		v := tree.Gradient(x, c, dx, dc)
		checkSweep(t, tree, x, c, v, dx, dc)
		for i := range x {
			compare(t, tree, x, c, x, i, v, dx[i])
		}
		for i := range c {
			compare(t, tree, x, c, c, i, v, dc[i])
		}
	}
}

func compare(t *testing.T, tree *Node, x, c, moved []float64, i int, value, got float64) {
	t.Helper()
	size := max(1, math.Abs(value), math.Abs(got))
	var want float64
	for _, step := range []float64{0x1p-6, 0x1p-8} {
		want = difference(tree, x, c, moved, i, step)
		if math.Abs(got-want) <= 1e-9*size {
			return
		}
	}
	t.Errorf("%s: derivative %v, difference %v", tree.Format([]string{"x", "y", "z"}, []string{"a", "b"}), got, want)
}

// checkSweep holds the compiled gradient against the tree's: the value in every bit,
// the derivatives but for the order of sums.
func checkSweep(t *testing.T, tree *Node, x, c []float64, v float64, dx, dc []float64) {
	t.Helper()
	ex, ec := make([]float64, len(dx)), make([]float64, len(dc))
	if w := newSweep(tree).gradient(x, c, ex, ec); w != v {
		t.Errorf("the compiled gradient gives the value %v, the tree %v", w, v)
	}
	for i, d := range append(ex, ec...) {
		want := append(append([]float64(nil), dx...), dc...)[i]
		if math.Abs(d-want) > 1e-11*max(1, math.Abs(want), math.Abs(v)) {
			t.Errorf("the compiled gradient gives %v, the tree %v", d, want)
		}
	}
}

func difference(tree *Node, x, c, moved []float64, i int, h float64) float64 {
	at, sum := moved[i], 0.0
	for k, w := range []float64{4. / 5, -1. / 5, 4. / 105, -1. / 280} {
		moved[i] = at + float64(k+1)*h
		up := tree.Eval(x, c)
		moved[i] = at - float64(k+1)*h
		sum += w * (up - tree.Eval(x, c))
	}
	moved[i] = at
	return sum / h
}

// TestGradientAllocates nothing for laws of ordinary size, and is linear in the
// size of a deep one.
func TestGradientAllocates(t *testing.T) {
	tree := law(t, "a + b*x^2/(y^2 + hill(x, a, 2) + x^2)")
	x, c, dx := []float64{1, 2, 3}, []float64{1, 2}, make([]float64, 3)
	if n := testing.AllocsPerRun(100, func() { tree.Gradient(x, c, dx, nil) }); n > 0 {
		t.Errorf("Gradient allocates %v times", n)
	}
	deep := SpeciesRef(0)
	for range 9000 {
		deep = Call(OpAdd, Call(OpMul, deep, Number(1)), SpeciesRef(1))
	}
	deep.Gradient(x, c, dx, nil)
	if dx[0] != 1 || dx[1] != 9000 {
		t.Errorf("deep sum: derivatives %v", dx)
	}
}
