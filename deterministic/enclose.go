package deterministic

import (
	"math"

	"holdfast/model"
)

// encloser encloses laws over boxes. It keeps the quotients that it has taken
// apart, and belongs to one goroutine.
type encloser struct{ ratios map[*model.Node]*ratio }

func newEncloser() *encloser { return &encloser{map[*model.Node]*ratio{}} }

// enclose gives an interval that holds every value of a bound law over the box,
// one interval a species.
func (e *encloser) enclose(n *model.Node, over []interval) interval {
	switch n.Op {
	case model.OpNumber:
		if math.IsNaN(n.Value) {
			return everything
		}
		return exactly(n.Value)
	case model.OpSpecies:
		return over[n.Index]
	}
	var a [3]interval
	for i, arg := range n.Args {
		a[i] = e.enclose(arg, over)
	}
	out := encloseOp(n.Op, a[0], a[1], a[2])
	if n.Op == model.OpDiv {
		if q := e.ratio(n); q != nil {
			out = out.meet(q.enclose(e, over))
		}
	}
	return out
}

// ratio takes a quotient apart, once.
func (e *encloser) ratio(n *model.Node) *ratio {
	q, ok := e.ratios[n]
	if !ok {
		q = newRatio(n.Args[0], n.Args[1])
		e.ratios[n] = q
	}
	return q
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
		return positive(a.monotone(math.Exp))
	case model.OpLog:
		if a.lo < 0 {
			return everything
		}
		return a.monotone(math.Log)
	case model.OpSqrt:
		if a.lo < 0 {
			return everything
		}
		return positive(a.monotone(math.Sqrt))
	}
	return everything
}

// enclosePower is a^b: directly for a fixed exponent, else as exp(b log a), which
// is extreme at corners.
func enclosePower(a, b interval) interval {
	if b.lo == b.hi {
		return a.power(b.lo)
	}
	if a.lo < 0 {
		return everything
	}
	low, high := math.Inf(1), math.Inf(-1)
	for _, base := range []float64{a.lo, a.hi} {
		for _, exponent := range []float64{b.lo, b.hi} {
			v := math.Pow(base, exponent)
			low, high = min(low, v), max(high, v)
		}
	}
	return positive(outward(low, high, 4))
}

// encloseHill is xⁿ/(kⁿ+xⁿ) = 1/(1+(k/x)ⁿ).
func encloseHill(x, k, n interval) interval {
	if x.lo < 0 || k.lo < 0 || n.lo < 0 {
		return everything
	}
	out := exactly(1).add(enclosePower(k.mul(x.inverse()), n)).inverse()
	return out.meet(interval{0, 1})
}
