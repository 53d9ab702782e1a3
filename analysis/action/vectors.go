package action

import (
	"math"
	"slices"
)

func dot(a, b []float64) float64 {
	sum := 0.0
	for i, v := range a {
		sum += v * b[i]
	}
	return sum
}

// addScaled adds f·b to a.
func addScaled(a []float64, f float64, b []float64) {
	for i, v := range b {
		a[i] += f * v
	}
}

func norm(a []float64) float64 { return math.Sqrt(dot(a, a)) }

// rankTolerance is the length, relative to the column's own, below which what is
// left of a column after projection counts as nothing.
const rankTolerance = 1e-9

// orthonormal gives an orthonormal basis of the space that columns span, longest
// remainder first, by Gram–Schmidt with the projection made twice (Giraud,
// Langou, Rozložník, Comput. Math. Appl. 50 (2005) 1069).
func orthonormal(columns [][]float64) [][]float64 {
	var basis [][]float64
	rest := make([][]float64, 0, len(columns))
	for _, c := range columns {
		if length := norm(c); length > 0 {
			c = slices.Clone(c)
			for i := range c {
				c[i] /= length
			}
			rest = append(rest, c)
		}
	}
	for {
		longest, length := -1, rankTolerance
		for i, c := range rest {
			if l := norm(c); l > length*(1+1e-6) {
				longest, length = i, l
			}
		}
		if longest < 0 {
			return basis
		}
		b := slices.Clone(rest[longest])
		project(b, basis)
		length = norm(b)
		for i := range b {
			b[i] /= length
		}
		basis = append(basis, b)
		for _, c := range rest {
			project(c, basis[len(basis)-1:])
		}
	}
}

// project takes from v what lies along the basis.
func project(v []float64, basis [][]float64) {
	for _, b := range basis {
		addScaled(v, -dot(v, b), b)
	}
}

// factorise replaces the symmetric matrix a, m×m in row-major order, by its
// Cholesky factor; false where it is not positive definite.
func factorise(a []float64, m int) bool {
	for j := range m {
		for i := j; i < m; i++ {
			sum := a[i*m+j]
			for k := range j {
				sum -= a[i*m+k] * a[j*m+k]
			}
			if i > j {
				a[i*m+j] = sum / a[j*m+j]
				continue
			}
			if !(sum > 0) || math.IsInf(sum, 1) {
				return false
			}
			a[j*m+j] = math.Sqrt(sum)
		}
	}
	return true
}

// solveFactor solves with a factor of factorise, in place.
func solveFactor(a []float64, m int, b []float64) {
	for i := range m {
		for k := range i {
			b[i] -= a[i*m+k] * b[k]
		}
		b[i] /= a[i*m+i]
	}
	for i := m - 1; i >= 0; i-- {
		for k := i + 1; k < m; k++ {
			b[i] -= a[k*m+i] * b[k]
		}
		b[i] /= a[i*m+i]
	}
}
