package model

import (
	"math"
	"slices"
	"strconv"
	"strings"
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

// Call returns a node that applies op to its arguments.
func Call(op Op, args ...*Node) *Node { return &Node{Op: op, Args: args} }

// Eval gives the value of the tree at amounts x and constants c. It never
// panics on arithmetic: division by zero and the like give Inf or NaN.
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

// Apply gives the value of one operator or function; arguments that op does not
// take are ignored.
func Apply(op Op, a, b, c float64) float64 {
	switch op {
	case OpAdd:
		return a + b
	case OpSub:
		return a - b
	case OpMul:
		return a * b
	case OpDiv:
		return a / b
	case OpPow:
		return power(a, b)
	case OpNeg:
		return -a
	case OpExp:
		return math.Exp(a)
	case OpLog:
		return math.Log(a)
	case OpSqrt:
		return math.Sqrt(a)
	case OpMin:
		return math.Min(a, b)
	case OpMax:
		return math.Max(a, b)
	case OpAbs:
		return math.Abs(a)
	case OpHill:
		return hill(a, b, c)
	case OpHillFall:
		return hill(b, a, c)
	}
	return math.NaN()
}

// power is math.Pow with the small whole exponents multiplied out, which is
// both faster and, for 2 and 3, exact to the last rounding.
func power(a, b float64) float64 {
	switch b {
	case 1:
		return a
	case 2:
		return a * a
	case 3:
		return a * a * a
	case 4:
		a *= a
		return a * a
	}
	return math.Pow(a, b)
}

// hill is xⁿ/(kⁿ+xⁿ), written so that neither power can overflow.
func hill(x, k, n float64) float64 {
	switch {
	case x == 0 && k == 0:
		return math.NaN()
	case x <= k:
		q := power(x/k, n)
		return q / (1 + q)
	default:
		return 1 / (1 + power(k/x, n))
	}
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

// Bind replaces constants by their values and folds every sub-tree without
// species into one number. Where a value is not finite it is kept as such.
func (n *Node) Bind(c []float64) *Node {
	switch n.Op {
	case OpNumber, OpSpecies:
		return n
	case OpConstant:
		return Number(c[n.Index])
	}
	out := &Node{Op: n.Op, Args: make([]*Node, len(n.Args))}
	fixed := true
	for i, a := range n.Args {
		out.Args[i] = a.Bind(c)
		fixed = fixed && out.Args[i].Op == OpNumber
	}
	if fixed {
		return Number(out.Eval(nil, nil))
	}
	return out
}

// Gradient gives the tree's value at (x, c) and adds nothing but overwrites dx
// with its exact partial derivatives in x, and dc, if it is not nil, with those
// in the constants. The derivatives are by forward automatic differentiation.
// At the kinks of min, max and abs the one-sided derivative of the first branch
// is given.
func (n *Node) Gradient(x, c, dx, dc []float64) float64 {
	clear(dx)
	clear(dc)
	return n.adjoint(x, c, dx, dc, 1)
}

// adjoint evaluates the tree and adds weight times each partial derivative to
// dx and dc: reverse accumulation without a tape, since trees are small.
func (n *Node) adjoint(x, c, dx, dc []float64, weight float64) float64 {
	switch n.Op {
	case OpNumber:
		return n.Value
	case OpSpecies:
		if dx != nil {
			dx[n.Index] += weight
		}
		return x[n.Index]
	case OpConstant:
		if dc != nil {
			dc[n.Index] += weight
		}
		return c[n.Index]
	}
	var a, d [3]float64
	for i, arg := range n.Args {
		a[i] = arg.Eval(x, c)
	}
	v := Partials(n.Op, a[0], a[1], a[2], &d)
	for i, arg := range n.Args {
		if w := weight * d[i]; w != 0 {
			arg.adjoint(x, c, dx, dc, w)
		}
	}
	return v
}

// Partials gives the value of one operator or function and, in d, its partial
// derivatives with respect to each argument.
func Partials(op Op, a, b, c float64, d *[3]float64) float64 {
	v := Apply(op, a, b, c)
	switch op {
	case OpAdd:
		d[0], d[1] = 1, 1
	case OpSub:
		d[0], d[1] = 1, -1
	case OpMul:
		d[0], d[1] = b, a
	case OpDiv:
		d[0], d[1] = 1/b, -a/(b*b)
	case OpPow:
		d[0], d[1] = powerPartials(a, b, v)
	case OpNeg:
		d[0] = -1
	case OpExp:
		d[0] = v
	case OpLog:
		d[0] = 1 / a
	case OpSqrt:
		d[0] = 0.5 / v
	case OpMin, OpMax:
		first := a <= b
		if op == OpMax {
			first = a >= b
		}
		if first {
			d[0] = 1
		} else {
			d[1] = 1
		}
	case OpAbs:
		d[0] = 1
		if a < 0 {
			d[0] = -1
		}
	case OpHill:
		hillPartials(a, b, c, 1, d)
	case OpHillFall:
		hillPartials(a, b, c, -1, d)
	}
	return v
}

func powerPartials(a, b, v float64) (da, db float64) {
	switch {
	case b == 0:
		da = 0
	case a == 0 && b == 1:
		da = 1
	default:
		da = b * power(a, b-1)
	}
	if a > 0 {
		db = v * math.Log(a)
	}
	return da, db
}

// hillPartials: with h = xⁿ/(kⁿ+xⁿ), ∂h/∂x = n h(1−h)/x, ∂h/∂k = −n h(1−h)/k,
// ∂h/∂n = h(1−h) ln(x/k); the falling twin is 1−h.
func hillPartials(x, k, n, sign float64, d *[3]float64) {
	h := hill(x, k, n)
	w := sign * h * (1 - h)
	if x == 0 { // the limit of n h/x
		d[0], d[1], d[2] = 0, 0, 0
		if n == 1 {
			d[0] = sign / k
		}
		return
	}
	d[0], d[1], d[2] = n*w/x, -n*w/k, w*math.Log(x/k)
}

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

// opName is how op is written in a formula.
func opName(op Op) string { return opNames[op] }

var opNames = map[Op]string{
	OpAdd: "+", OpSub: "-", OpMul: "*", OpDiv: "/", OpPow: "^",
	OpExp: "exp", OpLog: "log", OpSqrt: "sqrt", OpMin: "min", OpMax: "max", OpAbs: "abs",
	OpHill: "hill", OpHillFall: "hill_fall",
}

// Format writes the tree in the formula syntax of design files, with the given
// names of species and constants.
func (n *Node) Format(species, constants []string) string {
	var b strings.Builder
	n.format(&b, species, constants)
	return b.String()
}

func (n *Node) format(b *strings.Builder, species, constants []string) {
	switch n.Op {
	case OpNumber:
		b.WriteString(strconv.FormatFloat(n.Value, 'g', -1, 64))
	case OpSpecies:
		b.WriteString(species[n.Index])
	case OpConstant:
		b.WriteString(constants[n.Index])
	case OpNeg:
		b.WriteString("(-")
		n.Args[0].format(b, species, constants)
		b.WriteByte(')')
	case OpAdd, OpSub, OpMul, OpDiv, OpPow:
		b.WriteByte('(')
		n.Args[0].format(b, species, constants)
		b.WriteString(" " + opNames[n.Op] + " ")
		n.Args[1].format(b, species, constants)
		b.WriteByte(')')
	default:
		b.WriteString(opNames[n.Op] + "(")
		for i, a := range n.Args {
			if i > 0 {
				b.WriteString(", ")
			}
			a.format(b, species, constants)
		}
		b.WriteByte(')')
	}
}
