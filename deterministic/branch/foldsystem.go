package branch

import (
	"math"

	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/mat"
)

// foldSystem is the equations of a fold: rest, and a singular Jacobian. In place
// of the null vector's n equations (Moore and Spence, SIAM J. Numer. Anal. 17
// (1980) 567) it has the one number g of the bordered system
//
//	[A b; cᵀ 0] [v; g] = [0; 1],
//
// which is 0 just where A is singular, v then being the null vector (Griewank and
// Reddien, SIAM J. Numer. Anal. 21 (1984) 176); the fold is regular for the one
// system just where it is for the other. A is the Jacobian in the ruler's units.
// With one knob the system is square, with two it is the curve of folds.
type foldSystem struct {
	f           *field
	weight      []float64 // by species
	scale       []float64 // by equation
	left, right []float64 // the borders b and c

	jac, forth, back, matrix []float64
}

// newFoldSystem borders the Jacobian at u with its own singular vectors.
func newFoldSystem(f *field, u, weight []float64) (*foldSystem, bool) {
	n, cols := f.n, f.columns()
	s := &foldSystem{
		f: f, scale: make([]float64, n), jac: make([]float64, n*cols),
		forth: make([]float64, n*cols), back: make([]float64, n*cols), matrix: make([]float64, (n+1)*(n+1)),
	}
	return s, s.renew(u, weight)
}

// renew sets units and borders anew near u.
func (s *foldSystem) renew(u, weight []float64) bool {
	n := s.f.n
	s.weight = append([]float64(nil), weight[:n]...)
	s.f.evaluate(u, make([]float64, n), s.jac)
	cols := s.f.columns()
	a := make([]float64, n*n)
	for i := range n {
		row := append([]float64(nil), s.jac[i*cols:(i+1)*cols]...)
		floats.Mul(row, weight)
		size := largest(row)
		if size == 0 || math.IsInf(size, 1) {
			return false
		}
		s.scale[i] = 1 / size
		floats.ScaleTo(a[i*n:(i+1)*n], s.scale[i], row[:n])
	}
	left, right, ok := leastSingular(a, n)
	if ok && s.left != nil { // keep the sides, so that signs along a curve have a meaning
		align(left, s.left)
		align(right, s.right)
	}
	s.left, s.right = left, right
	return ok
}

func align(v, with []float64) {
	if floats.Dot(v, with) < 0 {
		floats.Scale(-1, v)
	}
}

// leastSingular gives the left and right vectors of the smallest singular value.
func leastSingular(a []float64, n int) (left, right []float64, ok bool) {
	var svd mat.SVD
	if !svd.Factorize(mat.NewDense(n, n, a), mat.SVDFull) {
		return nil, nil, false
	}
	var u, v mat.Dense
	svd.UTo(&u)
	svd.VTo(&v)
	return mat.Col(nil, n-1, &u), mat.Col(nil, n-1, &v), true
}

func (s *foldSystem) columns() int { return s.f.columns() }

// bordered gives v, w and g at the Jacobian in s.jac.
func (s *foldSystem) bordered() (right, left []float64, g float64, ok bool) {
	n, cols := s.f.n, s.f.columns()
	for i := range n {
		for j := range n {
			s.matrix[i*(n+1)+j] = s.jac[i*cols+j] * s.weight[j] * s.scale[i]
		}
		s.matrix[i*(n+1)+n] = s.left[i]
	}
	copy(s.matrix[n*(n+1):], s.right)
	s.matrix[(n+1)*(n+1)-1] = 0
	q, ok := factor(s.matrix, n+1)
	if !ok {
		return nil, nil, 0, false
	}
	right, left = make([]float64, n+1), make([]float64, n+1)
	right[n], left[n] = 1, 1
	ok = q.solve(right) && q.solveTransposed(left)
	return right[:n], left[:n], right[n], ok
}

// evaluate writes the n equations of rest and g, and their derivatives: dg is
// −wᵀ dA v.
func (s *foldSystem) evaluate(u, out, jac []float64) {
	n, cols := s.f.n, s.f.columns()
	s.f.evaluate(u, out[:n], s.jac)
	right, left, g, ok := s.bordered()
	if !ok {
		g = math.NaN()
	}
	out[n] = g
	if jac == nil {
		return
	}
	copy(jac, s.jac)
	row := jac[n*cols : (n+1)*cols]
	clear(row)
	if !ok {
		return
	}
	change := s.along(u, right)
	for i := range n {
		for j := range row {
			row[j] -= left[i] * s.scale[i] * change[i*cols+j]
		}
	}
}

// along is the derivative of the Jacobian in the direction v of the amounts, in
// the ruler's units, by central differences of the exact Jacobian. It only steers
// Newton's steps: what they converge to does not depend on it.
func (s *foldSystem) along(u, v []float64) []float64 {
	d := make([]float64, len(u))
	for j := range v {
		d[j] = s.weight[j] * v[j]
	}
	return s.f.jacobianAlong(u, d, s.forth, s.back)
}

// differenceStep is the relative step of central differences: the error of the
// formula, its square, meets rounding's.
const differenceStep = 1e-5

// jacobianAlong is the derivative of the n×columns Jacobian at u along d; forth
// and back are scratch, the first the result. Amounts stay positive.
func (f *field) jacobianAlong(u, d, forth, back []float64) []float64 {
	out := make([]float64, f.n)
	low, high := -differenceStep, differenceStep
	for j := range f.n {
		if u[j] >= 0 && u[j]+low*d[j] < 0 {
			low = 0
		}
		if u[j] >= 0 && u[j]+high*d[j] < 0 {
			high = 0
		}
	}
	if low == high {
		low, high = -differenceStep, differenceStep
	}
	v := make([]float64, len(u))
	floats.AddScaledTo(v, u, high, d)
	f.evaluate(v, out, forth)
	floats.AddScaledTo(v, u, low, d)
	f.evaluate(v, out, back)
	floats.Sub(forth, back)
	floats.Scale(1/(high-low), forth)
	return forth
}
