package deterministic

import (
	"math"
	"slices"
	"strings"

	"holdfast/model"
)

// encloseRatio encloses a quotient of sums of products better than the quotient
// of the two intervals, which forgets that both read the same amounts. Each term
// c·m of the numerator whose product m stands in the denominator as d·m gives
// c/(d + rest/m), with the rest of the denominator taken on its own; and the
// whole lies between the least and the largest c/d.
func encloseRatio(n *model.Node, box []interval) interval {
	top, okTop := expand(n.Args[0], box)
	bottom, okBottom := expand(n.Args[1], box)
	if !okTop || !okBottom || len(bottom) < 2 {
		return everything
	}
	sum := exactly(0)
	least, most := 0.0, 0.0
	if len(top) == len(bottom) {
		least = math.Inf(1)
	}
	for _, t := range top {
		k := slices.IndexFunc(bottom, func(b monomial) bool { return b.key == t.key })
		if k < 0 {
			most = math.Inf(1)
			least = 0
			sum = sum.add(encloseTerm(t, -1, bottom))
			continue
		}
		q := outward(t.coefficient/bottom[k].coefficient, t.coefficient/bottom[k].coefficient, 1)
		least, most = min(least, q.lo), max(most, q.hi)
		sum = sum.add(encloseTerm(t, k, bottom))
	}
	return sum.meet(interval{max(least, 0), most})
}

// encloseTerm is t over the sum of bottom, where bottom[k] has the same product.
func encloseTerm(t monomial, k int, bottom []monomial) interval {
	rest := exactly(0)
	for j, b := range bottom {
		if j != k {
			rest = rest.add(exactly(b.coefficient).mul(b.value))
		}
	}
	over := rest.mul(t.value.inverse())
	if k >= 0 {
		over = over.add(exactly(bottom[k].coefficient))
	}
	out := exactly(t.coefficient).mul(over.inverse())
	return interval{max(out.lo, 0), out.hi}
}

// monomial is a positive coefficient times a product of factors, none negative
// over the box; key tells products apart.
type monomial struct {
	coefficient float64
	factors     []string
	key         string
	value       interval
}

// maxTerms bounds the number of terms of an expanded sum.
const maxTerms = 64

// expand writes a tree as a sum of monomials; false where it has a term that may
// be negative, or too many terms.
func expand(n *model.Node, box []interval) ([]monomial, bool) {
	switch n.Op {
	case model.OpNumber:
		if !(n.Value >= 0) || math.IsInf(n.Value, 0) {
			return nil, false
		}
		if n.Value == 0 {
			return nil, true
		}
		return []monomial{{coefficient: n.Value, value: exactly(1)}}, true
	case model.OpAdd:
		a, ok := expand(n.Args[0], box)
		b, okB := expand(n.Args[1], box)
		return collect(append(slices.Clone(a), b...)), ok && okB
	case model.OpMul:
		return expandProduct(n, box)
	case model.OpDiv:
		if n.Args[1].Op == model.OpNumber && n.Args[1].Value > 0 {
			a, ok := expand(n.Args[0], box)
			return scaled(a, 1/n.Args[1].Value), ok
		}
	}
	value := enclose(n, box)
	if !(value.lo >= 0) {
		return nil, false
	}
	key := n.Format(speciesKeys(len(box)), nil)
	return []monomial{{1, []string{key}, key, value}}, true
}

func expandProduct(n *model.Node, box []interval) ([]monomial, bool) {
	a, ok := expand(n.Args[0], box)
	b, okB := expand(n.Args[1], box)
	if !ok || !okB || len(a)*len(b) > maxTerms {
		return nil, false
	}
	var out []monomial
	for _, p := range a {
		for _, q := range b {
			factors := append(slices.Clone(p.factors), q.factors...)
			slices.Sort(factors)
			out = append(out, monomial{
				p.coefficient * q.coefficient, factors, strings.Join(factors, "*"), p.value.mul(q.value),
			})
		}
	}
	return collect(out), true
}

func scaled(a []monomial, by float64) []monomial {
	out := slices.Clone(a)
	for i := range out {
		out[i].coefficient *= by
	}
	return out
}

// collect adds up the terms that have the same product.
func collect(terms []monomial) []monomial {
	var out []monomial
	for _, t := range terms {
		k := slices.IndexFunc(out, func(o monomial) bool { return o.key == t.key })
		if k < 0 {
			out = append(out, t)
			continue
		}
		out[k].coefficient += t.coefficient
	}
	return out
}

func speciesKeys(n int) []string {
	out := make([]string, n)
	for i := range out {
		out[i] = "x" + string(rune('A'+i%26)) + strings.Repeat("'", i/26)
	}
	return out
}
