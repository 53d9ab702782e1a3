package deterministic

import (
	"math"

	"holdfast/model"
)

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

// enclose gives an interval that holds every value of a bound law over the box,
// one interval a species.
func enclose(n *model.Node, box []interval) interval {
	switch n.Op {
	case model.OpNumber:
		if math.IsNaN(n.Value) {
			return everything
		}
		return exactly(n.Value)
	case model.OpSpecies:
		return box[n.Index]
	}
	var a [3]interval
	for i, arg := range n.Args {
		a[i] = enclose(arg, box)
	}
	out := encloseOp(n.Op, a[0], a[1], a[2])
	if n.Op == model.OpDiv {
		out = out.meet(encloseRatio(n, box))
	}
	return out
}

func encloseOp(op model.Op, a, b, c interval) interval {
	switch op {
	case model.OpAdd:
		return a.add(b)
	case model.OpSub:
		return a.add(b.neg())
	case model.OpMul:
		return a.mul(b)
	case model.OpDiv:
		return a.mul(b.inverse())
	case model.OpNeg:
		return a.neg()
	case model.OpPow:
		return enclosePower(a, b)
	case model.OpMin:
		return interval{min(a.lo, b.lo), min(a.hi, b.hi)}
	case model.OpMax:
		return interval{max(a.lo, b.lo), max(a.hi, b.hi)}
	case model.OpAbs:
		return a.magnitude()
	case model.OpHill:
		return encloseHill(a, b, c)
	case model.OpHillFall:
		return encloseHill(b, a, c)
	}
	return encloseFunction(op, a)
}

func encloseFunction(op model.Op, a interval) interval {
	switch op {
	case model.OpExp:
		out := a.monotone(math.Exp)
		return interval{max(out.lo, 0), out.hi}
	case model.OpLog:
		if a.lo < 0 {
			return everything
		}
		return a.monotone(math.Log)
	case model.OpSqrt:
		if a.lo < 0 {
			return everything
		}
		out := a.monotone(math.Sqrt)
		return interval{max(out.lo, 0), out.hi}
	}
	return everything
}

// enclosePower is a^b: directly for a fixed exponent, else as exp(b log a).
func enclosePower(a, b interval) interval {
	if b.lo == b.hi {
		return a.power(b.lo)
	}
	if a.lo < 0 {
		return everything
	}
	corners := [4]float64{math.Pow(a.lo, b.lo), math.Pow(a.lo, b.hi), math.Pow(a.hi, b.lo), math.Pow(a.hi, b.hi)}
	out := outward(min(corners[0], corners[1], corners[2], corners[3]), max(corners[0], corners[1], corners[2], corners[3]), 4)
	return interval{max(out.lo, 0), out.hi} // b log a is extreme at corners
}

// encloseHill is xⁿ/(kⁿ+xⁿ) = 1/(1+(k/x)ⁿ).
func encloseHill(x, k, n interval) interval {
	if x.lo < 0 || k.lo < 0 || n.lo < 0 {
		return everything
	}
	out := exactly(1).add(enclosePower(k.mul(x.inverse()), n)).inverse()
	return out.meet(interval{0, 1})
}
