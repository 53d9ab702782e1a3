package model

// Bind replaces constants by their values, folds every sub-tree without species
// into one number, and leaves out what cannot change the value: adding or taking
// away 0, multiplying or dividing by 1, a power of 1, a sign twice. A product
// with 0 stays, since the other factor may not be finite. Where a value is not
// finite it is kept as such.
func (n *Node) Bind(c []float64) *Node {
	switch n.Op {
	case OpNumber, OpSpecies:
		return n
	case OpConstant:
		return &Node{Op: OpNumber, Value: c[n.Index], At: n.At}
	}
	out := &Node{Op: n.Op, Args: make([]*Node, len(n.Args)), At: n.At}
	fixed := true
	for i, a := range n.Args {
		out.Args[i] = a.Bind(c)
		fixed = fixed && out.Args[i].Op == OpNumber
	}
	if fixed {
		return &Node{Op: OpNumber, Value: out.Eval(nil, nil), At: n.At}
	}
	return out.simplify()
}

// simplify applies the identities to a node whose arguments have been simplified.
func (n *Node) simplify() *Node {
	a := n.Args[0]
	if n.Op == OpNeg && a.Op == OpNeg {
		return a.Args[0]
	}
	if len(n.Args) != 2 {
		return n
	}
	b := n.Args[1]
	switch {
	case n.Op == OpAdd && a.is(0), n.Op == OpMul && a.is(1):
		return b
	case (n.Op == OpAdd || n.Op == OpSub) && b.is(0):
		return a
	case (n.Op == OpMul || n.Op == OpDiv || n.Op == OpPow) && b.is(1):
		return a
	case n.Op == OpAdd && b.Op == OpNeg:
		return &Node{Op: OpSub, Args: []*Node{a, b.Args[0]}, At: n.At}
	case n.Op == OpSub && b.Op == OpNeg:
		return &Node{Op: OpAdd, Args: []*Node{a, b.Args[0]}, At: n.At}
	}
	return n
}

// is tells whether the node is the number v.
func (n *Node) is(v float64) bool { return n.Op == OpNumber && n.Value == v }
