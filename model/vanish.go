package model

// vanishes tells whether the tree, its constants bound, is 0 at every amount of
// the other species once those that empty tells are 0. It is decided from the
// structure: a product with a factor that vanishes, a sum of terms that all do, a
// positive power or a Hill function of what vanishes, and so on. A law that
// vanishes for another reason (x − x) is not recognised.
func (n *Node) vanishes(empty func(species int) bool) bool {
	switch n.Op {
	case OpNumber:
		return n.Value == 0
	case OpSpecies:
		return empty(n.Index)
	case OpMul:
		return n.Args[0].vanishes(empty) || n.Args[1].vanishes(empty)
	case OpAdd, OpSub, OpMin, OpMax:
		return n.Args[0].vanishes(empty) && n.Args[1].vanishes(empty)
	case OpNeg, OpSqrt, OpAbs:
		return n.Args[0].vanishes(empty)
	case OpDiv:
		return n.Args[0].vanishes(empty) && !n.Args[1].vanishes(empty)
	case OpPow:
		return n.Args[0].vanishes(empty) && n.Args[1].isPositive()
	case OpHill:
		return n.Args[0].vanishes(empty) && n.Args[1].isPositive() && n.Args[2].isPositive()
	case OpHillFall:
		return n.Args[1].vanishes(empty) && !n.Args[0].vanishes(empty) && n.Args[2].isPositive()
	}
	return false
}

// isPositive tells whether the node is a number above 0.
func (n *Node) isPositive() bool { return n.Op == OpNumber && n.Value > 0 }
