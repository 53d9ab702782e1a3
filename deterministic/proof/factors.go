package proof

import (
	"slices"

	"holdfast/deterministic/proof/interval"
)

// A monomial is c ∏ baseᵢ^expᵢ with whole exponents, bases ascending. A base may
// stand twice, with a positive and with a negative exponent: y/y is 1 only where
// y is not 0.
type monomial struct {
	c     iv
	bases []int
	exps  []int
}

// monomial takes s apart into factors.
func (b *builder) monomial(s scaled) monomial {
	m := monomial{c: s.c}
	if s.isConstant() {
		return m
	}
	n := b.nodes[s.node]
	if n.kind != product {
		m.multiply(b.factor(s.node))
		return m
	}
	for _, a := range n.args {
		m.multiply(b.factor(a))
	}
	return m
}

func (b *builder) factor(id int) (base, exp int) {
	if n := b.nodes[id]; n.kind == wholePower {
		return n.args[0], n.n
	}
	return id, 1
}

func (m *monomial) multiply(base, exp int) {
	if i := m.find(base, exp); i >= 0 {
		m.exps[i] += exp
		return
	}
	at, _ := slices.BinarySearch(m.bases, base)
	m.bases = slices.Insert(m.bases, at, base)
	m.exps = slices.Insert(m.exps, at, exp)
}

// takes tells whether d, constant aside, divides m and gives the quotient. Exponents
// are taken from exponents of the same sign and at least the size, so that what is
// left is undefined nowhere that m is defined.
func (m monomial) takes(d monomial) (monomial, bool) {
	out := monomial{c: m.c, bases: slices.Clone(m.bases), exps: slices.Clone(m.exps)}
	for i, base := range d.bases {
		at := out.find(base, d.exps[i])
		if at < 0 || max(out.exps[at], -out.exps[at]) < max(d.exps[i], -d.exps[i]) {
			return out, false
		}
		if out.exps[at] -= d.exps[i]; out.exps[at] == 0 {
			out.bases = slices.Delete(out.bases, at, at+1)
			out.exps = slices.Delete(out.exps, at, at+1)
		}
	}
	return out, true
}

// find gives the place of the base with an exponent of the sign of exp, or -1.
func (m *monomial) find(base, exp int) int {
	for i, other := range m.bases {
		if other == base && (m.exps[i] > 0) == (exp > 0) {
			return i
		}
	}
	return -1
}

// build gives the monomial as one product node.
func (b *builder) build(m monomial) scaled {
	var args []int
	for i, base := range m.bases {
		args = append(args, b.whole(base, m.exps[i]))
	}
	one := interval.Point(1)
	switch len(args) {
	case 0:
		return fixed(m.c)
	case 1:
		return b.times(scaled{one, args[0]}, m.c)
	}
	slices.Sort(args)
	return b.times(scaled{one, b.intern(node{kind: product, args: args})}, m.c)
}

// whole is base^exp as a node.
func (b *builder) whole(base, exp int) int {
	if exp == 1 {
		return base
	}
	return b.intern(node{kind: wholePower, args: []int{base}, n: exp})
}

func (b *builder) product(p, q scaled) scaled {
	switch {
	case p.isConstant():
		return b.times(q, p.c)
	case q.isConstant():
		return b.times(p, q.c)
	}
	m := b.monomial(p)
	other := b.monomial(q)
	m.c = multiply(m.c, other.c)
	for i, base := range other.bases {
		m.multiply(base, other.exps[i])
	}
	return b.build(m)
}
