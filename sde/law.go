package sde

import "holdfast/model"

// tree gives the register of a law without named constants.
func (c *compiler) tree(n *model.Node) int {
	if r, ok := c.trees[n]; ok {
		return r
	}
	r := c.node(n)
	c.trees[n] = r
	return r
}

func (c *compiler) node(n *model.Node) int {
	switch n.Op {
	case model.OpNumber:
		return c.constant(n.Value)
	case model.OpConstant:
		return c.named(n.Index)
	case model.OpSpecies:
		return c.div(n.Index, c.constant(c.net.Unit(n.Index)))
	}
	var a [3]int
	for i, arg := range n.Args {
		a[i] = c.tree(arg)
	}
	switch n.Op {
	case model.OpAdd:
		return c.add(a[0], a[1])
	case model.OpSub:
		return c.sub(a[0], a[1])
	case model.OpMul:
		return c.mul(a[0], a[1])
	case model.OpDiv:
		return c.div(a[0], a[1])
	case model.OpNeg:
		return c.sub(c.constant(0), a[0])
	case model.OpSqrt:
		return c.sqrt(a[0])
	case model.OpPow:
		if e, ok := c.values[a[1]]; ok {
			return c.power(a[0], e)
		}
	case model.OpHill, model.OpHillFall:
		if e, ok := c.values[a[2]]; ok {
			return c.hill(n.Op, a, e)
		}
	}
	return c.emit(instruction{op: opCall, call: n.Op, a: a[0], b: a[1], c: a[2]})
}

// hill is 1/(1+(half/x)ⁿ), or its falling twin 1/(1+(x/half)ⁿ): neither can be
// infinite over infinite.
func (c *compiler) hill(op model.Op, a [3]int, n float64) int {
	above, below := a[1], a[0]
	if op == model.OpHillFall {
		above, below = below, above
	}
	one := c.constant(1)
	return c.div(one, c.add(one, c.power(c.div(above, below), n)))
}

// reaction gives the register of a reaction's propensity.
func (c *compiler) reaction(r int) int {
	re := &c.net.Reactions[r]
	if variesIn(c.net, re.Free) {
		return c.varied(r)
	}
	if !re.MassAction {
		a := c.mul(c.constant(re.Scale), c.tree(re.Law))
		if nonNegative(re.Law) {
			return a
		}
		return c.emit(instruction{op: opGuard, a: a})
	}
	return c.falling(re, c.constant(c.net.MassActionFactor(r)))
}

// falling gives the register of a ∏ n!/(n−ν)! over a reaction's reactants.
func (c *compiler) falling(re *model.Reaction, a int) int {
	for _, t := range re.Reactants {
		for j := range t.Count {
			a = c.mul(a, c.less(t.Species, j))
		}
	}
	return a
}

// less gives the register of max(n−j, 0) for the count n of a species.
func (c *compiler) less(species, j int) int {
	if j == 0 {
		return species
	}
	return c.emit(instruction{op: opCut, a: c.sub(species, c.constant(float64(j)))})
}

// nonNegative tells whether a law is plainly not below 0 at amounts not below 0,
// or no number.
func nonNegative(n *model.Node) bool {
	switch n.Op {
	case model.OpNumber:
		return n.Value >= 0
	case model.OpSpecies, model.OpConstant, model.OpSqrt, model.OpAbs, model.OpExp:
		return true
	case model.OpAdd, model.OpMul, model.OpDiv, model.OpMin:
		return nonNegative(n.Args[0]) && nonNegative(n.Args[1])
	case model.OpMax:
		return nonNegative(n.Args[0]) || nonNegative(n.Args[1])
	case model.OpPow:
		return nonNegative(n.Args[0])
	case model.OpHill, model.OpHillFall:
		return nonNegative(n.Args[0]) && nonNegative(n.Args[1])
	}
	return false
}

// sum gives the register of Σ weightᵢ·registerᵢ.
func (c *compiler) sum(registers []int, weights []float64) int {
	out := c.constant(0)
	for i, r := range registers {
		switch w := weights[i]; {
		case w == 0:
		case w == -1:
			out = c.sub(out, r)
		default:
			out = c.add(out, c.mul(c.constant(w), r))
		}
	}
	return out
}
