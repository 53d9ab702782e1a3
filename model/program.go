package model

import "math"

// A Program is a rate law compiled to a flat list of steps: the fast way to
// evaluate a law of several species at many amounts. It gives the same bits as
// the tree it was made from. A Program is immutable and safe for concurrent use.
//
// It is an accumulator machine: the value at hand sits in a register, values put
// by on a small stack. An operator whose right operand is a species or a number
// takes it from its own step, so that a sum or product of n leaves has n steps.
type Program struct {
	steps []step
	depth int // values on the stack at most
}

// step is one instruction: an operator, where its right operand comes from, and
// that operand.
type step struct {
	code  stepCode
	index int32
	value float64
}

// stepCode is the operator of a step together with the kind of its operand.
type stepCode uint8

// The steps. S takes the left operand from the stack and the right one from the
// register; X has a species and N a number as its right operand; R has a number
// as its left operand.
const (
	loadX stepCode = iota // put the register by, load a species
	loadN                 // put the register by, load a number
	addS
	addX
	addN
	subS
	subX
	subN
	subR
	mulS
	mulX
	mulN
	divS
	divX
	divN
	divR
	square
	cube
	powS
	powN
	neg
	hillN // hill with half and n numbers; value is half, the next step's value is n
	fallN
	apply1 // any function of one argument; index is its Op
	apply2
	apply3
	argument // the operand that belongs to the step before
)

// stackDepth is the stack that needs no allocation.
const stackDepth = 8

// Compile makes a program of a tree whose constants are bound.
func Compile(n *Node) *Program {
	c := compiler{}
	c.emit(n)
	return &Program{steps: c.steps, depth: c.most}
}

// Eval gives the law's value at amounts x, one per species.
func (p *Program) Eval(x []float64) float64 {
	if p.depth > stackDepth {
		return p.run(x, make([]float64, p.depth))
	}
	var stack [stackDepth]float64
	return p.run(x, stack[:])
}

func (p *Program) run(x, stack []float64) float64 {
	v, top := 0.0, 0
	for i := 0; i < len(p.steps); i++ {
		s := &p.steps[i]
		switch s.code {
		case loadX:
			if i > 0 {
				stack[top] = v
				top++
			}
			v = x[s.index]
		case loadN:
			if i > 0 {
				stack[top] = v
				top++
			}
			v = s.value
		case addS:
			top--
			v = stack[top] + v
		case addX:
			v += x[s.index]
		case addN:
			v += s.value
		case subS:
			top--
			v = stack[top] - v
		case subX:
			v -= x[s.index]
		case subN:
			v -= s.value
		case subR:
			v = s.value - v
		case mulS:
			top--
			v = stack[top] * v
		case mulX:
			v *= x[s.index]
		case mulN:
			v *= s.value
		case divS:
			top--
			v = stack[top] / v
		case divX:
			v /= x[s.index]
		case divN:
			v /= s.value
		case divR:
			v = s.value / v
		case square:
			v *= v
		case cube:
			v = v * v * v
		case powS:
			top--
			v = power(stack[top], v)
		case powN:
			v = power(v, s.value)
		case neg:
			v = -v
		case hillN:
			i++
			v = hill(v, s.value, p.steps[i].value)
		case fallN:
			i++
			v = hill(s.value, v, p.steps[i].value)
		case apply1:
			v = Apply(Op(s.index), v, 0, 0)
		case apply2:
			top--
			v = Apply(Op(s.index), stack[top], v, 0)
		case apply3:
			top -= 2
			v = Apply(Op(s.index), stack[top], stack[top+1], v)
		}
	}
	return v
}

// compiler gathers the steps of a program.
type compiler struct {
	steps       []step
	depth, most int
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

func (c *compiler) emit(n *Node) {
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
