package proof

import (
	"slices"

	"holdfast/deterministic/proof/interval"
)

// An atom is a node that rates are linear in, with what its derivatives need.
type atom struct {
	node    int
	below   []int // the nodes that it is made of, itself first, descending
	species []int // the species that it reads
	leaves  []int // their nodes
}

func (g *graph) atom(id int) atom {
	a := atom{node: id, below: g.reach([]int{id})}
	for _, i := range a.below {
		if n := &g.nodes[i]; n.kind == variable {
			a.species = append(a.species, n.n)
			a.leaves = append(a.leaves, i)
		}
	}
	return a
}

// reach lists the nodes that the given ones are made of, descending.
func (g *graph) reach(from []int) []int {
	seen := map[int]bool{}
	var visit func(int)
	visit = func(i int) {
		if seen[i] {
			return
		}
		seen[i] = true
		for _, a := range g.nodes[i].args {
			visit(a)
		}
	}
	for _, i := range from {
		visit(i)
	}
	out := make([]int, 0, len(seen))
	for i := range seen {
		out = append(out, i)
	}
	slices.SortFunc(out, func(a, b int) int { return b - a })
	return out
}

// gradient puts the derivatives of the atom by its species into d, one for each of
// a.species, as enclosures over the box of s: reverse automatic differentiation.
// At a kink of min, max or abs it is the hull of the one-sided derivatives, which
// holds Clarke's generalised gradient. adjoint is scratch, one for each node.
func (s sheet) gradient(g *graph, a *atom, d, adjoint []iv) {
	if g.nodes[a.node].kind == variable {
		d[0] = interval.Point(1)
		return
	}
	for _, i := range a.below {
		adjoint[i] = interval.Point(0)
	}
	adjoint[a.node] = interval.Point(1)
	for _, i := range a.below {
		if n := &g.nodes[i]; len(n.args) > 0 {
			s.pull(n, i, adjoint)
		}
	}
	for j, leaf := range a.leaves {
		d[j] = adjoint[leaf]
	}
}

// pull adds the adjoint of node i, times its partial derivatives, to those of its
// arguments.
func (s sheet) pull(n *node, i int, adjoint []iv) {
	w := adjoint[i]
	switch n.kind {
	case sum:
		for j, a := range n.args {
			adjoint[a] = adjoint[a].Add(w.Mul(n.coef[j]))
		}
	case product:
		for j, a := range n.args {
			adjoint[a] = adjoint[a].Add(w.Mul(s.without(n, j)))
		}
	case power, smaller, larger, ratio:
		da, db := s.partials(n, i)
		a, b := n.args[0], n.args[1]
		adjoint[a] = adjoint[a].Add(w.Mul(da))
		adjoint[b] = adjoint[b].Add(w.Mul(db))
	default:
		a := n.args[0]
		adjoint[a] = adjoint[a].Add(w.Mul(s.slope(n, i)))
	}
}

// without is the product n without its j-th factor.
func (s sheet) without(n *node, j int) iv {
	out := interval.Point(1)
	for k, a := range n.args {
		if k != j {
			out = out.Mul(s[a])
		}
	}
	return out
}

// slope is the derivative of an operation of one argument.
func (s sheet) slope(n *node, i int) iv {
	a, one := s[n.args[0]], interval.Point(1)
	switch n.kind {
	case wholePower:
		return interval.Point(float64(n.n)).Mul(a.PowInt(n.n - 1))
	case realPower:
		return n.c.Mul(a.Pow(n.c.Sub(one)))
	case exponential:
		return s[i]
	case logarithm:
		return one.Div(a)
	case squareRoot:
		return interval.Point(0.5).Div(s[i])
	case absolute:
		return sign(a)
	case rise:
		return n.scale.Mul(a.Mul(n.scale).HillSlope(n.c))
	case fall:
		return n.scale.Mul(a.Mul(n.scale).HillSlope(n.c)).Neg()
	}
	return interval.Whole()
}

func sign(a iv) iv {
	switch {
	case a.Lo > 0:
		return interval.Point(1)
	case a.Hi < 0:
		return interval.Point(-1)
	}
	return iv{Lo: -1, Hi: 1}
}

// partials are the derivatives of an operation of two arguments.
func (s sheet) partials(n *node, i int) (da, db iv) {
	a, b := s[n.args[0]], s[n.args[1]]
	switch n.kind {
	case power:
		return b.Mul(a.Pow(b.Sub(interval.Point(1)))), s[i].Mul(a.Log())
	case ratio:
		return ratioSlopes(a, b)
	case larger:
		a, b = b, a
	}
	switch {
	case a.Hi < b.Lo:
		return interval.Point(1), interval.Point(0)
	case b.Hi < a.Lo:
		return interval.Point(0), interval.Point(1)
	}
	return iv{Lo: 0, Hi: 1}, iv{Lo: 0, Hi: 1}
}

// ratioSlopes are r/(u+r)² and −u/(u+r)². For u and r not below 0 the first falls
// with u, the second rises with r, and each has one peak in the other argument, at
// u = r, where it is 1/(4u) or −1/(4r).
func ratioSlopes(u, r iv) (du, dr iv) {
	if u.Lo >= 0 && r.Lo >= 0 {
		return peakSlope(u, r), peakSlope(r, u).Neg()
	}
	square := u.Add(r).PowInt(2)
	return r.Div(square), u.Div(square).Neg()
}

// peakSlope is the set of r/(u+r)² for u, r ≥ 0.
func peakSlope(u, r iv) iv {
	at := func(u, r float64) iv {
		return interval.Point(r).Div(interval.Point(u).Add(interval.Point(r)).PowInt(2))
	}
	low := at(u.Hi, r.Lo).Hull(at(u.Hi, r.Hi))
	high := at(u.Lo, r.Lo).Hull(at(u.Lo, r.Hi))
	out := iv{Lo: max(low.Lo, 0), Hi: high.Hi}
	if r.Has(u.Lo) {
		out.Hi = interval.Point(1).Div(interval.Point(u.Lo).Mul(interval.Point(4))).Hi
	}
	return out
}
