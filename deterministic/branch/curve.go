package branch

import (
	"math"

	"gonum.org/v1/gonum/floats"
)

// curve is one more unknown than equations: what continuation follows.
type curve interface {
	// columns is the number of unknowns, one more than that of equations.
	columns() int
	// evaluate writes the equations at u and, unless jac is nil, their derivatives,
	// equations × columns.
	evaluate(u, out, jac []float64)
}

// place is a point of a curve. The tangent is in units of weight, of length 1.
type place struct {
	u, weight, tangent []float64
	sign               int // of det [J; tangent]
}

// tangentIn gives the tangent in units of other weights.
func (p *place) tangentIn(weight []float64) []float64 {
	out := make([]float64, len(weight))
	for j := range out {
		out[j] = p.tangent[j] * p.weight[j] / weight[j]
	}
	return out
}

// step gives the point at distance h along the tangent.
func (p *place) step(h float64) []float64 {
	out := make([]float64, len(p.u))
	for j := range out {
		out[j] = p.u[j] + h*p.weight[j]*p.tangent[j]
	}
	return out
}

// distance is the distance of u and v in units of weight.
func distance(u, v, weight []float64) float64 {
	sum := 0.0
	for j := range u {
		d := (u[j] - v[j]) / weight[j]
		sum += d * d
	}
	return math.Sqrt(sum)
}

// Newton's limits: a correction of fineStep ends it; one that no longer shrinks,
// below coarseStep, is rounding.
const (
	newtonSteps = 12
	fineStep    = 1e-13
	coarseStep  = 1e-9
)

// corrector solves the equations of a curve together with one linear condition.
type corrector struct {
	c      curve
	out    []float64
	jac    []float64
	matrix []float64
	step   []float64
}

func newCorrector(c curve) *corrector {
	n := c.columns()
	return &corrector{
		c: c, out: make([]float64, n-1), jac: make([]float64, (n-1)*n),
		matrix: make([]float64, n*n), step: make([]float64, n),
	}
}

// border factors the derivatives at u, columns in units of weight, with one row
// below them.
func (k *corrector) border(u, weight, row []float64) (*square, bool) {
	n := len(u)
	k.c.evaluate(u, k.out, k.jac)
	for i := range n - 1 {
		for j := range n {
			k.matrix[i*n+j] = k.jac[i*n+j] * weight[j]
		}
	}
	copy(k.matrix[n*(n-1):], row)
	return factor(k.matrix, n)
}

// correct moves u, in place, by Newton steps to the curve within the plane
// row·(u−u₀)/weight = 0 through the u it is given. It gives the number of steps;
// ok is false where they do not converge.
func (k *corrector) correct(u, weight, row []float64) (steps int, ok bool) {
	origin := append([]float64(nil), u...)
	last := math.Inf(1)
	for steps = range newtonSteps {
		s, ok := k.border(u, weight, row)
		if !ok {
			return steps, false
		}
		copy(k.step, k.out)
		k.step[len(u)-1] = 0
		for j := range u {
			k.step[len(u)-1] += row[j] * (u[j] - origin[j]) / weight[j]
		}
		if !s.solve(k.step) {
			return steps, false
		}
		size := largest(k.step)
		if size >= last && last <= coarseStep {
			return steps, true
		}
		if size > 4*last {
			return steps, false
		}
		for j := range u {
			u[j] -= k.step[j] * weight[j]
		}
		if size <= fineStep {
			return steps, true
		}
		last = size
	}
	return steps, last <= coarseStep
}

// hold corrects u with unknown j held at value.
func (k *corrector) hold(u, weight []float64, j int, value float64) bool {
	row := make([]float64, len(u))
	row[j] = 1
	u[j] = value
	if _, ok := k.correct(u, weight, row); !ok {
		return false
	}
	u[j] = value
	return true
}

// tangent gives the unit tangent at u, in units of weight, on the side of the
// direction given, and the sign of det [J; tangent]. That of [J; direction] is the
// same, since direction = (tangent·direction) tangent + a combination of rows of J.
func (k *corrector) tangent(u, weight, direction []float64) (t []float64, sign int, ok bool) {
	s, ok := k.border(u, weight, direction)
	if !ok {
		return nil, 0, false
	}
	t = make([]float64, len(u))
	t[len(u)-1] = 1
	if !s.solve(t) {
		return nil, 0, false
	}
	unitLength(t)
	return t, s.sign(), true
}

// at gives the place at u, its tangent on the side of the direction given.
func (k *corrector) at(u, weight, direction []float64) (*place, bool) {
	t, sign, ok := k.tangent(u, weight, direction)
	if !ok {
		return nil, false
	}
	return &place{u: append([]float64(nil), u...), weight: append([]float64(nil), weight...), tangent: t, sign: sign}, true
}

// cosine is that of the angle between the tangents of p and q, in q's weights.
func cosine(p, q *place) float64 {
	t := p.tangentIn(q.weight)
	return floats.Dot(t, q.tangent) / floats.Norm(t, 2)
}
