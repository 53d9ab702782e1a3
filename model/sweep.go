package model

import "slices"

// sweep is a law compiled for its gradient: every distinct sub-tree once, operands
// before operators. A sweep up the list gives the values, a sweep down it the
// derivatives.
type sweep struct {
	ops []sweepOp
}

// sweepOp is one sub-tree: a leaf, or an operator on earlier ones.
type sweepOp struct {
	op    Op
	args  [3]int32
	index int32
	value float64
}

// sweepRoom is how many sub-trees need no allocation.
const sweepRoom = 32

func newSweep(n *Node) *sweep {
	c := newCompiler(n)
	s := &sweep{}
	for _, m := range c.nodes {
		op := sweepOp{op: m.Op, index: int32(m.Index), value: m.Value}
		for i, a := range m.Args {
			op.args[i] = int32(c.ids[a])
		}
		s.ops = append(s.ops, op)
	}
	return s
}

// renumbered gives the sweep over fewer species: reads, in their order.
func (s *sweep) renumbered(reads []int) *sweep {
	out := &sweep{ops: slices.Clone(s.ops)}
	for i := range out.ops {
		if o := &out.ops[i]; o.op == OpSpecies {
			at, _ := slices.BinarySearch(reads, int(o.index))
			o.index = int32(at)
		}
	}
	return out
}

// value gives the law's value at amounts x. Unlike a Program it lets x stay on the
// stack of its caller.
func (s *sweep) value(x []float64) float64 {
	var room [sweepRoom]float64
	values := room[:]
	if n := len(s.ops); n > sweepRoom {
		values = make([]float64, n)
	}
	s.up(x, nil, values)
	return values[len(s.ops)-1]
}

// gradient is Node.Gradient.
func (s *sweep) gradient(x, c, dx, dc []float64) float64 {
	clear(dx)
	clear(dc)
	n := len(s.ops)
	var room [2 * sweepRoom]float64
	values, weights := room[:sweepRoom], room[sweepRoom:]
	if n > sweepRoom {
		values, weights = make([]float64, n), make([]float64, n)
	}
	s.up(x, c, values[:n])
	weights[n-1] = 1
	s.down(values[:n], weights[:n], dx, dc)
	return values[n-1]
}

func (s *sweep) up(x, c, values []float64) {
	for i := range s.ops {
		o := &s.ops[i]
		a := o.args
		switch o.op {
		case OpNumber:
			values[i] = o.value
		case OpSpecies:
			values[i] = x[o.index]
		case OpConstant:
			values[i] = c[o.index]
		case OpAdd:
			values[i] = values[a[0]] + values[a[1]]
		case OpSub:
			values[i] = values[a[0]] - values[a[1]]
		case OpMul:
			values[i] = values[a[0]] * values[a[1]]
		case OpDiv:
			values[i] = values[a[0]] / values[a[1]]
		default:
			values[i] = Apply(o.op, values[a[0]], values[a[1]], values[a[2]])
		}
	}
}

// down adds to each operand the weight of its operator times the derivative. A
// weight of 0 adds nothing, even to a derivative that is not finite.
func (s *sweep) down(values, weights, dx, dc []float64) {
	for i := len(s.ops) - 1; i >= 0; i-- {
		o, w := &s.ops[i], weights[i]
		if w == 0 {
			continue
		}
		a, b := o.args[0], o.args[1]
		switch o.op {
		case OpNumber:
		case OpSpecies:
			if dx != nil {
				dx[o.index] += w
			}
		case OpConstant:
			if dc != nil {
				dc[o.index] += w
			}
		case OpAdd:
			weights[a] += w
			weights[b] += w
		case OpSub:
			weights[a] += w
			weights[b] -= w
		case OpMul:
			weigh(weights, a, w, values[b])
			weigh(weights, b, w, values[a])
		case OpDiv:
			weigh(weights, a, w, 1/values[b])
			weigh(weights, b, w, -values[i]/values[b])
		default:
			s.downCall(o, values, weights, w, values[i])
		}
	}
}

// downCall is a step down through a power or a function.
func (s *sweep) downCall(o *sweepOp, values, weights []float64, w, v float64) {
	a := o.args
	if o.op == OpPow && s.ops[a[1]].op == OpNumber {
		weigh(weights, a[0], w, powerSlope(values[a[0]], values[a[1]]))
		return
	}
	var d [3]float64
	partials(o.op, values[a[0]], values[a[1]], values[a[2]], v, &d)
	for k := range o.op.Arity() {
		weigh(weights, a[k], w, d[k])
	}
}

func weigh(weights []float64, i int32, w, d float64) {
	if d != 0 {
		weights[i] += w * d
	}
}
