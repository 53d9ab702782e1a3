package deterministic

import (
	"math"
	"slices"
	"strconv"
	"strings"

	"holdfast/deterministic/proof/interval"
	"holdfast/model"
)

// ratio is a quotient of two sums of products, taken apart so that the same
// amount above and below is not counted as two.
type ratio struct{ top, bottom []monomial }

// monomial is a positive coefficient times a product of powers of factors.
type monomial struct {
	coefficient float64
	factors     []factor // by key
	key         string
}

// factor is a sub-tree that is not itself a sum or product, to a power.
type factor struct {
	node     *model.Node
	key      string
	exponent float64
}

// maxTerms bounds the number of terms of an expanded sum.
const maxTerms = 64

// newRatio takes a quotient of two trees apart; nil where that does not help.
func newRatio(top, bottom *model.Node) *ratio {
	a, ok := expand(top)
	b, okB := expand(bottom)
	if !ok || !okB || len(b) == 0 {
		return nil
	}
	return &ratio{a, b}
}

// enclose encloses the ratio over a box. Each term of the top is 1 over the sum
// of the bottom's terms each divided by it, in which powers of the same factor
// cancel; and where every term of the top has its like below, the whole lies
// between the least and the largest quotient of coefficients.
func (q *ratio) enclose(e *encloser, over []span) span {
	for _, list := range [][]monomial{q.top, q.bottom} {
		for _, m := range list {
			for _, f := range m.factors {
				if !(e.enclose(f.node, over).Lo >= 0) {
					return interval.Whole()
				}
			}
		}
	}
	sum := interval.Point(0)
	for _, t := range q.top {
		inverse := interval.Point(0)
		for _, b := range q.bottom {
			inverse = inverse.Add(e.quotient(b, t, over))
		}
		sum = sum.Add(positive(interval.Point(1).Div(inverse)))
	}
	return positive(sum).Meet(q.coefficients())
}

func positive(a span) span { return span{Lo: max(a.Lo, 0), Hi: a.Hi} }

// coefficients bounds the ratio by the quotients of like terms' coefficients.
func (q *ratio) coefficients() span {
	out := interval.Empty()
	matched := 0
	for _, t := range q.top {
		k := slices.IndexFunc(q.bottom, func(b monomial) bool { return b.key == t.key })
		if k < 0 {
			return span{Lo: 0, Hi: math.Inf(1)}
		}
		matched++
		v := t.coefficient / q.bottom[k].coefficient
		out = out.Hull(about(v))
	}
	if matched < len(q.bottom) {
		return out.Hull(interval.Point(0))
	}
	return out
}

// about holds a coefficient that a few roundings have gone into.
func about(c float64) span {
	return span{Lo: c * (1 - 64*epsilon), Hi: c * (1 + 64*epsilon)}
}

// quotient encloses a/b.
func (e *encloser) quotient(a, b monomial, over []span) span {
	c := a.coefficient / b.coefficient
	out := about(c)
	for _, f := range multiply(a.factors, b.factors, -1) {
		out = out.Mul(e.enclose(f.node, over).Pow(interval.Point(f.exponent)))
	}
	return positive(out)
}

// multiply gives the factors of a times b^sign.
func multiply(a, b []factor, sign float64) []factor {
	out := slices.Clone(a)
	for _, f := range b {
		k := slices.IndexFunc(out, func(o factor) bool { return o.key == f.key })
		if k < 0 {
			out = append(out, factor{f.node, f.key, sign * f.exponent})
			continue
		}
		out[k].exponent += sign * f.exponent
	}
	out = slices.DeleteFunc(out, func(f factor) bool { return f.exponent == 0 })
	slices.SortFunc(out, func(p, q factor) int { return strings.Compare(p.key, q.key) })
	return out
}

func newMonomial(coefficient float64, factors []factor) monomial {
	m := monomial{coefficient: coefficient, factors: factors}
	for _, f := range factors {
		m.key += f.key + "^" + strconv.FormatFloat(f.exponent, 'g', -1, 64) + "*"
	}
	return m
}

// expand writes a tree as a sum of monomials; false where it has a negative
// number, or too many terms.
func expand(n *model.Node) ([]monomial, bool) {
	switch n.Op {
	case model.OpNumber:
		switch {
		case !(n.Value >= 0) || math.IsInf(n.Value, 0):
			return nil, false
		case n.Value == 0:
			return nil, true
		}
		return []monomial{newMonomial(n.Value, nil)}, true
	case model.OpAdd:
		a, ok := expand(n.Args[0])
		b, okB := expand(n.Args[1])
		return collect(append(slices.Clone(a), b...)), ok && okB
	case model.OpMul:
		a, ok := expand(n.Args[0])
		b, okB := expand(n.Args[1])
		return product(a, b, 1), ok && okB && len(a)*len(b) <= maxTerms
	case model.OpDiv:
		a, ok := expand(n.Args[0])
		b, okB := expand(n.Args[1])
		if ok && okB && len(b) == 1 {
			return product(a, b, -1), true
		}
	case model.OpPow:
		if m, ok := expandPower(n); ok {
			return m, true
		}
	}
	key := treeKey(n)
	return []monomial{newMonomial(1, []factor{{n, key, 1}})}, true
}

// expandPower expands a fixed power of one term, and of a sum if it is a small
// whole number.
func expandPower(n *model.Node) ([]monomial, bool) {
	p := n.Args[1]
	base, ok := expand(n.Args[0])
	if !ok || p.Op != model.OpNumber {
		return nil, false
	}
	if len(base) == 1 {
		factors := slices.Clone(base[0].factors)
		for i := range factors {
			factors[i].exponent *= p.Value
		}
		return []monomial{newMonomial(math.Pow(base[0].coefficient, p.Value), factors)}, true
	}
	whole := int(p.Value)
	if float64(whole) != p.Value || whole < 2 || whole > 4 || math.Pow(float64(len(base)), p.Value) > maxTerms {
		return nil, false
	}
	out := base
	for range whole - 1 {
		out = product(out, base, 1)
	}
	return out, true
}

func product(a, b []monomial, sign float64) []monomial {
	var out []monomial
	for _, p := range a {
		for _, q := range b {
			c := p.coefficient * math.Pow(q.coefficient, sign)
			out = append(out, newMonomial(c, multiply(p.factors, q.factors, sign)))
		}
	}
	return collect(out)
}

// treeKey tells trees apart by their structure.
func treeKey(n *model.Node) string {
	switch n.Op {
	case model.OpNumber:
		return strconv.FormatFloat(n.Value, 'g', -1, 64)
	case model.OpSpecies:
		return "x" + strconv.Itoa(n.Index)
	}
	var key strings.Builder
	key.WriteString(strconv.Itoa(int(n.Op)) + "(")
	for _, a := range n.Args {
		key.WriteString(treeKey(a) + ",")
	}
	return key.String() + ")"
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
