package interval

import "math"

// Add is the set of sums.
func (a Interval) Add(b Interval) Interval {
	return Interval{addDown(a.Lo, b.Lo), addUp(a.Hi, b.Hi)}
}

// Sub is the set of differences.
func (a Interval) Sub(b Interval) Interval {
	return Interval{addDown(a.Lo, -b.Hi), addUp(a.Hi, -b.Lo)}
}

// Neg is the set of negatives.
func (a Interval) Neg() Interval { return Interval{-a.Hi, -a.Lo} }

// Mul is the set of products; 0 times an unbounded number is 0.
func (a Interval) Mul(b Interval) Interval {
	switch {
	case a.Lo >= 0 && b.Lo >= 0:
		return Interval{mulDown(a.Lo, b.Lo), mulUp(a.Hi, b.Hi)}
	case a.Lo >= 0:
		return mulNonNegative(a, b)
	case b.Lo >= 0:
		return mulNonNegative(b, a)
	case a.Hi <= 0 && b.Hi <= 0:
		return Interval{mulDown(a.Hi, b.Hi), mulUp(a.Lo, b.Lo)}
	case a.Hi <= 0:
		return mulNonNegative(a.Neg(), b.Neg())
	case b.Hi <= 0:
		return mulNonNegative(b.Neg(), a.Neg())
	}
	return Interval{
		min(mulDown(a.Lo, b.Hi), mulDown(a.Hi, b.Lo)),
		max(mulUp(a.Lo, b.Lo), mulUp(a.Hi, b.Hi)),
	}
}

// mulNonNegative is a·b for a ≥ 0.
func mulNonNegative(a, b Interval) Interval {
	lo, hi := a.Lo, a.Hi
	if b.Lo < 0 {
		lo = a.Hi
	}
	if b.Hi < 0 {
		hi = a.Lo
	}
	return Interval{mulDown(lo, b.Lo), mulUp(hi, b.Hi)}
}

// Div is the hull of the set of quotients by the non-zero numbers of b: the real
// line where 0 lies inside b. Where b is 0 alone there are no quotients, and the
// real line is given.
func (a Interval) Div(b Interval) Interval {
	switch {
	case b.Lo > 0:
		return divPositive(a, b)
	case b.Hi < 0:
		return divPositive(a.Neg(), b.Neg())
	case b.Lo == 0 && b.Hi > 0:
		return divEdge(a, b.Hi)
	case b.Hi == 0 && b.Lo < 0:
		return divEdge(a.Neg(), -b.Lo)
	}
	return Whole()
}

// divPositive is a/b for b > 0.
func divPositive(a, b Interval) Interval {
	lo, hi := b.Hi, b.Lo
	if a.Lo < 0 {
		lo = b.Lo
	}
	if a.Hi < 0 {
		hi = b.Hi
	}
	return Interval{divDown(a.Lo, lo), divUp(a.Hi, hi)}
}

// divEdge is a divided by the numbers above 0 and not above top.
func divEdge(a Interval, top float64) Interval {
	switch {
	case a.Lo == 0 && a.Hi == 0:
		return a
	case a.Lo >= 0:
		return Interval{divDown(a.Lo, top), math.Inf(1)}
	case a.Hi <= 0:
		return Interval{math.Inf(-1), divUp(a.Hi, top)}
	}
	return Whole()
}

// Solve is the hull of the numbers y in old for which y·d meets v for some d: the
// relational division v/d. It is empty where there are none.
func Solve(v, d, old Interval) Interval {
	switch {
	case d.Lo > 0 || d.Hi < 0:
		return old.Meet(v.Div(d))
	case v.Lo <= 0 && v.Hi >= 0:
		return old
	case d.Lo == 0 && d.Hi == 0:
		return Empty()
	case d.Lo == 0 || d.Hi == 0:
		return old.Meet(v.Div(d))
	}
	below := old.Meet(v.Div(Interval{d.Lo, 0}))
	above := old.Meet(v.Div(Interval{0, d.Hi}))
	return below.Hull(above)
}

// Sqrt is the set of square roots of the numbers of a that are not below 0.
func (a Interval) Sqrt() Interval {
	if !(a.Hi >= 0) {
		return Empty()
	}
	return Interval{sqrtDown(max(a.Lo, 0)), sqrtUp(a.Hi)}
}

// Abs is the set of absolute values.
func (a Interval) Abs() Interval { return Interval{a.Mig(), a.Mag()} }

// Min is the set of the smaller of a number of a and one of b.
func (a Interval) Min(b Interval) Interval { return Interval{min(a.Lo, b.Lo), min(a.Hi, b.Hi)} }

// Max is the set of the larger of a number of a and one of b.
func (a Interval) Max(b Interval) Interval { return Interval{max(a.Lo, b.Lo), max(a.Hi, b.Hi)} }
