package proof

import (
	"holdfast/deterministic/proof/interval"
)

// backward narrows the arguments of every node to what its value allows, from the
// last node to the first: hull consistency on the shared graph, with species at
// its leaves (Benhamou, Goualard, Granvilliers, Puget, ICLP 1999, 230; Schichl and
// Neumaier, J. Global Optim. 33 (2005) 541; from memory). It tells whether any
// node ran empty.
func (s sheet) backward(g *graph, w *wings) (empty bool) {
	for i := len(g.nodes) - 1; i >= 0; i-- {
		n := &g.nodes[i]
		switch n.kind {
		case variable, constant:
		case sum:
			s.narrowSum(n, s[i], w)
		case product:
			s.narrowProduct(n, s[i], w)
		default:
			s.narrow(n, s[i])
		}
		for _, a := range n.args {
			if s[a].IsEmpty() {
				return true
			}
		}
	}
	return false
}

// wings is scratch: what a sum or a product is without one of its arguments comes
// from those before it and those after it.
type wings struct{ after []iv }

func (w *wings) room(n int) []iv {
	if len(w.after) < n+1 {
		w.after = make([]iv, n+1)
	}
	return w.after
}

func (s sheet) narrowSum(n *node, v iv, w *wings) {
	after := w.room(len(n.args))
	last := len(n.args)
	after[last] = interval.Point(0)
	for i := last - 1; i > 0; i-- {
		after[i] = after[i+1].Add(n.coef[i].Mul(s[n.args[i]]))
	}
	rest := v.Sub(n.c)
	for i, a := range n.args {
		old := s[a]
		s[a] = interval.Solve(rest.Sub(after[i+1]), n.coef[i], old)
		rest = rest.Sub(n.coef[i].Mul(old))
	}
}

func (s sheet) narrowProduct(n *node, v iv, w *wings) {
	after := w.room(len(n.args))
	last := len(n.args)
	after[last] = interval.Point(1)
	for i := last - 1; i > 0; i-- {
		after[i] = after[i+1].Mul(s[n.args[i]])
	}
	before := interval.Point(1)
	for i, a := range n.args {
		old := s[a]
		s[a] = interval.Solve(v, before.Mul(after[i+1]), old)
		before = before.Mul(old)
	}
}

// narrow is for operations of one or two arguments.
func (s sheet) narrow(n *node, v iv) {
	a := &s[n.args[0]]
	switch n.kind {
	case wholePower:
		if n.n < 0 {
			v = interval.Solve(interval.Point(1), v, interval.Whole())
			*a = v.RootInt(-n.n, *a)
			return
		}
		*a = v.RootInt(n.n, *a)
	case realPower:
		if a.Lo >= 0 || !n.c.HasWhole() {
			*a = a.Meet(realRoot(v, n.c))
		}
	case exponential:
		*a = a.Meet(v.Log())
	case logarithm:
		*a = a.Meet(v.Exp())
	case squareRoot:
		*a = a.Meet(v.Meet(positive()).PowInt(2))
	case absolute:
		*a = a.Meet(v).Hull(a.Meet(v.Neg()))
	case rise:
		*a = saturatingRoot(n, v, *a)
	case fall:
		*a = saturatingRoot(n, interval.Point(1).Sub(v), *a)
	case smaller, larger, ratio:
		s.narrowTwo(n, v)
	}
}

func positive() iv { return iv{Lo: 0, Hi: interval.Whole().Hi} }

// realRoot is the set of y ≥ 0 with y^p in v.
func realRoot(v, p iv) iv {
	switch v = v.Meet(positive()); {
	case v.IsEmpty():
		return v
	case p.Lo > 0:
		return v.Root(p)
	case p.Hi < 0:
		return interval.Solve(interval.Point(1), v, positive()).Root(p.Neg())
	}
	return positive()
}

// saturatingRoot narrows y so that zᵖ/(1+zᵖ) is in v, z = scale·y: zᵖ = v/(1−v).
func saturatingRoot(n *node, v, y iv) iv {
	v = v.Meet(iv{Lo: 0, Hi: 1})
	if v.IsEmpty() {
		return v
	}
	q := odds(v)
	return y.Meet(q.Root(n.c).Div(n.scale))
}

// odds is the set of v/(1−v) for v from 0 to 1; 1 gives what is beyond all bounds.
func odds(v iv) iv {
	one := interval.Point(1)
	lo := interval.Point(v.Lo).Div(one.Sub(interval.Point(v.Lo)))
	hi := interval.Point(v.Hi).Div(one.Sub(interval.Point(v.Hi)))
	return iv{Lo: max(lo.Lo, 0), Hi: hi.Hi}
}
