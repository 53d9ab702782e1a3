package deterministic

import (
	"math"
	"slices"
)

// echelonBasis gives a basis of the whole-number combinations of the vectors, in
// echelon form, by the division algorithm column by column.
func echelonBasis(vectors [][]int64, n int) [][]int64 {
	rows := make([][]int64, len(vectors))
	for k, v := range vectors {
		rows[k] = slices.Clone(v)
	}
	top := 0
	for c := 0; c < n && top < len(rows); c++ {
		if settleColumn(rows[top:], c) {
			top++
		}
	}
	return rows[:top]
}

// settleColumn leaves a non-zero entry of column c in the first row only; false
// where the column is 0.
func settleColumn(rows [][]int64, c int) bool {
	for {
		least := -1
		others := false
		for k, row := range rows {
			if row[c] == 0 {
				continue
			}
			others = others || least >= 0
			if least < 0 || absInt(row[c]) < absInt(rows[least][c]) {
				least = k
			}
		}
		if least < 0 {
			return false
		}
		rows[0], rows[least] = rows[least], rows[0]
		if !others {
			return true
		}
		for _, row := range rows[1:] {
			addMultiple(row, rows[0], -(row[c] / rows[0][c]))
		}
	}
}

func addMultiple(row, other []int64, f int64) {
	if f == 0 {
		return
	}
	for i, v := range other {
		row[i] += f * v
	}
}

func absInt(k int64) int64 {
	if k < 0 {
		return -k
	}
	return k
}

// mostReduced is the largest basis that is reduced. Longer ones stay in echelon
// form: the points found with them are near, but not always the nearest.
const mostReduced = 64

// reduceBasis makes a basis of short, nearly orthogonal vectors of the same
// lattice, in place (Lenstra, Lenstra, Lovász, Math. Ann. 261 (1982) 515).
func reduceBasis(basis [][]int64) [][]int64 {
	if len(basis) > mostReduced {
		return basis
	}
	for k := 1; k < len(basis); {
		_, mu, _ := gramSchmidt(basis[:k+1])
		for j := k - 1; j >= 0; j-- {
			if f := int64(math.Round(mu[k][j])); f != 0 {
				addMultiple(basis[k], basis[j], -f)
				_, mu, _ = gramSchmidt(basis[:k+1])
			}
		}
		_, mu, size := gramSchmidt(basis[:k+1])
		if size[k] >= (0.75-mu[k][k-1]*mu[k][k-1])*size[k-1] {
			k++
			continue
		}
		basis[k], basis[k-1] = basis[k-1], basis[k]
		k = max(k-1, 1)
	}
	return basis
}

// gramSchmidt gives the orthogonal vectors, their coefficients and squared
// lengths.
func gramSchmidt(basis [][]int64) (star, mu [][]float64, size []float64) {
	for k, b := range basis {
		v := make([]float64, len(b))
		for i, e := range b {
			v[i] = float64(e)
		}
		own := slices.Clone(v)
		m := make([]float64, k)
		for j := range k {
			m[j] = dot(v, star[j]) / size[j]
			for i := range own {
				own[i] -= m[j] * star[j][i]
			}
		}
		star, mu, size = append(star, own), append(mu, m), append(size, dot(own, own))
	}
	return star, mu, size
}

func dot(a, b []float64) float64 {
	sum := 0.0
	for i, v := range a {
		sum += v * b[i]
	}
	return sum
}
