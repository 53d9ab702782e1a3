package interval

import (
	"fmt"
	"math"
	"math/big"
	"math/rand/v2"
	"testing"
)

// An operation of two arguments with its value in 400 bits; ok is false where the
// operation has none.
type binary struct {
	name string
	of   func(a, b Interval) Interval
	big  func(x, y *big.Float) (v *big.Float, ok bool)
}

func binaries() []binary {
	return []binary{
		{"+", Interval.Add, func(x, y *big.Float) (*big.Float, bool) { return newBig().Add(x, y), true }},
		{"−", Interval.Sub, func(x, y *big.Float) (*big.Float, bool) { return newBig().Sub(x, y), true }},
		{"×", Interval.Mul, func(x, y *big.Float) (*big.Float, bool) { return newBig().SetPrec(2*digits).Mul(x, y), true }},
		{"/", Interval.Div, func(x, y *big.Float) (*big.Float, bool) {
			if y.Sign() == 0 {
				return nil, false
			}
			return newBig().Quo(x, y), true
		}},
		{"ratio", Ratio, func(x, y *big.Float) (*big.Float, bool) {
			s := newBig().SetPrec(3000).Add(x, y)
			if x.Sign() < 0 || y.Sign() < 0 || s.Sign() == 0 {
				return nil, false
			}
			return newBig().Quo(x, s), true
		}},
	}
}

// TestEnclosures draws arguments from random intervals and checks, against 400
// bits, that the result is held.
func TestEnclosures(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for range 12_000 {
		a, x := anyInterval(r)
		b, y := anyInterval(r)
		for _, op := range binaries() {
			v, ok := op.big(exact(x), exact(y))
			if got := op.of(a, b); ok && !holds(got, v) {
				t.Fatalf("%v %s %v = %v lacks the value at %v, %v: %v", a, op.name, b, got, x, y, v)
			}
		}
		if s := a.Sqrt(); x >= 0 && !holds(s, newBig().Sqrt(exact(x))) {
			t.Fatalf("√%v = %v lacks √%v", a, s, x)
		}
	}
}

// TestExactResultsStayExact checks that points whose result is a floating-point
// number give that number alone, and others two neighbours.
func TestExactResultsStayExact(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	for range 30_000 {
		x, y := float64(r.IntN(1<<20)), float64(1+r.IntN(1<<20))
		for _, got := range []Interval{
			Point(x).Add(Point(y)), Point(x).Sub(Point(y)), Point(x).Mul(Point(y)), Point(x * y).Div(Point(y)), Point(x * x).Sqrt(),
		} {
			if !got.IsPoint() {
				t.Fatalf("%v, %v: an exact result came as %v", x, y, got)
			}
		}
		z := r.NormFloat64()
		for _, got := range []Interval{Point(z).Add(Point(1 / y)), Point(z).Mul(Point(1 / y)), Point(z).Div(Point(y)), Point(math.Abs(z)).Sqrt()} {
			if next(got.Lo) < got.Hi {
				t.Fatalf("%v, %v: %v is wider than the rounding", z, y, got)
			}
		}
	}
}

// TestElementary checks exp, log and powers against 400 bits, and that they are no
// wider than three last places where the result is not near the ends of the range.
func TestElementary(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	for range 1000 {
		x := 1400 * (r.Float64() - 0.5)
		if r.IntN(3) == 0 {
			x = math.Ldexp(r.Float64(), -r.IntN(80))
		}
		near(t, fmt.Sprintf("exp %v", x), Point(x).Exp(), bigExp(exact(x)))
		y := math.Ldexp(1+r.Float64(), r.IntN(2000)-1000)
		if r.IntN(3) == 0 {
			y = 1 + math.Ldexp(r.Float64()-0.5, -r.IntN(60))
		}
		if got := Point(y).Log(); !holds(got, bigLog(exact(y))) || got.Width() > 0x1p-84 && next(next(next(got.Lo))) < got.Hi {
			t.Fatalf("log %v: %v", y, got) // the error is stated as absolute
		}
		y = math.Ldexp(1.2+r.Float64()/2, r.IntN(2000)-1000)
		near(t, fmt.Sprintf("log %v", y), Point(y).Log(), bigLog(exact(y)))
		base, p := math.Ldexp(1+r.Float64(), r.IntN(40)-20), 10*(r.Float64()-0.5)
		near(t, fmt.Sprintf("%v^%v", base, p), Point(base).Pow(Point(p)), bigPow(exact(base), exact(p)))
	}
}

// near checks that v is held by an interval of at most four floating-point numbers.
func near(t *testing.T, what string, got Interval, v *big.Float) {
	t.Helper()
	if !holds(got, v) {
		t.Fatalf("%s: %v lacks %v", what, got, v)
	}
	if next(next(next(got.Lo))) < got.Hi {
		t.Fatalf("%s: %v is wide", what, got)
	}
}

// TestExtremes checks the ends of the range.
func TestExtremes(t *testing.T) {
	inf := math.Inf(1)
	cases := []struct {
		name      string
		got, want Interval
	}{
		{"exp of all", Whole().Exp(), Interval{0, inf}},
		{"exp 0", Point(0).Exp(), Point(1)},
		{"log 1", Point(1).Log(), Point(0)},
		{"exp overflows", Point(710).Exp(), Interval{math.MaxFloat64, inf}},
		{"product overflows", Point(math.MaxFloat64).Mul(Point(2)), Interval{math.MaxFloat64, inf}},
		{"quotient overflows", Point(math.MaxFloat64).Div(Point(0.5)), Interval{math.MaxFloat64, inf}},
		{"square across 0", Interval{-2, 3}.PowInt(2), Interval{0, 9}},
		{"cube across 0", Interval{-2, 3}.PowInt(3), Interval{-8, 27}},
		{"even power by real exponent", Interval{-2, 3}.Pow(Point(4)), Interval{0, 81}},
		{"by an interval around 0", Point(1).Div(Interval{-1, 1}), Whole()},
		{"by an interval from 0", Point(1).Div(Interval{0, 2}), Interval{0.5, inf}},
		{"by 0", Point(1).Div(Point(0)), Whole()},
		{"root of a negative", Interval{-4, -1}.Sqrt(), Empty()},
		{"hill of all", Interval{0, inf}.Hill(Point(2)), Interval{0, 1}},
		{"hill at 0", Point(0).Hill(Point(2.5)), Point(0)},
		{"fall of all", Interval{0, inf}.Fall(Point(2.5)), Interval{0, 1}},
		{"solve one side", Solve(Point(1), Interval{-1, 1}, Interval{0, inf}), Interval{1, inf}},
		{"solve nothing", Solve(Point(1), Point(0), Whole()), Empty()},
		{"solve anything", Solve(Interval{-1, 1}, Interval{-1, 1}, Interval{3, 4}), Interval{3, 4}},
		{"min", Interval{1, 4}.Min(Interval{2, 3}), Interval{1, 3}},
		{"max", Interval{1, 4}.Max(Interval{2, 3}), Interval{2, 4}},
		{"abs", Interval{-3, 2}.Abs(), Interval{0, 3}},
	}
	for _, c := range cases {
		if c.got != c.want {
			t.Errorf("%s: %v, want %v", c.name, c.got, c.want)
		}
	}
}

// TestSaturating checks Hill, its twin and its slope against 400 bits, over
// intervals that hold the slope's peak and intervals that do not.
func TestSaturating(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 8))
	one := exact(1)
	for range 800 {
		n := []float64{1, 2, 3, 4, 0.5, 1.5, 2.5, 7.25}[r.IntN(8)]
		lo := math.Ldexp(r.Float64(), r.IntN(12)-6)
		a := Interval{lo, lo * (1 + r.Float64()*float64(r.IntN(4)))}
		z := exact(inside(r, a))
		q := bigPow(z, exact(n))
		d := newBig().Add(one, q)
		slope := newBig().Quo(newBig().Mul(exact(n), q), newBig().Mul(z, newBig().Mul(d, d)))
		p := Point(n)
		for name, pair := range map[string]struct {
			got  Interval
			want *big.Float
		}{
			"hill": {a.Hill(p), newBig().Quo(q, d)}, "fall": {a.Fall(p), newBig().Quo(one, d)}, "slope": {a.HillSlope(p), slope},
		} {
			if z.Sign() > 0 && !holds(pair.got, pair.want) {
				t.Fatalf("%s of %v, n = %v: %v lacks %v", name, a, n, pair.got, pair.want)
			}
		}
	}
}

// FuzzEnclosures checks the operations at arbitrary numbers.
func FuzzEnclosures(f *testing.F) {
	f.Add(1.0, 2.0, 3.0, -4.0)
	f.Add(0.0, math.MaxFloat64, 5e-324, -1e-310)
	f.Fuzz(func(t *testing.T, a, b, c, d float64) {
		for _, v := range []float64{a, b, c, d} {
			if math.IsNaN(v) || math.IsInf(v, 0) {
				t.Skip()
			}
		}
		p, q := Interval{min(a, b), max(a, b)}, Interval{min(c, d), max(c, d)}
		for _, op := range binaries() {
			if v, ok := op.big(exact(a), exact(c)); ok && !holds(op.of(p, q), v) {
				t.Fatalf("%v %s %v = %v lacks %v", p, op.name, q, op.of(p, q), v)
			}
		}
	})
}

func ExampleInterval() {
	tenth := Point(1).Div(Point(10)) // 1/10 is no floating-point number
	fmt.Println(tenth)
	fmt.Println(Interval{-1, 2}.PowInt(2), Point(6).Div(Point(3)))
	// Output:
	// [0.09999999999999999, 0.1]
	// [0, 4] [2, 2]
}

func BenchmarkMul(b *testing.B) {
	x, y := Interval{1.1, 1.2}, Interval{0.3, 0.4}
	for b.Loop() {
		x = x.Mul(y)
		x = Interval{x.Lo + 1, x.Hi + 1}
	}
}

func BenchmarkPow(b *testing.B) {
	x, p := Interval{1.1, 1.2}, Point(2.5)
	for b.Loop() {
		_ = x.Pow(p)
	}
}
