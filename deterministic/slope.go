package deterministic

import (
	"holdfast/deterministic/proof/interval"
	"holdfast/model"
)

// slope encloses a law and its derivative along a direction over a box: forward
// automatic differentiation in intervals. At a kink it holds the slopes of both
// sides.
func (e *encloser) slope(n *model.Node, over []span, direction []float64) (value, slope span) {
	zero := interval.Point(0)
	switch n.Op {
	case model.OpNumber:
		return e.enclose(n, over), zero
	case model.OpSpecies:
		return over[n.Index], interval.Point(direction[n.Index])
	}
	var a, d [3]span
	for i, arg := range n.Args {
		a[i], d[i] = e.slope(arg, over, direction)
	}
	value = e.enclose(n, over)
	slope = zero
	for i := range n.Args {
		if d[i] != zero {
			slope = slope.Add(d[i].Mul(partial(n.Op, i, a, value)))
		}
	}
	if slope.IsEmpty() {
		return value, interval.Whole()
	}
	return value, slope
}

// partial encloses the derivative of an operator in its argument i.
func partial(op model.Op, i int, a [3]span, value span) span {
	one := interval.Point(1)
	switch op {
	case model.OpAdd:
		return one
	case model.OpSub:
		return interval.Point(float64(1 - 2*i))
	case model.OpMul:
		return a[1-i]
	case model.OpDiv:
		if i == 0 {
			return one.Div(a[1])
		}
		return value.Div(a[1]).Neg()
	case model.OpPow:
		if i == 0 {
			return a[1].Mul(a[0].Pow(a[1].Sub(one)))
		}
		return value.Mul(a[0].Log())
	case model.OpMin:
		return chosen(a[i], a[1-i])
	case model.OpMax:
		return chosen(a[1-i], a[i])
	case model.OpHill:
		return hillSlope(i, a[0], a[1], a[2])
	case model.OpHillFall:
		return hillSlope(i, a[0], a[1], a[2]).Neg()
	}
	return functionSlope(op, a[0], value)
}

func functionSlope(op model.Op, a, value span) span {
	one, two := interval.Point(1), interval.Point(2)
	switch op {
	case model.OpNeg:
		return one.Neg()
	case model.OpAbs:
		return chosen(interval.Point(0), a).Mul(two).Sub(one)
	case model.OpExp:
		return value
	case model.OpLog:
		return one.Div(a)
	case model.OpSqrt:
		return one.Div(value.Mul(two))
	}
	return interval.Whole()
}

// chosen is 1 where a lies below b, 0 where above, both where undecided.
func chosen(a, b span) span {
	switch {
	case a.Hi < b.Lo:
		return interval.Point(1)
	case a.Lo > b.Hi:
		return interval.Point(0)
	}
	return span{Lo: 0, Hi: 1}
}

// hillSlope is the derivative of zⁿ/(1+zⁿ) with z = x/k in x, in k, and in n.
func hillSlope(i int, x, k, n span) span {
	z := x.Div(k)
	switch i {
	case 0:
		return z.HillSlope(n).Div(k)
	case 1:
		return z.HillSlope(n).Mul(z).Div(k).Neg()
	}
	return z.Hill(n).Mul(z.Fall(n)).Mul(z.Log())
}
