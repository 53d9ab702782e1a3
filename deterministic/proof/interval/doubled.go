package interval

import "math"

// A pair is the unevaluated sum hi+lo of two floating-point numbers, |lo| at most
// half a last place of hi: about 106 bits. Dekker, Numer. Math. 18 (1971) 224.
//
// Errors, with u = 2⁻⁵³: times has a relative error below 8u², plus, of numbers of
// one sign or of which one is far the larger, below 4u² (Joldes, Muller, Popescu,
// ACM Trans. Math. Softw. 44 (2017) 15res, theorems 3.1 and 5.1 for the like
// algorithms, from memory; the bounds below leave a factor above 2⁴ in hand).
type pair struct{ hi, lo float64 }

func twoSum(a, b float64) pair {
	s := a + b
	return pair{s, sumError(a, b, s)}
}

func fastTwoSum(a, b float64) pair {
	s := a + b
	return pair{s, b - (s - a)}
}

func twoProduct(a, b float64) pair {
	p := a * b
	return pair{p, math.FMA(a, b, -p)}
}

func (a pair) plus(b pair) pair {
	s := twoSum(a.hi, b.hi)
	return fastTwoSum(s.hi, s.lo+(a.lo+b.lo))
}

func (a pair) times(b pair) pair {
	p := twoProduct(a.hi, b.hi)
	return fastTwoSum(p.hi, p.lo+(a.hi*b.lo+a.lo*b.hi))
}

// ln 2 in three parts, the first of 42 bits so that its product with an exponent
// is exact (computed from Σ 1/(k 2ᵏ) in rational arithmetic).
const (
	ln2High = 0x1.62e42fefa3800p-1
	ln2Mid  = 0x1.ef35793c76730p-45
	ln2Low  = 0x1.f97b57a079a19p-103
)

// expSeries holds 1/k! for k = 2 to 6, rounded to pairs (computed in rational
// arithmetic).
var expSeries = [...]pair{
	{0x1p-1, 0},
	{0x1.5555555555555p-3, 0x1.5555555555555p-57},
	{0x1.5555555555555p-5, 0x1.5555555555555p-59},
	{0x1.1111111111111p-7, 0x1.1111111111111p-63},
	{0x1.6c16c16c16c17p-10, -0x1.f49f49f49f49fp-65},
}

// expError bounds the relative error of expPair.
const expError = 0x1p-90

// expPair is m and k with e^x = m·2ᵏ, |x| < 2000, m between 0.7 and 1.42.
//
// x = k ln 2 + 32 r, |r| < 0.0109; eʳ by its series up to r¹¹/11!, of which the
// terms from r⁷ on, below 2⁻⁵⁷, need one floating-point number only, and whose rest
// is below 2⁻¹⁰⁷; then five squarings. Errors: 2⁻¹⁰³ from the reduction; 2⁻¹⁰⁰ from
// the series; five squarings double it five times and add 31·2⁻¹⁰³: below 2⁻⁹⁴ in
// all, and expError is 2⁻⁹⁰.
func expPair(x pair) (m pair, k int) {
	turns := math.RoundToEven(x.hi / math.Ln2)
	r := twoSum(x.hi, -turns*ln2High)
	part := twoProduct(-turns, ln2Mid)
	part.lo += x.lo - turns*ln2Low
	r = r.plus(fastTwoSum(part.hi, part.lo))
	r.hi, r.lo = r.hi/32, r.lo/32
	m = series(r)
	for range 5 {
		m = m.times(m)
	}
	return m, int(turns)
}

// series is eʳ for |r| < 0.0109.
func series(r pair) pair {
	h := r.hi
	tail := 1.0/5040 + h*(1.0/40320+h*(1.0/362880+h*(1.0/3628800+h/39916800)))
	s := pair{tail, 0}
	for k := len(expSeries) - 1; k >= 0; k-- {
		s = expSeries[k].plus(s.times(r))
	}
	s = pair{1, 0}.plus(s.times(r))
	return pair{1, 0}.plus(s.times(r))
}

// scaled encloses m(1±spread)·2ᵏ.
func scaled(m pair, k int, spread float64) Interval {
	e := 1.5 * spread // m is below 1.42
	lo, hi := addDown(m.hi, m.lo-e), addUp(m.hi, m.lo+e)
	if k > -1020 && k < 1020 {
		factor := math.Float64frombits(uint64(k+1023) << 52)
		return Interval{lo * factor, hi * factor}
	}
	return Interval{max(prev(math.Ldexp(lo, k)), 0), next(math.Ldexp(hi, k))}
}

// logError bounds the absolute error of logPair.
const logError = 0x1p-86

// logPair is ln x for finite x > 0. From y near ln x, with z = x e^{−y} − 1,
// ln x = y + z − z²/2 + z³/3 − …; y is the library's logarithm, whose accuracy
// matters only in that z turns out small, which is seen to. Errors: z has 2⁻⁹⁰ from
// the exponential, the series' rest is below z³ < 2⁻⁹⁰, the sum's rounding below
// 2⁻⁹⁵. ok is false where z does not become small.
func logPair(x float64) (y pair, ok bool) {
	f, e := math.Frexp(x)
	y.hi = math.Log(f) + float64(e)*math.Ln2
	for range 4 {
		m, k := expPair(pair{-y.hi, 0})
		f := math.Ldexp(f, e+k)
		p := twoProduct(f, m.hi)
		z := twoSum(p.hi-1, p.lo+f*m.lo)
		if math.Abs(z.hi) < 0x1p-30 {
			z.lo -= z.hi * z.hi / 2
			return pair{y.hi, 0}.plus(z), true
		}
		y.hi += z.hi
	}
	return y, false
}
