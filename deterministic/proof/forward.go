package proof

import (
	"holdfast/deterministic/proof/interval"
)

// A sheet holds the value of every node of a graph over one box.
type sheet []iv

// apply is the set of values of the operation n on arguments from a.
func apply(n *node, a []iv) iv {
	switch n.kind {
	case wholePower:
		return a[0].PowInt(n.n)
	case realPower:
		return a[0].Pow(n.c)
	case power:
		return a[0].Pow(a[1])
	case exponential:
		return a[0].Exp()
	case logarithm:
		return a[0].Log()
	case squareRoot:
		return a[0].Sqrt()
	case smaller:
		return a[0].Min(a[1])
	case larger:
		return a[0].Max(a[1])
	case absolute:
		return a[0].Abs()
	case rise:
		return a[0].Mul(n.scale).Hill(n.c)
	case fall:
		return a[0].Mul(n.scale).Fall(n.c)
	case ratio:
		return ratioOf(a[0], a[1])
	}
	return interval.Whole()
}

// ratioOf is u/(u+r), whose saturating form needs u and r not below 0.
func ratioOf(u, r iv) iv {
	if u.Lo >= 0 && r.Lo >= 0 {
		return interval.Ratio(u, r)
	}
	return u.Div(u.Add(r))
}

// value is the set of values of node n where those of its arguments are in s.
func (s sheet) value(n *node) iv {
	switch n.kind {
	case variable:
		return interval.Whole()
	case constant:
		return n.c
	case sum:
		out := n.c
		for i, a := range n.args {
			out = out.Add(n.coef[i].Mul(s[a]))
		}
		return out
	case product:
		out := s[n.args[0]]
		for _, a := range n.args[1:] {
			out = out.Mul(s[a])
		}
		return out
	}
	var buf [2]iv
	for i, a := range n.args {
		buf[i] = s[a]
	}
	return apply(n, buf[:])
}

// forward works out every node over the box x, from scratch.
func (s sheet) forward(g *graph, x []iv) {
	for i := range g.nodes {
		n := &g.nodes[i]
		if n.kind == variable {
			s[i] = x[n.n]
			continue
		}
		s[i] = s.value(n)
	}
}

// refresh works out every node anew and keeps what both the old and the new value
// hold; it tells whether any node ran empty.
func (s sheet) refresh(g *graph) (empty bool) {
	for i := range g.nodes {
		n := &g.nodes[i]
		if n.kind != variable {
			s[i] = s[i].Meet(s.value(n))
		}
		if s[i].IsEmpty() {
			return true
		}
	}
	return false
}

// defined tells whether every node is defined, and continuous, all over the box
// that the sheet was worked out for; smooth, whether it has a derivative as well.
func (s sheet) defined(g *graph) (ok, smooth bool) {
	smooth = true
	for i := range g.nodes {
		n := &g.nodes[i]
		if !s.definedAt(n) {
			return false, false
		}
		smooth = smooth && s.smoothAt(n)
	}
	return true, smooth
}

func (s sheet) definedAt(n *node) bool {
	switch n.kind {
	case constant:
		return n.c.Bounded()
	case wholePower:
		return n.n > 0 || !s[n.args[0]].Has(0)
	case realPower:
		return s[n.args[0]].Lo > 0 || (s[n.args[0]].Lo == 0 && n.c.Lo > 0)
	case power, logarithm:
		return s[n.args[0]].Lo > 0
	case squareRoot, rise, fall:
		return s[n.args[0]].Lo >= 0
	case ratio:
		u, r := s[n.args[0]], s[n.args[1]]
		return !u.Add(r).Has(0)
	}
	return true
}

// smoothAt is false at the kinks of min, max and abs.
func (s sheet) smoothAt(n *node) bool {
	switch n.kind {
	case smaller, larger:
		a, b := s[n.args[0]], s[n.args[1]]
		return a.Hi < b.Lo || b.Hi < a.Lo
	case absolute:
		return !s[n.args[0]].Has(0)
	}
	return true
}
