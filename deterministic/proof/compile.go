package proof

import (
	"holdfast/deterministic/proof/interval"
	"holdfast/model"
)

// tree adds a rate law. Constants are points; a sub-tree without species becomes
// the interval of its value, which is a point where that is exact.
func (b *builder) tree(n *model.Node) scaled {
	switch n.Op {
	case model.OpNumber:
		return fixed(interval.Point(n.Value))
	case model.OpConstant:
		return fixed(interval.Point(b.constants[n.Index]))
	case model.OpSpecies:
		return b.species(n.Index)
	}
	args := make([]scaled, len(n.Args))
	for i, a := range n.Args {
		args[i] = b.tree(a)
	}
	minus := interval.Point(-1)
	switch n.Op {
	case model.OpAdd:
		return b.join(args...)
	case model.OpSub:
		return b.join(args[0], b.times(args[1], minus))
	case model.OpNeg:
		return b.times(args[0], minus)
	case model.OpMul:
		return b.product(args[0], args[1])
	case model.OpDiv:
		return b.quotient(args[0], args[1])
	case model.OpPow:
		return b.power(args[0], args[1])
	case model.OpHill:
		return b.hill(rise, args)
	case model.OpHillFall:
		return b.hill(fall, args)
	}
	return b.function(functions()[n.Op], args)
}

func functions() map[model.Op]kind {
	return map[model.Op]kind{
		model.OpExp: exponential, model.OpLog: logarithm, model.OpSqrt: squareRoot,
		model.OpMin: smaller, model.OpMax: larger, model.OpAbs: absolute,
	}
}

// function adds a function without a form of its own.
func (b *builder) function(k kind, args []scaled) scaled {
	n := node{kind: k}
	values, known := make([]iv, len(args)), true
	for i, a := range args {
		values[i] = a.c
		known = known && a.isConstant() && a.c.Bounded()
	}
	if known {
		return fixed(apply(&n, values))
	}
	for _, a := range args {
		n.args = append(n.args, b.solid(a))
	}
	return scaled{interval.Point(1), b.intern(n)}
}

// power is base^exponent.
func (b *builder) power(base, exponent scaled) scaled {
	if !exponent.isConstant() || base.isConstant() {
		return b.function(power, []scaled{base, exponent})
	}
	p := exponent.c
	if n, ok := wholeNumber(p); ok {
		c := base.c.PowInt(n)
		if n == 0 {
			b.dropped = append(b.dropped, base.node)
			return fixed(interval.Point(1))
		}
		if !c.Bounded() {
			return scaled{interval.Point(1), b.whole(b.solid(base), n)}
		}
		m := b.monomial(scaled{interval.Point(1), base.node})
		for i := range m.exps {
			m.exps[i] *= n
		}
		m.c = c
		return b.build(m)
	}
	c := base.c.Pow(p)
	if !(base.c.Lo > 0) || !c.Bounded() {
		base, c = scaled{interval.Point(1), b.solid(base)}, interval.Point(1)
	}
	return scaled{c, b.intern(node{kind: realPower, args: []int{base.node}, c: p})}
}

// wholeNumber gives the whole number that p is, if it is one of moderate size.
func wholeNumber(p iv) (int, bool) {
	n := int(max(min(p.Lo, 1024), -1024))
	return n, p.IsPoint() && float64(n) == p.Lo
}

// hill is xⁿ/(halfⁿ+xⁿ), or its falling twin.
func (b *builder) hill(k kind, args []scaled) scaled {
	x, half, n := args[0], args[1], args[2]
	if n.isConstant() && n.c.Hi < 0 {
		n.c = n.c.Neg()
		k = rise + fall - k
	}
	if x.isConstant() {
		return b.hillConstant(k, args)
	}
	_, isWhole := wholeNumber(n.c)
	natural := b.nodes[x.node].kind == variable || !isWhole // x ≥ 0, or undefined below
	if natural && half.isConstant() && half.c.Lo > 0 && n.isConstant() && n.c.Lo > 0 && x.c.Lo > 0 {
		scale := divide(x.c, half.c)
		if scale.Bounded() && scale.Lo > 0 {
			return scaled{interval.Point(1), b.intern(node{kind: k, args: []int{x.node}, c: n.c, scale: scale})}
		}
	}
	return b.hillGeneral(k, x, half, n)
}

func (b *builder) hillConstant(k kind, args []scaled) scaled {
	x, half, n := args[0], args[1], args[2]
	if half.isConstant() && n.isConstant() {
		z := divide(x.c, half.c)
		if z.Lo >= 0 && z.Bounded() && n.c.Lo > 0 {
			return fixed(apply(&node{kind: k, c: n.c, scale: interval.Point(1)}, []iv{z}))
		}
	}
	return b.hillGeneral(k, x, half, n)
}

// hillGeneral writes the function out, with powers of x and half.
func (b *builder) hillGeneral(k kind, x, half, n scaled) scaled {
	u, r := b.power(x, n), b.power(half, n)
	if k == fall {
		u, r = r, u
	}
	return scaled{interval.Point(1), b.intern(node{kind: ratio, args: []int{b.solid(u), b.solid(r)}})}
}
