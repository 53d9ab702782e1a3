package interval

import "math"

// Hill is the set of zⁿ/(1+zⁿ) for the z of a not below 0; n must be above 0. It
// rises with z, so its bounds are those of its ends.
func (a Interval) Hill(n Interval) Interval {
	q := nonNegative(a).Pow(n)
	if q.IsEmpty() {
		return q
	}
	return Interval{riseDown(q.Lo), riseUp(q.Hi)}
}

// Fall is the set of 1/(1+zⁿ), the falling twin of Hill.
func (a Interval) Fall(n Interval) Interval {
	q := nonNegative(a).Pow(n)
	if q.IsEmpty() {
		return q
	}
	return Interval{divDown(1, addUp(1, q.Hi)), divUp(1, addDown(1, q.Lo))}
}

func nonNegative(a Interval) Interval { return Interval{max(a.Lo, 0), a.Hi} }

// riseDown and riseUp bound q/(1+q) for 0 ≤ q ≤ +Inf.
func riseDown(q float64) float64 {
	if q <= 1 {
		return divDown(q, addUp(1, q))
	}
	return divDown(1, addUp(1, divUp(1, q)))
}

func riseUp(q float64) float64 {
	if q <= 1 {
		return divUp(q, addDown(1, q))
	}
	return divUp(1, addDown(1, divDown(1, q)))
}

// Ratio is the set of u/(u+r) for u and r not below 0 and not both 0. It rises
// with u and falls with r.
func Ratio(u, r Interval) Interval {
	u, r = nonNegative(u), nonNegative(r)
	if u.IsEmpty() || r.IsEmpty() {
		return Empty()
	}
	lo, hi := 0.0, 1.0
	if u.Lo > 0 {
		lo = riseDown(quotientDown(u.Lo, r.Hi))
	}
	if r.Lo > 0 {
		hi = riseUp(quotientUp(u.Hi, r.Lo))
	}
	return Interval{lo, hi}
}

// quotientDown is a bound below u/r for u > 0, r ≥ 0.
func quotientDown(u, r float64) float64 {
	if r == 0 {
		return math.MaxFloat64
	}
	return divDown(u, r)
}

// quotientUp is a bound above u/r for u ≥ 0, r > 0.
func quotientUp(u, r float64) float64 {
	if u > math.MaxFloat64 {
		return u
	}
	return divUp(u, r)
}

// HillSlope is the set of the derivatives n zⁿ⁻¹/(1+zⁿ)² of Hill. For n > 1 the
// slope rises to its peak at zⁿ = (n−1)/(n+1) and falls beyond, for n ≤ 1 it falls
// (algebra), so its bounds are at the ends and the peak.
func (a Interval) HillSlope(n Interval) Interval {
	a = nonNegative(a)
	if a.IsEmpty() || n.IsEmpty() {
		return Empty()
	}
	left, right := slopeAt(a.Lo, n), slopeAt(a.Hi, n)
	switch {
	case n.Hi <= 1:
		return Interval{right.Lo, left.Hi}
	case n.Lo <= 1:
		return Interval{0, math.Inf(1)}
	}
	out := Interval{min(left.Lo, right.Lo), max(left.Hi, right.Hi)}
	q := n.Sub(Point(1)).Div(n.Add(Point(1)))
	if peak := q.Root(n); peak.Hi > a.Lo && peak.Lo < a.Hi {
		out.Hi = max(out.Hi, n.Mul(q.Div(peak)).Div(Point(1).Add(q).PowInt(2)).Hi)
	}
	return out
}

// slopeAt encloses n zⁿ⁻¹/(1+zⁿ)² at one z, 0 ≤ z ≤ +Inf.
func slopeAt(z float64, n Interval) Interval {
	switch {
	case z == 0 && n.Lo > 1, z > math.MaxFloat64:
		return Point(0)
	case z == 0 && n.Lo == 1 && n.Hi == 1:
		return Point(1)
	case z == 0:
		return Interval{0, math.Inf(1)}
	}
	p := Point(z)
	q := p.Pow(n)
	one := Point(1)
	if q.Lo > 1 { // zⁿ⁻¹ may be beyond all numbers
		return n.Mul(p.Hill(n)).Mul(p.Fall(n)).Div(p)
	}
	lower := q.Div(p) // zⁿ⁻¹
	if q.Lo < tiny {
		lower = p.Pow(n.Sub(one))
	}
	return n.Mul(lower).Div(one.Add(q).PowInt(2))
}
