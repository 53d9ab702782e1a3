package model

import "math"

// compiler turns a tree into evaluators.
type compiler struct {
	ids   map[*Node]int // equal sub-trees have equal numbers
	known map[treeKey]int
	nodes []*Node // one of each number
	// first and second are the numbers of the shared sub-trees, −1 if not chosen.
	first, second int
}

// treeKey tells sub-trees apart: by their head and the numbers of their arguments.
type treeKey struct {
	op    Op
	value uint64
	index int
	args  [3]int
}

func newCompiler(n *Node) *compiler {
	c := &compiler{ids: map[*Node]int{}, known: map[treeKey]int{}, first: -1, second: -1}
	c.number(n)
	c.nodes = c.byID()
	return c
}

// number gives every sub-tree its number, equal ones the same.
func (c *compiler) number(n *Node) int {
	if id, done := c.ids[n]; done {
		return id
	}
	key := treeKey{op: n.Op, value: math.Float64bits(n.Value), index: n.Index}
	for i, a := range n.Args {
		key.args[i] = c.number(a) + 1
	}
	id, old := c.known[key]
	if !old {
		id = len(c.known)
		c.known[key] = id
	}
	c.ids[n] = id
	return id
}

// byID lists one sub-tree of each number.
func (c *compiler) byID() []*Node {
	out := make([]*Node, len(c.known))
	for m, id := range c.ids {
		if old := out[id]; old == nil || m.At < old.At {
			out[id] = m
		}
	}
	return out
}

// cost is about the nanoseconds that an operator takes.
func cost(op Op, args []*Node) int {
	switch op {
	case OpNumber, OpSpecies, OpConstant:
		return 0
	case OpPow:
		if args[1].is(2) || args[1].is(3) || args[1].is(4) {
			return 2
		}
		return 40
	case OpHill, OpHillFall, OpExp, OpLog:
		return 20
	case OpDiv, OpSqrt:
		return 5
	}
	return 2
}

// worthSharing is the least saving, in the units of cost, that a shared sub-tree
// is chosen for.
const worthSharing = 8

// best gives the number of the sub-tree whose sharing saves most, −1 if none
// saves enough. What is inside the sub-tree chosen first does not count.
func (c *compiler) best(root *Node) int {
	uses, costs := make([]int, len(c.nodes)), make([]int, len(c.nodes))
	c.count(root, uses, costs)
	best, most := -1, worthSharing-1
	for id := range uses {
		if saved := (uses[id] - 1) * costs[id]; saved > most {
			best, most = id, saved
		}
	}
	return best
}

// count counts how often each sub-tree is evaluated under n, and what it costs.
func (c *compiler) count(n *Node, uses, costs []int) {
	id := c.ids[n]
	if id == c.first {
		return
	}
	uses[id]++
	total := cost(n.Op, n.Args)
	for _, a := range n.Args {
		c.count(a, uses, costs)
		total += costs[c.ids[a]]
	}
	costs[id] = total
}

// emit gives the evaluator of a tree, which may be a shared one.
func (c *compiler) emit(n *Node) evaluator {
	switch c.ids[n] {
	case c.first:
		return func(_ []float64, a, _ float64) float64 { return a }
	case c.second:
		return func(_ []float64, _, b float64) float64 { return b }
	}
	return c.fresh(n)
}

// fresh gives the evaluator of a tree by its head. (A shared tree is fresh once,
// where it is evaluated.)
func (c *compiler) fresh(n *Node) evaluator {
	switch n.Op {
	case OpNumber:
		return number64(n.Value)
	case OpSpecies:
		i := n.Index
		return func(x []float64, _, _ float64) float64 { return x[i] }
	case OpAdd:
		return sumOf(c.operand(n.Args[0]), c.operand(n.Args[1]))
	case OpSub:
		return differenceOf(c.operand(n.Args[0]), c.operand(n.Args[1]))
	case OpMul:
		return productOf(c.operand(n.Args[0]), c.operand(n.Args[1]))
	case OpDiv:
		return quotientOf(c.operand(n.Args[0]), c.operand(n.Args[1]))
	case OpPow:
		return c.powerOf(n)
	case OpHill, OpHillFall:
		return c.hillOf(n)
	case OpNeg:
		f := c.emit(n.Args[0])
		return func(x []float64, a, b float64) float64 { return -f(x, a, b) }
	case OpConstant:
		return number64(math.NaN()) // not bound: there is no value
	}
	return c.applyOf(n)
}

func number64(v float64) evaluator { return func([]float64, float64, float64) float64 { return v } }

// operand tells what kind of operand a tree is.
func (c *compiler) operand(n *Node) operand {
	o := operand{kind: general}
	switch {
	case n.Op == OpNumber:
		o = operand{kind: literal, value: n.Value}
	case n.Op == OpSpecies:
		o = operand{kind: amount, index: n.Index}
	}
	o.f = c.emit(n)
	return o
}

func (c *compiler) powerOf(n *Node) evaluator {
	o := c.operand(n.Args[0])
	f, i := o.f, o.index
	switch exponent := n.Args[1]; {
	case exponent.is(2) && o.kind == amount:
		return func(x []float64, _, _ float64) float64 { v := x[i]; return v * v }
	case exponent.is(2):
		return func(x []float64, a, b float64) float64 { v := f(x, a, b); return v * v }
	case exponent.is(3):
		return func(x []float64, a, b float64) float64 { v := f(x, a, b); return v * v * v }
	case exponent.Op == OpNumber:
		e := exponent.Value
		return func(x []float64, a, b float64) float64 { return power(f(x, a, b), e) }
	default:
		g := c.emit(exponent)
		return func(x []float64, a, b float64) float64 { return power(f(x, a, b), g(x, a, b)) }
	}
}

func (c *compiler) hillOf(n *Node) evaluator {
	if n.Args[1].Op != OpNumber || n.Args[2].Op != OpNumber {
		return c.applyOf(n)
	}
	f, half, steep := c.emit(n.Args[0]), n.Args[1].Value, n.Args[2].Value
	if n.Op == OpHillFall {
		return func(x []float64, a, b float64) float64 { return hill(half, f(x, a, b), steep) }
	}
	return func(x []float64, a, b float64) float64 { return hill(f(x, a, b), half, steep) }
}

// applyOf is any operator or function, by Apply.
func (c *compiler) applyOf(n *Node) evaluator {
	op := n.Op
	var f [3]evaluator
	for i, arg := range n.Args {
		f[i] = c.emit(arg)
	}
	switch len(n.Args) {
	case 1:
		return func(x []float64, a, b float64) float64 { return Apply(op, f[0](x, a, b), 0, 0) }
	case 2:
		return func(x []float64, a, b float64) float64 { return Apply(op, f[0](x, a, b), f[1](x, a, b), 0) }
	}
	return func(x []float64, a, b float64) float64 {
		return Apply(op, f[0](x, a, b), f[1](x, a, b), f[2](x, a, b))
	}
}
