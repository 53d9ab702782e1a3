package action

import (
	"context"
	"errors"
	"math"

	"gonum.org/v1/gonum/mat"
)

const (
	// newtonSteps is the most steps of one search for the least action.
	newtonSteps = 300
	// settled ends the search: the fall of the action that the next step promises,
	// relative to the action.
	settled = 1e-13
	// enough is the share of the promised fall that a step must bring (Armijo, Pacific
	// J. Math. 16 (1966) 1).
	enough = 1e-4
	// stiffest is the weight of the metric beyond which steps are too short to matter.
	stiffest = 1e12
	// lumpy is the factor between the spacing of nodes and its due at which they are
	// spread anew.
	lumpy = 1.5
)

// errStuck tells that the search for the least action did not come to its end.
var errStuck = errors.New("the search for the least action did not come to its end")

// errBarred tells that a curve leads where no path can go.
var errBarred = errors.New("no reactions go along the path")

// A sheet is a set of equations for the moves of the nodes across the path.
type sheet struct {
	across   [][]float64 // for each node inside, m×(m−1): directions across the path
	gradient []float64
	// hessian of the action, and its part in the tangents alone, which is never
	// negative: the metric that steps are measured in where the hessian is not convex.
	hessian, metric *mat.SymBandDense
	value           float64
}

// relax moves the nodes across the path until the action is least. Each step is
// Newton's, with a multiple of the metric added where that is needed to go down
// (Levenberg, Q. Appl. Math. 2 (1944) 164); a large multiple is the preconditioned
// descent of Heymann and Vanden-Eijnden.
func (c *curve) relax(ctx context.Context) (float64, error) {
	value, ok := c.action()
	if !ok {
		return value, errBarred
	}
	if c.sys.m == 1 {
		return value, nil
	}
	frame := c.frame()
	weight := 0.0
	for range newtonSteps {
		if err := ctx.Err(); err != nil {
			return value, err
		}
		s, ok := c.assemble(frame)
		if !ok {
			return value, errBarred
		}
		value = s.value
		fell, promised := false, 0.0
		for !fell && weight < stiffest {
			var move []float64
			move, promised, ok = s.step(weight)
			if ok && promised <= settled*math.Abs(value) {
				return value, nil
			}
			if fell = ok && c.try(s, move, promised); !fell {
				weight = max(10*weight, 1e-3)
			}
		}
		if !fell {
			return value, stuck(promised, value)
		}
		if weight /= 10; weight < 1e-4 {
			weight = 0
		}
	}
	return value, errStuck
}

// stuck forgives a search that rounding alone keeps from its end.
func stuck(promised, value float64) error {
	if promised <= 1e-9*math.Abs(value) {
		return nil
	}
	return errStuck
}

// step solves for the moves of the nodes; promised is half the fall of the action to
// first order, which is all of it for Newton's step.
func (s *sheet) step(weight float64) (move []float64, promised float64, ok bool) {
	n, k := s.hessian.SymBand()
	sum := mat.NewSymBandDense(n, k, nil)
	h, m, out := s.hessian.RawSymBand().Data, s.metric.RawSymBand().Data, sum.RawSymBand().Data
	for i := range out {
		out[i] = h[i] + weight*m[i]
	}
	var factor mat.BandCholesky
	if !factor.Factorize(sum) {
		return nil, 0, false
	}
	var x mat.VecDense
	if err := factor.SolveVecTo(&x, mat.NewVecDense(n, s.gradient)); err != nil {
		var condition mat.Condition
		if !errors.As(err, &condition) {
			return nil, 0, false
		}
	}
	move = x.RawVector().Data
	return move, dot(move, s.gradient) / 2, true
}

// try makes a move and keeps it if the action falls as promised.
func (c *curve) try(s *sheet, move []float64, promised float64) bool {
	old := make([][]float64, len(c.node))
	copy(old, c.node)
	d := c.sys.m - 1
	for k, q := range s.across {
		z := append([]float64{}, c.node[k+1]...)
		for i := range z {
			z[i] -= dot(q[i*d:(i+1)*d], move[k*d:(k+1)*d])
		}
		c.node[k+1] = z
	}
	value, ok := c.action()
	if ok && value <= s.value-enough*promised {
		return true
	}
	c.node = old
	return false
}

// frame gives directions across the path at every node inside.
func (c *curve) frame() [][]float64 {
	m := c.sys.m
	out := make([][]float64, len(c.node)-2)
	for k := range out {
		tangent := make([]float64, m)
		addScaled(tangent, 1, c.node[k+2])
		addScaled(tangent, -1, c.node[k])
		out[k] = complement(tangent)
	}
	return out
}

// complement gives an orthonormal basis, m×(m−1), of what is perpendicular to t: the
// columns of a Householder reflection but the first.
func complement(t []float64) []float64 {
	m := len(t)
	u := append([]float64{}, t...)
	length := norm(u)
	u[0] += math.Copysign(length, u[0])
	square := dot(u, u)
	out := make([]float64, m*(m-1))
	for i := range m {
		for j := 1; j < m; j++ {
			if i == j {
				out[i*(m-1)+j-1] = 1
			}
			if square > 0 {
				out[i*(m-1)+j-1] -= 2 * u[i] * u[j] / square
			}
		}
	}
	return out
}
