package deterministic

import (
	"math"

	"holdfast/deterministic/proof/interval"
	"holdfast/model"
)

// span is an interval of numbers.
type span = interval.Interval

// encloser encloses laws over boxes. It keeps the quotients that it has taken
// apart, and belongs to one goroutine.
type encloser struct{ ratios map[*model.Node]*ratio }

func newEncloser() *encloser { return &encloser{map[*model.Node]*ratio{}} }

// enclose gives an interval that holds every value of a bound law over the box,
// one interval a species; the real line where the law has none.
func (e *encloser) enclose(n *model.Node, over []span) span {
	switch n.Op {
	case model.OpNumber:
		if math.IsNaN(n.Value) {
			return interval.Whole()
		}
		return interval.Point(n.Value)
	case model.OpSpecies:
		return over[n.Index]
	}
	var a [3]span
	for i, arg := range n.Args {
		a[i] = e.enclose(arg, over)
	}
	out := encloseOp(n.Op, a[0], a[1], a[2])
	if n.Op == model.OpDiv {
		if q := e.ratio(n); q != nil {
			out = out.Meet(q.enclose(e, over))
		}
	}
	if out.IsEmpty() {
		return interval.Whole()
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

func encloseOp(op model.Op, a, b, c span) span {
	switch op {
	case model.OpAdd:
		return a.Add(b)
	case model.OpSub:
		return a.Sub(b)
	case model.OpMul:
		return a.Mul(b)
	case model.OpDiv:
		return a.Div(b)
	case model.OpPow:
		return a.Pow(b)
	case model.OpMin:
		return a.Min(b)
	case model.OpMax:
		return a.Max(b)
	case model.OpHill:
		return a.Div(b).Hill(c)
	case model.OpHillFall:
		return a.Div(b).Fall(c)
	}
	return encloseFunction(op, a)
}

func encloseFunction(op model.Op, a span) span {
	switch op {
	case model.OpNeg:
		return a.Neg()
	case model.OpAbs:
		return a.Abs()
	case model.OpExp:
		return a.Exp()
	case model.OpLog:
		return a.Log()
	case model.OpSqrt:
		return a.Sqrt()
	}
	return interval.Whole()
}
