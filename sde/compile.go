package sde

import (
	"math"

	"holdfast/model"
)

// A compiler makes a program. Equal operations on equal registers are done once,
// and those on constants beforehand.
type compiler struct {
	program
	net     *model.Network
	done    map[instruction]int
	numbers map[uint64]int // registers of constants, by their bits
	values  map[int]float64
	trees   map[*model.Node]int
	inputAt map[int]int // registers of constants that vary
}

// newCompiler gives a compiler whose first registers are the counts of the
// network's species.
func newCompiler(net *model.Network) *compiler {
	return &compiler{
		program: program{registers: len(net.Species)}, net: net,
		done: map[instruction]int{}, numbers: map[uint64]int{}, values: map[int]float64{}, trees: map[*model.Node]int{}, inputAt: map[int]int{},
	}
}

func (c *compiler) fresh() int {
	c.registers++
	return c.registers - 1
}

// constant gives the register of a number.
func (c *compiler) constant(v float64) int {
	r, ok := c.numbers[math.Float64bits(v)]
	if !ok {
		r = c.fresh()
		c.numbers[math.Float64bits(v)], c.values[r] = r, v
		c.constants = append(c.constants, constant{r, v})
	}
	return r
}

// emit gives the register of an operation.
func (c *compiler) emit(i instruction) int {
	if r, ok := c.done[i]; ok {
		return r
	}
	r := c.fresh()
	c.done[i] = r
	i.to = r
	c.code = append(c.code, i)
	return r
}

// is tells whether a register holds the constant v.
func (c *compiler) is(register int, v float64) bool {
	w, ok := c.values[register]
	return ok && w == v
}

// folded gives the register of an operation on constants; ok is false where one
// is none.
func (c *compiler) folded(op model.Op, a, b int) (register int, ok bool) {
	v, okA := c.values[a]
	w, okB := c.values[b]
	if !okA || !okB {
		return 0, false
	}
	return c.constant(model.Apply(op, v, w, 0)), true
}

func (c *compiler) add(a, b int) int {
	if r, ok := c.folded(model.OpAdd, a, b); ok {
		return r
	}
	switch {
	case c.is(a, 0):
		return b
	case c.is(b, 0):
		return a
	}
	return c.emit(instruction{op: opAdd, a: min(a, b), b: max(a, b)})
}

func (c *compiler) sub(a, b int) int {
	if r, ok := c.folded(model.OpSub, a, b); ok {
		return r
	}
	if c.is(b, 0) {
		return a
	}
	return c.emit(instruction{op: opSub, a: a, b: b})
}

func (c *compiler) mul(a, b int) int {
	if r, ok := c.folded(model.OpMul, a, b); ok {
		return r
	}
	switch {
	case c.is(a, 1):
		return b
	case c.is(b, 1):
		return a
	}
	return c.emit(instruction{op: opMul, a: min(a, b), b: max(a, b)})
}

// div divides; by a constant, it multiplies with the inverse if that is a normal number.
func (c *compiler) div(a, b int) int {
	if r, ok := c.folded(model.OpDiv, a, b); ok {
		return r
	}
	if v, ok := c.values[b]; ok && math.Abs(v) > 0x1p-1000 && math.Abs(v) < 0x1p1000 {
		return c.mul(a, c.constant(1/v))
	}
	return c.emit(instruction{op: opDiv, a: a, b: b})
}

func (c *compiler) sqrt(a int) int { return c.emit(instruction{op: opSqrt, a: a}) }

// mostFactors is the largest whole exponent that is multiplied out.
const mostFactors = 32

// power raises to a fixed exponent, by squaring where it is whole.
func (c *compiler) power(a int, exponent float64) int {
	if v, ok := c.values[a]; ok {
		return c.constant(model.Apply(model.OpPow, v, exponent, 0))
	}
	switch {
	case exponent == 0.5:
		return c.sqrt(a)
	case exponent != math.Trunc(exponent) || exponent < 1 || exponent > mostFactors:
		return c.emit(instruction{op: opPower, a: a, value: exponent})
	}
	out, square := -1, a
	for e := int(exponent); ; square = c.mul(square, square) {
		if e&1 == 1 {
			if out < 0 {
				out = square
			} else {
				out = c.mul(out, square)
			}
		}
		if e >>= 1; e == 0 {
			return out
		}
	}
}
