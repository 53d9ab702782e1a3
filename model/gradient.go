package model

import "math"

// Gradient gives the tree's value at amounts x and constants c, and overwrites
// dx, one per species, with its partial derivatives in the amounts and dc, one
// per constant, with those in the constants; either may be nil. The derivatives
// are exact to rounding, by reverse accumulation (Griewank and Walther,
// Evaluating Derivatives, SIAM 2008, chapter 3).
//
// At the kinks of min, max and abs it gives the derivative of the first argument
// (of abs: +1). Where a derivative does not exist it is Inf or NaN.
func (n *Node) Gradient(x, c, dx, dc []float64) float64 {
	clear(dx)
	clear(dc)
	var small [64]float64
	value, tape := n.record(x, c, small[:0])
	n.replay(tape, dx, dc, 1)
	return value
}

// record evaluates the tree and appends to the tape, children first, the partial
// derivatives of every operator in its arguments.
func (n *Node) record(x, c, tape []float64) (float64, []float64) {
	switch n.Op {
	case OpNumber:
		return n.Value, tape
	case OpSpecies:
		return x[n.Index], tape
	case OpConstant:
		return c[n.Index], tape
	}
	var a, d [3]float64
	for i, arg := range n.Args {
		a[i], tape = arg.record(x, c, tape)
	}
	v := Partials(n.Op, a[0], a[1], a[2], &d)
	return v, append(tape, d[:len(n.Args)]...)
}

// replay walks the tape backwards and adds weight times each leaf's derivative to
// dx and dc. It gives what is left of the tape. A weight of 0 adds nothing, even
// to a derivative that is not finite.
func (n *Node) replay(tape, dx, dc []float64, weight float64) []float64 {
	switch n.Op {
	case OpNumber:
		return tape
	case OpSpecies:
		if dx != nil && weight != 0 {
			dx[n.Index] += weight
		}
		return tape
	case OpConstant:
		if dc != nil && weight != 0 {
			dc[n.Index] += weight
		}
		return tape
	}
	k := len(n.Args)
	d := tape[len(tape)-k:]
	rest := tape[:len(tape)-k]
	for i := k - 1; i >= 0; i-- {
		w := 0.0
		if weight != 0 && d[i] != 0 {
			w = weight * d[i]
		}
		rest = n.Args[i].replay(rest, dx, dc, w)
	}
	return rest
}

// Partials gives the value of one operator or function and, in d, its partial
// derivatives with respect to each argument.
func Partials(op Op, a, b, c float64, d *[3]float64) float64 {
	v := Apply(op, a, b, c)
	partials(op, a, b, c, v, d)
	return v
}

// partials sets the partial derivatives of op, whose value is v.
func partials(op Op, a, b, c, v float64, d *[3]float64) {
	switch op {
	case OpAdd:
		d[0], d[1] = 1, 1
	case OpSub:
		d[0], d[1] = 1, -1
	case OpMul:
		d[0], d[1] = b, a
	case OpDiv:
		d[0], d[1] = 1/b, -v/b
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
	case OpMin, OpMax, OpAbs:
		kinkPartials(op, a, b, d)
	case OpHill:
		hillPartials(a, b, c, 1, d)
	case OpHillFall:
		hillPartials(a, b, c, -1, d)
	}
}

func kinkPartials(op Op, a, b float64, d *[3]float64) {
	switch {
	case op == OpAbs && a < 0:
		d[0] = -1
	case op == OpMin && a > b, op == OpMax && a < b:
		d[1] = 1
	default:
		d[0] = 1
	}
}

// powerPartials are those of v = aᵇ: b aᵇ⁻¹ and v ln a. A power of a negative
// number has no derivative in the exponent.
func powerPartials(a, b, v float64) (da, db float64) {
	da = powerSlope(a, b)
	switch {
	case a > 0:
		db = v * math.Log(a)
	case a == 0 && b > 0: // the limit of aᵇ ln a
	default:
		db = math.NaN()
	}
	return da, db
}

// powerSlope is ∂aᵇ/∂a.
func powerSlope(a, b float64) float64 {
	switch b {
	case 0:
		return 0
	case 2:
		return 2 * a
	}
	return b * power(a, b-1)
}

// hillPartials: with h = xⁿ/(kⁿ+xⁿ) and g = 1−h, ∂h/∂x = n h g/x,
// ∂h/∂k = −n h g/k, ∂h/∂n = h g ln(x/k); the falling twin is g. At x = 0, where
// h ~ (x/k)ⁿ, and at k = 0, the limits are taken.
func hillPartials(x, k, n, sign float64, d *[3]float64) {
	if x == 0 || k == 0 {
		d[0], d[1], d[2] = hillEdge(x, k, n, sign)
		return
	}
	w := sign * hill(x, k, n) * hill(k, x, n)
	d[0], d[1], d[2] = n*w/x, -n*w/k, w*math.Log(x/k)
}

// hillEdge gives the limits at x = 0 (k > 0) or k = 0 (x > 0).
func hillEdge(x, k, n, sign float64) (dx, dk, dn float64) {
	switch {
	case x == 0 && k == 0:
		return math.NaN(), math.NaN(), math.NaN()
	case n == 0: // h is 1/2 off the edge
		return 0, 0, math.NaN()
	case x == 0:
		return edgeSlope(k, n, sign), 0, 0
	}
	return 0, -edgeSlope(x, n, sign), 0
}

// edgeSlope is the limit of n zⁿ⁻¹/otherⁿ as z falls to 0, with the sign of n for
// negative n, where h falls from 1.
func edgeSlope(other, n, sign float64) float64 {
	switch {
	case math.Abs(n) > 1:
		return 0
	case math.Abs(n) == 1:
		return sign * n / other
	}
	return sign * math.Copysign(math.Inf(1), n)
}
