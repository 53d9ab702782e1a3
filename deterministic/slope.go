package deterministic

import (
	"math"

	"holdfast/model"
)

// slope encloses a law and its derivative along a direction over a box: forward
// automatic differentiation in intervals. The derivative is unbounded where the
// law has a kink or none.
func (e *encloser) slope(n *model.Node, over []interval, direction []float64) (value, slope interval) {
	switch n.Op {
	case model.OpNumber:
		return exactly(n.Value), exactly(0)
	case model.OpSpecies:
		return over[n.Index], exactly(direction[n.Index])
	}
	var a, d [3]interval
	for i, arg := range n.Args {
		a[i], d[i] = e.slope(arg, over, direction)
	}
	value = e.enclose(n, over)
	slope = exactly(0)
	for i := range n.Args {
		if d[i] != exactly(0) {
			slope = slope.add(d[i].mul(partial(n.Op, i, a, value)))
		}
	}
	return value, slope
}

// partial encloses the derivative of an operator in its argument i.
func partial(op model.Op, i int, a [3]interval, value interval) interval {
	one := exactly(1)
	switch op {
	case model.OpAdd:
		return one
	case model.OpSub:
		return [...]interval{one, one.neg()}[i]
	case model.OpNeg:
		return one.neg()
	case model.OpMul:
		return a[1-i]
	case model.OpDiv:
		if i == 0 {
			return a[1].inverse()
		}
		return value.mul(a[1].inverse()).neg()
	case model.OpPow:
		return powerSlope(i, a, value)
	case model.OpExp:
		return value
	case model.OpLog:
		return a[0].inverse()
	case model.OpSqrt:
		return value.mul(exactly(2)).inverse()
	case model.OpMin:
		return choice(a[i], a[1-i])
	case model.OpMax:
		return choice(a[1-i], a[i])
	case model.OpAbs:
		return choice(interval{0, 0}, a[0]).mul(exactly(2)).add(one.neg())
	case model.OpHill:
		return hillSlope(i, a[0], a[1], a[2], value)
	case model.OpHillFall:
		return hillSlope(i, a[0], a[1], a[2], exactly(1).add(value.neg())).neg()
	}
	return everything
}

// choice is 1 where a lies below b, 0 where above, either where undecided.
func choice(a, b interval) interval {
	switch {
	case a.hi < b.lo:
		return exactly(1)
	case a.lo > b.hi:
		return exactly(0)
	}
	return interval{0, 1}
}

// powerSlope: p a^(p−1), and a^p ln a.
func powerSlope(i int, a [3]interval, value interval) interval {
	if i == 1 {
		if a[0].lo < 0 {
			return everything
		}
		return value.mul(a[0].monotone(math.Log))
	}
	return a[1].mul(enclosePower(a[0], a[1].add(exactly(-1))))
}

// hillSlope: n h(1−h)/x, −n h(1−h)/k and h(1−h) ln(x/k), with h(1−h)/x ≤ also
// x^(n−1)/kⁿ.
func hillSlope(i int, x, k, n, h interval) interval {
	rest := exactly(1).add(h.neg()).meet(interval{0, 1})
	both := positive(h.mul(rest)).meet(interval{0, 0.25})
	switch i {
	case 0:
		steep := enclosePower(x, n.add(exactly(-1))).mul(enclosePower(k, n).inverse())
		return n.mul(positive(both.mul(x.inverse())).meet(interval{0, steep.hi}))
	case 1:
		return n.mul(both).mul(k.inverse()).neg()
	}
	return both.mul(x.mul(k.inverse()).monotone(math.Log))
}
