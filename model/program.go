package model

// A Program is a rate law compiled to a flat list of steps: the fast way to
// evaluate a law of several species at many amounts. It gives the same bits as
// the tree it was made from. A Program is immutable and safe for concurrent use.
//
// It is an accumulator machine: the value at hand sits in a register, values put
// by on a small stack. An operator whose right operand is a species or a number
// takes it from its own step, so that a sum or product of n leaves has n steps.
type Program struct {
	steps []step
	depth int // values on the stack, and noted for later, at most
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
	keep     // note the register's value for later
	recall   // put the register by, load a value noted before
)

// stackDepth is the stack that needs no allocation.
const stackDepth = 8

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
		case recall:
			stack[top] = v
			top++
			v = stack[s.index]
		case keep:
			stack[s.index] = v
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
