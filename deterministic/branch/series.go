package branch

import (
	"math"

	"holdfast/model"
)

// series is a Taylor polynomial of order 3 in one variable t: the coefficients of
// 1, t, t², t³. The rules for operators and functions are those of Griewank and
// Walther, Evaluating Derivatives (SIAM 2008), table 13.2.
type series [4]float64

func constantSeries(v float64) series { return series{v} }

func (a series) add(b series, sign float64) series {
	for k := range a {
		a[k] += sign * b[k]
	}
	return a
}

func (a series) mul(b series) (out series) {
	for k := range out {
		for j := range k + 1 {
			out[k] += a[j] * b[k-j]
		}
	}
	return out
}

func (a series) div(b series) (out series) {
	for k := range out {
		sum := a[k]
		for j := range k {
			sum -= out[j] * b[k-j]
		}
		out[k] = sum / b[0]
	}
	return out
}

func (a series) exp() (out series) {
	out[0] = math.Exp(a[0])
	for k := 1; k < len(out); k++ {
		for j := 1; j <= k; j++ {
			out[k] += float64(j) * a[j] * out[k-j] / float64(k)
		}
	}
	return out
}

func (a series) log() (out series) {
	out[0] = math.Log(a[0])
	for k := 1; k < len(out); k++ {
		sum := a[k]
		for j := 1; j < k; j++ {
			sum -= float64(j) * out[j] * a[k-j] / float64(k)
		}
		out[k] = sum / a[0]
	}
	return out
}

// flat tells that the series is a constant.
func (a series) flat() bool { return a[1] == 0 && a[2] == 0 && a[3] == 0 }

func (a series) pow(b series) series {
	switch {
	case !b.flat():
		return a.log().mul(b).exp()
	case b[0] == 0:
		return constantSeries(1)
	case a[0] == 0:
		return a.powAtZero(b[0])
	}
	return a.power(b[0])
}

func (a series) power(b float64) (out series) {
	out[0] = math.Pow(a[0], b)
	for k := 1; k < len(out); k++ {
		for j := 1; j <= k; j++ {
			out[k] += (b*float64(j) - float64(k-j)) * a[j] * out[k-j] / (float64(k) * a[0])
		}
	}
	return out
}

// powAtZero is aᵇ where a is 0 at t = 0: a product for whole b, otherwise 0 up to
// the derivatives that exist, and NaN beyond.
func (a series) powAtZero(b float64) series {
	if b < 0 {
		return constantSeries(math.NaN())
	}
	if b == math.Trunc(b) {
		out := constantSeries(1)
		for range int(min(b, 4)) { // beyond the order all is 0
			out = out.mul(a)
		}
		return out
	}
	out := series{}
	for k := range out {
		if float64(k) > b && !a.flat() {
			out[k] = math.NaN()
		}
	}
	return out
}

// hillSeries is xⁿ/(kⁿ+xⁿ), or its falling twin, formed from powers not above 1.
func hillSeries(x, k, n series, falling bool) series {
	if (x[0] <= k[0]) != (n[0] >= 0) {
		x, k, falling = k, x, !falling
	}
	q := x.div(k).pow(n)
	rest := q
	rest[0]++
	if falling {
		return constantSeries(1).div(rest)
	}
	return q.div(rest)
}

// lawSeries expands a law at amounts x + t·d, constants c held.
func lawSeries(n *model.Node, x, d, c []float64) series {
	switch n.Op {
	case model.OpNumber:
		return constantSeries(n.Value)
	case model.OpSpecies:
		return series{x[n.Index], d[n.Index]}
	case model.OpConstant:
		return constantSeries(c[n.Index])
	}
	var a [3]series
	for i, arg := range n.Args {
		a[i] = lawSeries(arg, x, d, c)
	}
	return applySeries(n.Op, a[0], a[1], a[2])
}

func applySeries(op model.Op, a, b, c series) series {
	switch op {
	case model.OpAdd:
		return a.add(b, 1)
	case model.OpSub:
		return a.add(b, -1)
	case model.OpMul:
		return a.mul(b)
	case model.OpDiv:
		return a.div(b)
	case model.OpPow:
		return a.pow(b)
	case model.OpNeg:
		return series{}.add(a, -1)
	case model.OpExp:
		return a.exp()
	case model.OpLog:
		return a.log()
	case model.OpSqrt:
		return a.pow(constantSeries(0.5))
	case model.OpHill:
		return hillSeries(a, b, c, false)
	case model.OpHillFall:
		return hillSeries(a, b, c, true)
	}
	return kinkSeries(op, a, b)
}

// kinkSeries follows the branch of min, max or abs that holds at t = 0; at the
// kink itself that of the first argument.
func kinkSeries(op model.Op, a, b series) series {
	switch {
	case op == model.OpAbs && a[0] < 0:
		return series{}.add(a, -1)
	case op == model.OpMin && a[0] > b[0], op == model.OpMax && a[0] < b[0]:
		return b
	}
	return a
}

// expand gives the Taylor coefficients of the n equations at amounts x + t·d, the
// knobs held: out[i] belongs to equation i. Totals are linear and left at 0.
func (f *field) expand(u, d []float64) []series {
	f.turn(u[f.n:])
	out := make([]series, f.n)
	for i := range f.channels {
		c := &f.channels[i]
		if len(c.terms) == 0 {
			continue
		}
		v := lawSeries(c.law, u[:f.n], d, f.constants)
		for _, t := range c.terms {
			out[t.species] = out[t.species].add(v, f.change(c, t))
		}
	}
	for _, k := range f.dependent {
		out[k] = series{}
	}
	return out
}
