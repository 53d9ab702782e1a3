package proof

import (
	"holdfast/deterministic/proof/interval"
)

func (s sheet) narrowTwo(n *node, v iv) {
	a, b := &s[n.args[0]], &s[n.args[1]]
	switch n.kind {
	case smaller:
		*a, *b = narrowSmaller(*a, *b, v)
	case larger:
		x, y := narrowSmaller(a.Neg(), b.Neg(), v.Neg())
		*a, *b = x.Neg(), y.Neg()
	case ratio:
		if a.Lo < 0 || b.Lo < 0 {
			return
		}
		v = v.Meet(iv{Lo: 0, Hi: 1})
		if v.IsEmpty() {
			*a = v
			return
		}
		*a, *b = narrowRatio(*a, *b, odds(v))
	}
}

// narrowRatio narrows u and r, not below 0, to u = q r. An unbounded q stands for
// r = 0 as well, where u/(u+r) is 1 whatever u is.
func narrowRatio(u, r, q iv) (iv, iv) {
	product := q.Mul(r)
	if q.Hi > largest && r.Lo == 0 {
		product.Hi = q.Hi
	}
	return u.Meet(product), interval.Solve(u, q, r)
}

// narrowSmaller narrows a and b so that min(a, b) can be in v.
func narrowSmaller(a, b, v iv) (iv, iv) {
	x, y := a, b
	x.Lo, y.Lo = max(x.Lo, v.Lo), max(y.Lo, v.Lo)
	if b.Lo > v.Hi {
		x.Hi = min(x.Hi, v.Hi)
	}
	if a.Lo > v.Hi {
		y.Hi = min(y.Hi, v.Hi)
	}
	return x, y
}
