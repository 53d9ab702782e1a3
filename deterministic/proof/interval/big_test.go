package interval

import (
	"math"
	"math/big"
	"math/rand/v2"
)

// digits is the precision, in bits, of the reference values.
const digits = 400

func exact(x float64) *big.Float { return new(big.Float).SetPrec(digits).SetFloat64(x) }

func newBig() *big.Float { return new(big.Float).SetPrec(digits) }

// bigExp is e^x by halving the argument, Taylor's series, and squaring.
func bigExp(x *big.Float) *big.Float {
	const halvings = 24
	r := newBig().SetMantExp(x, -halvings)
	sum, term := exact(1), exact(1)
	for k := 1; k < 60; k++ {
		term.Mul(term, r)
		term.Quo(term, exact(float64(k)))
		sum.Add(sum, term)
	}
	for range halvings {
		sum.Mul(sum, sum)
	}
	return sum
}

// bigLog is ln x by Newton's method on bigExp.
func bigLog(x *big.Float) *big.Float {
	m := newBig()
	e := x.MantExp(m)
	f, _ := m.Float64()
	y := exact(math.Log(f) + float64(e)*math.Ln2)
	for range 4 {
		q := newBig().Quo(x, bigExp(y))
		q.Sub(q, exact(1))
		y.Add(y, q.Sub(q, newBig().Quo(newBig().Mul(q, q), exact(2))))
	}
	return y
}

func bigPow(x, p *big.Float) *big.Float {
	if x.Sign() == 0 {
		return exact(0)
	}
	return bigExp(newBig().Mul(p, bigLog(x)))
}

// holds tells whether v lies in a.
func holds(a Interval, v *big.Float) bool {
	low := math.IsInf(a.Lo, -1) || exact(a.Lo).Cmp(v) <= 0
	high := math.IsInf(a.Hi, 1) || exact(a.Hi).Cmp(v) >= 0
	return low && high
}

// anyNumber draws a number of any size and sign, now and then a special one.
func anyNumber(r *rand.Rand) float64 {
	special := []float64{
		0, 1, -1, 0.5, 2, math.MaxFloat64, -math.MaxFloat64, math.SmallestNonzeroFloat64,
		-math.SmallestNonzeroFloat64, 0x1p-1022, 0x1p-960, 3, 0.1,
	}
	if r.IntN(8) == 0 {
		return special[r.IntN(len(special))]
	}
	scale := []float64{1, 30, 300, 1070}[r.IntN(4)]
	x := math.Ldexp(1+r.Float64(), int((2*r.Float64()-1)*scale)-1)
	if math.IsInf(x, 0) {
		x = 1
	}
	if r.IntN(2) == 0 {
		return -x
	}
	return x
}

// anyInterval draws an interval, often narrow, and a number in it.
func anyInterval(r *rand.Rand) (Interval, float64) {
	a, b := anyNumber(r), anyNumber(r)
	if r.IntN(2) == 0 {
		b = a * (1 + 1e-3*r.Float64())
	}
	if r.IntN(5) == 0 || math.IsInf(b, 0) {
		b = a
	}
	i := Interval{min(a, b), max(a, b)}
	return i, inside(r, i)
}

func inside(r *rand.Rand, i Interval) float64 {
	switch r.IntN(4) {
	case 0:
		return i.Lo
	case 1:
		return i.Hi
	}
	t := r.Float64()
	return min(max(i.Lo*(1-t)+i.Hi*t, i.Lo), i.Hi)
}
