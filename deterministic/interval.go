package deterministic

import "math"

// interval is the numbers from lo to hi, both included; ends may be infinite.
// Every operation rounds outwards, so that its result holds all true values
// (Moore, Kearfott, Cloud, Introduction to Interval Analysis, 2009).
type interval struct{ lo, hi float64 }

var everything = interval{math.Inf(-1), math.Inf(1)}

func exactly(v float64) interval { return interval{v, v} }

// outward moves each end by ulps units in the last place; what is not a number
// becomes unbounded.
func outward(lo, hi float64, ulps int) interval {
	for range ulps {
		lo, hi = math.Nextafter(lo, math.Inf(-1)), math.Nextafter(hi, math.Inf(1))
	}
	if math.IsNaN(lo) {
		lo = math.Inf(-1)
	}
	if math.IsNaN(hi) {
		hi = math.Inf(1)
	}
	return interval{lo, hi}
}

func (a interval) add(b interval) interval {
	if b == exactly(0) {
		return a
	}
	return outward(a.lo+b.lo, a.hi+b.hi, 1)
}

func (a interval) neg() interval { return interval{-a.hi, -a.lo} }

// times is the product of two ends; 0 times an infinite end, which is not a value
// but a limit, is 0.
func times(a, b float64) float64 {
	if a == 0 || b == 0 {
		return 0
	}
	return a * b
}

func (a interval) mul(b interval) interval {
	switch {
	case a == exactly(0) || b == exactly(0):
		return exactly(0)
	case a == exactly(1):
		return b
	case b == exactly(1):
		return a
	}
	p := [4]float64{times(a.lo, b.lo), times(a.lo, b.hi), times(a.hi, b.lo), times(a.hi, b.hi)}
	out := outward(min(p[0], p[1], p[2], p[3]), max(p[0], p[1], p[2], p[3]), 1)
	if a.lo >= 0 && b.lo >= 0 {
		out.lo = max(out.lo, 0)
	}
	return out
}

// inverse is 1/a; where 0 lies inside a it is unbounded.
func (a interval) inverse() interval {
	if a.lo < 0 && a.hi > 0 || a == exactly(0) {
		return everything
	}
	lo, hi := 1/a.hi, 1/a.lo
	if a.hi == 0 {
		lo = math.Inf(-1)
	}
	if a.lo == 0 {
		hi = math.Inf(1)
	}
	out := outward(lo, hi, 1)
	if a.lo >= 0 {
		out.lo = max(out.lo, 0)
	}
	return out
}

// monotone is f over a for a non-decreasing f that is right to a few units in
// the last place.
func (a interval) monotone(f func(float64) float64) interval {
	return outward(f(a.lo), f(a.hi), 4)
}

// power is a^p. For a negative base p must be a whole number.
func (a interval) power(p float64) interval {
	whole := p == math.Trunc(p)
	switch {
	case p == 0:
		return exactly(1)
	case p == 1:
		return a
	case p < 0:
		return a.power(-p).inverse()
	case !whole && a.lo < 0:
		return everything
	case !whole || math.Mod(p, 2) != 0:
		return a.rising(p)
	}
	// Even powers: of the magnitudes.
	return a.magnitude().rising(p)
}

func (a interval) rising(p float64) interval {
	out := a.monotone(func(v float64) float64 { return math.Pow(v, p) })
	if a.lo >= 0 {
		out.lo = max(out.lo, 0)
	}
	return out
}

func (a interval) magnitude() interval {
	switch {
	case a.lo >= 0:
		return a
	case a.hi <= 0:
		return a.neg()
	}
	return interval{0, max(-a.lo, a.hi)}
}

func (a interval) meet(b interval) interval {
	return interval{max(a.lo, b.lo), min(a.hi, b.hi)}
}
