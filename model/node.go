package model

import (
	"slices"
)

// Op is the kind of a Node.
type Op uint8

// The kinds of nodes that a rate law is built of. Functions and operators take
// the number of arguments that Arity gives.
const (
	OpNumber   Op = iota // a literal; Value holds it
	OpSpecies            // a species' amount (or count, if fixed); Index is the species
	OpConstant           // a constant; Index is the constant
	OpAdd
	OpSub
	OpMul
	OpDiv
	OpPow
	OpNeg
	OpExp
	OpLog
	OpSqrt
	OpMin
	OpMax
	OpAbs
	OpHill     // hill(x, half, n) = xⁿ/(halfⁿ+xⁿ)
	OpHillFall // hill_fall(x, half, n) = halfⁿ/(halfⁿ+xⁿ)
)

// Arity gives the number of arguments that op takes; 0 for leaves.
func (op Op) Arity() int {
	switch op {
	case OpNumber, OpSpecies, OpConstant:
		return 0
	case OpNeg, OpExp, OpLog, OpSqrt, OpAbs:
		return 1
	case OpHill, OpHillFall:
		return 3
	}
	return 2
}

// A Node is one node of a rate law's tree. Trees are immutable once built and
// may share sub-trees.
type Node struct {
	Op    Op
	Value float64
	Index int
	Args  []*Node
	// At is the byte offset in the design file (after a byte-order mark, if it
	// has one) of the token that the node was read from; 0 for a tree built in code.
	At int
}

// Number returns a literal node.
func Number(v float64) *Node { return &Node{Op: OpNumber, Value: v} }

// SpeciesRef returns a node that reads species i.
func SpeciesRef(i int) *Node { return &Node{Op: OpSpecies, Index: i} }

// ConstantRef returns a node that reads constant i.
func ConstantRef(i int) *Node { return &Node{Op: OpConstant, Index: i} }

// Call returns a node that applies op to its arguments, as many as op.Arity.
func Call(op Op, args ...*Node) *Node { return &Node{Op: op, Args: args} }

// Eval gives the value of the tree at amounts x and constants c, one each by
// index. It never panics on arithmetic: division by zero and the like give Inf
// or NaN.
func (n *Node) Eval(x, c []float64) float64 {
	switch n.Op {
	case OpNumber:
		return n.Value
	case OpSpecies:
		return x[n.Index]
	case OpConstant:
		return c[n.Index]
	}
	var a [3]float64
	for i, arg := range n.Args {
		a[i] = arg.Eval(x, c)
	}
	return Apply(n.Op, a[0], a[1], a[2])
}

// Reads lists, ascending and without repeats, the species that the tree reads.
func (n *Node) Reads() []int { return n.indices(OpSpecies) }

// Constants lists, ascending and without repeats, the constants that the tree reads.
func (n *Node) Constants() []int { return n.indices(OpConstant) }

func (n *Node) indices(op Op) []int {
	var out []int
	n.Walk(func(m *Node) {
		if m.Op == op && !slices.Contains(out, m.Index) {
			out = append(out, m.Index)
		}
	})
	slices.Sort(out)
	return out
}

// Walk calls f on every node of the tree, parents first.
func (n *Node) Walk(f func(*Node)) {
	f(n)
	for _, a := range n.Args {
		a.Walk(f)
	}
}
