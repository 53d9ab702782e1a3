package branch

import (
	"math"

	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/mat"
)

// square is a factored square matrix whose rows have been scaled to the same size.
type square struct {
	n     int
	scale []float64 // by row
	lu    mat.LU
}

// factor scales the rows of a, n×n row-major, in place, and factors it; false
// where a row is empty or not finite.
func factor(a []float64, n int) (*square, bool) {
	s := &square{n: n, scale: make([]float64, n)}
	for i := range n {
		row := a[i*n : (i+1)*n]
		size := largest(row)
		if size == 0 || math.IsInf(size, 1) {
			return nil, false
		}
		s.scale[i] = 1 / size
		floats.Scale(s.scale[i], row)
	}
	s.lu.Factorize(mat.NewDense(n, n, a))
	return s, true
}

// solve overwrites b with the solution of A z = b; false where A is singular.
func (s *square) solve(b []float64) bool {
	floats.Mul(b, s.scale)
	return s.back(b, false)
}

// solveTransposed overwrites b with the solution of Aᵀ z = b, for the unscaled A.
func (s *square) solveTransposed(b []float64) bool {
	ok := s.back(b, true)
	floats.Mul(b, s.scale)
	return ok
}

func (s *square) back(b []float64, transposed bool) bool {
	v := mat.NewVecDense(s.n, b)
	err := s.lu.SolveVecTo(v, transposed, v)
	if c, ill := err.(mat.Condition); err != nil && (!ill || math.IsInf(float64(c), 1)) {
		return false
	}
	return !math.IsInf(largest(b), 1)
}

// sign is the sign of the determinant, −1, 0 or 1.
func (s *square) sign() int {
	_, sign := s.lu.LogDet()
	return int(sign)
}

// largest is the largest magnitude in v; Inf where one is not finite.
func largest(v []float64) float64 {
	m := 0.0
	for _, e := range v {
		if !(math.Abs(e) <= math.MaxFloat64) {
			return math.Inf(1)
		}
		m = max(m, math.Abs(e))
	}
	return m
}

// unitLength scales v to length 1.
func unitLength(v []float64) { floats.Scale(1/floats.Norm(v, 2), v) }
