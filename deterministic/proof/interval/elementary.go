package interval

import "math"

// largestExponent is beyond every x for which e^x is finite; e^{−746} is below half
// of the smallest positive number.
const largestExponent = 746

// expPoint encloses e^t for t = x(1±0) with an absolute error of t at most spread.
func expPoint(x pair, spread float64) Interval {
	switch {
	case x.hi == 0 && x.lo == 0 && spread == 0:
		return Point(1)
	case !(spread < 0x1p-40):
		return Interval{0, math.Inf(1)}
	case x.hi > largestExponent:
		return Interval{math.MaxFloat64, math.Inf(1)}
	case x.hi < -largestExponent:
		return Interval{0, math.SmallestNonzeroFloat64}
	}
	m, k := expPair(x)
	return scaled(m, k, expError+1.01*spread) // e^s − 1 ≤ 1.01 s for s below 2⁻⁴⁰
}

// Exp is the set of exponentials.
func (a Interval) Exp() Interval {
	if a.IsEmpty() {
		return a
	}
	return Interval{expPoint(pair{a.Lo, 0}, 0).Lo, expPoint(pair{a.Hi, 0}, 0).Hi}
}

// logPoint encloses ln x for 0 ≤ x ≤ +Inf.
func logPoint(x float64) Interval {
	switch {
	case x == 0:
		return Interval{math.Inf(-1), -largestExponent}
	case x == 1:
		return Point(0)
	case x > math.MaxFloat64:
		return Interval{largestExponent - 50, math.Inf(1)}
	}
	y, ok := logPair(x)
	if !ok {
		return Whole()
	}
	return Interval{addDown(y.hi, y.lo-logError), addUp(y.hi, y.lo+logError)}
}

// Log is the set of natural logarithms of the numbers of a above 0.
func (a Interval) Log() Interval {
	if !(a.Hi > 0) {
		return Empty()
	}
	return Interval{logPoint(max(a.Lo, 0)).Lo, logPoint(a.Hi).Hi}
}

// powPoint encloses x^p for 0 ≤ x ≤ +Inf and finite p > 0: e^{p ln x} in pairs.
// The product p ln x has the error of the logarithm times p, and 2⁻¹⁰⁰ of itself.
func powPoint(x, p float64) Interval {
	switch {
	case x == 0 || x == 1:
		return Point(x)
	case x > math.MaxFloat64:
		return Interval{math.MaxFloat64, x}
	}
	y, ok := logPair(x)
	if !ok {
		return Interval{0, math.Inf(1)}
	}
	t := pair{p, 0}.times(y)
	return expPoint(t, p*logError+math.Abs(t.hi)*0x1p-100)
}

// Pow is the set of powers of the numbers of a with exponents from p. Negative
// bases count with whole exponents only.
func (a Interval) Pow(p Interval) Interval {
	if p.IsPoint() && math.Abs(p.Lo) <= largestWhole && p.Lo == math.Trunc(p.Lo) {
		return a.PowInt(int(p.Lo))
	}
	if a.IsEmpty() || p.IsEmpty() {
		return Empty()
	}
	out := Empty()
	if a.Hi >= 0 {
		out = powNonNegative(Interval{max(a.Lo, 0), a.Hi}, p)
	}
	if a.Lo < 0 && p.HasWhole() {
		size := powNonNegative(Interval{max(-a.Hi, 0), -a.Lo}, p)
		out = out.Hull(size.Hull(size.Neg()))
	}
	return out
}

// HasWhole tells whether a holds a whole number.
func (a Interval) HasWhole() bool { return math.Ceil(a.Lo) <= a.Hi }

// powNonNegative is a^p for a ≥ 0.
func powNonNegative(a, p Interval) Interval {
	switch {
	case p.Lo >= 0:
		return powPositive(a, p)
	case p.Hi <= 0:
		return Point(1).Div(powPositive(a, p.Neg()))
	}
	up := powPositive(a, Interval{0, p.Hi})
	return up.Hull(Point(1).Div(powPositive(a, Interval{0, -p.Lo})))
}

// powPositive is a^p for a ≥ 0 and p ≥ 0.
func powPositive(a, p Interval) Interval {
	low, high := p.Lo, p.Hi // the exponents that give the lowest and the highest power
	if a.Lo < 1 {
		low = p.Hi
	}
	if a.Hi < 1 {
		high = p.Lo
	}
	return Interval{powLimit(a.Lo, low).Lo, powLimit(a.Hi, high).Hi}
}

// powLimit is powPoint with the exponents 0 and +Inf, the latter the limit.
func powLimit(x, p float64) Interval {
	switch {
	case p == 0:
		return Point(1)
	case p > math.MaxFloat64 && x < 1:
		return Point(0)
	case p > math.MaxFloat64:
		return Interval{1, math.Inf(1)}
	}
	return powPoint(x, p)
}
