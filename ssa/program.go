package ssa

import "holdfast/model"

// A program is a law of several species, compiled: sub-trees of one species are
// tables over its count, the rest is a list of operations on registers. The
// operations are those of the tree in the tree's order, so the value has the
// same bits as Node.Eval.
type program struct {
	loads     []load
	steps     []step
	registers []float64 // literals are in place
	result    int
}

// A load puts a table's value at a species' count into a register.
type load struct {
	species, register int
	table             table
}

// A step puts the value of an operation on registers into a register.
type step struct {
	op          model.Op
	a, b, c, to int
}

// compile prepares the tree of a law without constants.
func compile(net *model.Network, law *model.Node) *program {
	p := &program{}
	c := compiler{program: p, net: net, amounts: make([]float64, len(net.Species)), done: map[*model.Node]int{}}
	p.result = c.register(law)
	return p
}

type compiler struct {
	*program
	net     *model.Network
	amounts []float64
	done    map[*model.Node]int // register of each sub-tree met
}

// register gives the register that will hold the value of a tree.
func (c *compiler) register(tree *model.Node) int {
	if r, ok := c.done[tree]; ok {
		return r
	}
	r := c.emit(tree)
	c.done[tree] = r
	return r
}

func (c *compiler) emit(tree *model.Node) int {
	if tree.Op == model.OpNumber {
		return c.fresh(tree.Value)
	}
	if reads := tree.Reads(); len(reads) == 1 {
		r := c.fresh(0)
		c.loads = append(c.loads, load{reads[0], r, table{f: c.function(tree, reads[0])}})
		return r
	}
	var args [3]int
	for i, a := range tree.Args {
		args[i] = c.register(a)
	}
	r := c.fresh(0)
	c.steps = append(c.steps, step{tree.Op, args[0], args[1], args[2], r})
	return r
}

func (c *compiler) fresh(v float64) int {
	c.registers = append(c.registers, v)
	return len(c.registers) - 1
}

// function gives a tree that reads one species as a function of its count.
func (c *compiler) function(tree *model.Node, species int) func(int64) float64 {
	unit := c.net.Unit(species)
	return func(n int64) float64 {
		c.amounts[species] = float64(n) / unit
		return tree.Eval(c.amounts, nil)
	}
}

// at gives the law's value at counts.
func (p *program) at(counts []int64) float64 {
	for i := range p.loads {
		l := &p.loads[i]
		p.registers[l.register] = l.table.at(counts[l.species])
	}
	p.run(p.steps)
	return p.registers[p.result]
}

// run takes steps one after the other.
func (p *program) run(steps []step) {
	r := p.registers
	for i := range steps {
		s := &steps[i]
		switch s.op {
		case model.OpAdd:
			r[s.to] = r[s.a] + r[s.b]
		case model.OpSub:
			r[s.to] = r[s.a] - r[s.b]
		case model.OpMul:
			r[s.to] = r[s.a] * r[s.b]
		case model.OpDiv:
			r[s.to] = r[s.a] / r[s.b]
		default:
			r[s.to] = model.Apply(s.op, r[s.a], r[s.b], r[s.c])
		}
	}
}
