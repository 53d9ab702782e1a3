package proof

import (
	"holdfast/deterministic/proof/interval"
)

// quotient is p/q. Where a term of the divisor also stands in the dividend, as in
// x²/(k+x²), the quotient is written so that each quantity stands in it once, and
// intervals lose nothing: u/(u+r), which rises with u and falls with r.
func (b *builder) quotient(p, q scaled) scaled {
	if q.isConstant() {
		return b.times(p, divide(interval.Point(1), q.c))
	}
	if p.isConstant() || b.nodes[p.node].kind != sum || !b.sharesTerms(p, q) {
		return b.simpleQuotient(p, q)
	}
	n := b.nodes[p.node]
	parts := []scaled{b.simpleQuotient(fixed(n.c.Mul(p.c)), q)}
	for i, a := range n.args {
		parts = append(parts, b.simpleQuotient(scaled{n.coef[i].Mul(p.c), a}, q))
	}
	return b.join(parts...)
}

// sharesTerms tells whether a term of the sum p could be cancelled against q.
func (b *builder) sharesTerms(p, q scaled) bool {
	for _, a := range b.nodes[p.node].args {
		m := b.monomial(scaled{interval.Point(1), a})
		for i, base := range b.monomial(q).bases {
			if b.monomial(q).exps[i] == 1 && b.shared(m, base) >= 0 {
				return true
			}
		}
	}
	return false
}

// simpleQuotient is p/q for p without terms to be divided singly.
func (b *builder) simpleQuotient(p, q scaled) scaled {
	if p.c == interval.Point(0) && p.isConstant() {
		b.dropped = append(b.dropped, b.whole(q.node, -1))
		return p
	}
	top, bottom := b.monomial(p), b.monomial(q)
	top.c = divide(top.c, bottom.c)
	for i, base := range bottom.bases {
		if bottom.exps[i] == 1 {
			if rest, saturating, ok := b.saturate(top, base); ok {
				top = rest
				top.multiply(saturating, 1)
				continue
			}
		}
		top.multiply(base, -bottom.exps[i])
	}
	return b.build(top)
}

// shared gives the term of the sum at base that divides m, or -1.
func (b *builder) shared(m monomial, base int) int {
	n := b.nodes[base]
	if n.kind != sum {
		return -1
	}
	for i, a := range n.args {
		if _, ok := m.takes(b.monomial(scaled{interval.Point(1), a})); ok && n.coef[i].Lo > 0 {
			return i
		}
	}
	return -1
}

// saturate writes top/base, base a sum, as rest times a saturating function of the
// term that they share, or, where they share none and base is k + c yⁿ, of y.
func (b *builder) saturate(top monomial, base int) (rest monomial, id int, ok bool) {
	n := b.nodes[base]
	if n.kind != sum {
		return top, none, false
	}
	i := b.shared(top, base)
	if i < 0 {
		return b.falling(top, n)
	}
	rest, _ = top.takes(b.monomial(scaled{interval.Point(1), n.args[i]}))
	rest.c = divide(rest.c, n.coef[i])
	if len(n.args) == 1 && n.c.Lo > 0 {
		if id, ok := b.saturating(rise, n); ok {
			return rest, id, true
		}
	}
	var others form
	inverse := divide(interval.Point(1), n.coef[i])
	others.c = n.c.Mul(inverse)
	for j, a := range n.args {
		if j != i {
			others.addNode(a, n.coef[j].Mul(inverse))
		}
	}
	return rest, b.intern(node{kind: ratio, args: []int{n.args[i], b.sum(others)}}), true
}

// falling writes 1/(k + c yⁿ) as 1/k times 1/(1+zⁿ), z = (c/k)^{1/n} y.
func (b *builder) falling(top monomial, n node) (rest monomial, id int, ok bool) {
	if len(n.args) != 1 || !(n.c.Lo > 0) || !(n.coef[0].Lo > 0) {
		return top, none, false
	}
	if id, ok = b.saturating(fall, n); !ok {
		return top, none, false
	}
	top.c = divide(top.c, n.c)
	return top, id, true
}

// saturating makes zⁿ/(1+zⁿ) or 1/(1+zⁿ) of the sum k + c yⁿ, where y is a
// species or n is not whole, so that y ≥ 0. Where n is negative, 1/(k + c yⁿ) is
// the rising function with exponent −n, which at y = 0 has its limit, 0.
func (b *builder) saturating(k kind, total node) (id int, ok bool) {
	y, exponent := total.args[0], interval.Point(1)
	switch n := b.nodes[y]; {
	case n.kind == wholePower && b.nodes[n.args[0]].kind == variable:
		y, exponent = n.args[0], interval.Point(float64(n.n))
	case n.kind == realPower:
		y, exponent = n.args[0], n.c
	case n.kind != variable:
		return none, false
	}
	size := divide(total.coef[0], total.c)
	if exponent.Hi < 0 && k == fall {
		k, exponent, size = rise, exponent.Neg(), divide(interval.Point(1), size)
	}
	if !(exponent.Lo > 0) {
		return none, false
	}
	scale := size.Root(exponent)
	if !scale.Bounded() || !(scale.Lo > 0) {
		return none, false
	}
	return b.intern(node{kind: k, args: []int{y}, c: exponent, scale: scale}), true
}
