package model

import (
	"math"
	"slices"
)

// Compile makes a program of a tree whose constants are bound. A sub-tree that
// occurs several times is evaluated once.
func Compile(n *Node) *Program {
	c := newCompiler(n)
	c.emit(n)
	for i := range c.steps { // kept values lie above the stack
		if code := c.steps[i].code; code == keep || code == recall {
			c.steps[i].index += int32(c.most)
		}
	}
	return &Program{steps: c.steps, depth: c.most + c.kept}
}

// renumbered gives the same program over fewer species: reads, in their order.
func (p *Program) renumbered(reads []int) *Program {
	out := &Program{steps: slices.Clone(p.steps), depth: p.depth}
	for i := range out.steps {
		s := &out.steps[i]
		switch s.code {
		case loadX, addX, subX, mulX, divX:
			at, _ := slices.BinarySearch(reads, int(s.index))
			s.index = int32(at)
		}
	}
	return out
}

// compiler gathers the steps of a program.
type compiler struct {
	steps       []step
	depth, most int
	ids         map[*Node]int // equal sub-trees have equal numbers
	uses        map[int]int   // how often each is an operand
	slots       map[int]int   // where the value of one used twice is kept
	kept        int
}

// treeKey tells sub-trees apart: by their head and the numbers of their arguments.
type treeKey struct {
	op    Op
	value uint64
	index int
	args  [3]int
}

func newCompiler(n *Node) *compiler {
	c := &compiler{ids: map[*Node]int{}, uses: map[int]int{}, slots: map[int]int{}}
	c.number(n, map[treeKey]int{})
	return c
}

// number gives every sub-tree its number, equal ones the same, and counts uses.
func (c *compiler) number(n *Node, known map[treeKey]int) int {
	if id, done := c.ids[n]; done {
		return id
	}
	key := treeKey{op: n.Op, value: math.Float64bits(n.Value), index: n.Index}
	for i, a := range n.Args {
		key.args[i] = c.number(a, known) + 1
	}
	id, old := known[key]
	if !old {
		id = len(known)
		known[key] = id
		for _, a := range n.Args {
			c.uses[c.ids[a]]++
		}
	}
	c.ids[n] = id
	return id
}

func (c *compiler) add(s step) { c.steps = append(c.steps, s) }

// load puts a leaf in the register; what was there goes to the stack.
func (c *compiler) load(s step) {
	if len(c.steps) > 0 {
		c.depth++
		c.most = max(c.most, c.depth)
	}
	c.add(s)
}

// emit adds the steps of a tree, or recalls its value if there is one already.
func (c *compiler) emit(n *Node) {
	id := c.ids[n]
	if slot, done := c.slots[id]; done {
		c.load(step{code: recall, index: int32(slot)})
		return
	}
	c.emitFresh(n)
	if c.uses[id] > 1 && !n.isCheap() {
		c.slots[id] = c.kept
		c.add(step{code: keep, index: int32(c.kept)})
		c.kept++
	}
}

// isCheap tells that a tree is as fast to evaluate again as to keep: a leaf, or one
// addition, multiplication or small power of leaves.
func (n *Node) isCheap() bool {
	for _, a := range n.Args {
		if len(a.Args) > 0 {
			return false
		}
	}
	switch n.Op {
	case OpPow:
		return n.Args[1].is(2) || n.Args[1].is(3)
	case OpNumber, OpSpecies, OpConstant, OpAdd, OpSub, OpMul, OpNeg:
		return true
	}
	return false
}

func (c *compiler) emitFresh(n *Node) {
	switch n.Op {
	case OpNumber:
		c.load(step{code: loadN, value: n.Value})
	case OpSpecies:
		c.load(step{code: loadX, index: int32(n.Index)})
	case OpConstant:
		c.load(step{code: loadN, value: math.NaN()}) // not bound: there is no value
	case OpAdd, OpSub, OpMul, OpDiv, OpPow:
		c.emitBinary(n)
	case OpHill, OpHillFall:
		c.emitHill(n)
	case OpNeg:
		c.emit(n.Args[0])
		c.add(step{code: neg})
	default:
		c.emitCall(n)
	}
}

// forms are the steps of one operator by the kind of its operands.
type forms struct{ stack, species, number, reverse stepCode }

func formsOf(op Op) forms {
	switch op {
	case OpAdd:
		return forms{addS, addX, addN, addN}
	case OpSub:
		return forms{subS, subX, subN, subR}
	case OpMul:
		return forms{mulS, mulX, mulN, mulN}
	}
	return forms{divS, divX, divN, divR}
}

func (c *compiler) emitBinary(n *Node) {
	left, right := n.Args[0], n.Args[1]
	if n.Op == OpPow {
		c.emitPower(left, right)
		return
	}
	f := formsOf(n.Op)
	commutes := n.Op == OpAdd || n.Op == OpMul
	switch {
	case right.Op == OpNumber:
		c.emit(left)
		c.add(step{code: f.number, value: right.Value})
	case left.Op == OpNumber:
		c.emit(right)
		c.add(step{code: f.reverse, value: left.Value})
	case right.Op == OpSpecies:
		c.emit(left)
		c.add(step{code: f.species, index: int32(right.Index)})
	case left.Op == OpSpecies && commutes:
		c.emit(right)
		c.add(step{code: f.species, index: int32(left.Index)})
	default:
		c.emit(left)
		c.emit(right)
		c.depth--
		c.add(step{code: f.stack})
	}
}

func (c *compiler) emitPower(base, exponent *Node) {
	c.emit(base)
	if exponent.Op != OpNumber {
		c.emit(exponent)
		c.depth--
		c.add(step{code: powS})
		return
	}
	switch exponent.Value {
	case 2:
		c.add(step{code: square})
	case 3:
		c.add(step{code: cube})
	default:
		c.add(step{code: powN, value: exponent.Value})
	}
}

func (c *compiler) emitHill(n *Node) {
	if n.Args[1].Op != OpNumber || n.Args[2].Op != OpNumber {
		c.emitCall(n)
		return
	}
	code := hillN
	if n.Op == OpHillFall {
		code = fallN
	}
	c.emit(n.Args[0])
	c.add(step{code: code, value: n.Args[1].Value})
	c.add(step{code: argument, value: n.Args[2].Value})
}

func (c *compiler) emitCall(n *Node) {
	for _, a := range n.Args {
		c.emit(a)
	}
	c.depth -= len(n.Args) - 1
	code := [...]stepCode{apply1, apply2, apply3}[len(n.Args)-1]
	c.add(step{code: code, index: int32(n.Op)})
}
