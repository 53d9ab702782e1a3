package proof

import (
	"math/big"
	"slices"
)

// A matrix of rational numbers, by rows.
type rational [][]*big.Rat

func newRational(rows, cols int) rational {
	m := make(rational, rows)
	for i := range m {
		m[i] = make([]*big.Rat, cols)
		for j := range m[i] {
			m[i][j] = new(big.Rat)
		}
	}
	return m
}

// reduce brings m to reduced echelon form in place, with the columns tried in the
// given order, and gives the pivots' columns, row by row.
func (m rational) reduce(order []int) (pivots []int) {
	top := 0
	for _, col := range order {
		row := top
		for row < len(m) && m[row][col].Sign() == 0 {
			row++
		}
		if row == len(m) {
			continue
		}
		m[top], m[row] = m[row], m[top]
		m.clear(top, col)
		pivots = append(pivots, col)
		top++
	}
	return pivots
}

// clear makes the entry at (top, col) 1 and the rest of its column 0.
func (m rational) clear(top, col int) {
	inverse := new(big.Rat).Inv(m[top][col])
	for j := range m[top] {
		m[top][j].Mul(m[top][j], inverse)
	}
	for i := range m {
		if i == top || m[i][col].Sign() == 0 {
			continue
		}
		factor := new(big.Rat).Set(m[i][col])
		for j := range m[i] {
			if m[top][j].Sign() != 0 {
				m[i][j].Sub(m[i][j], new(big.Rat).Mul(factor, m[top][j]))
			}
		}
	}
}

// ascending is 0, 1, … n−1.
func ascending(n int) []int {
	out := make([]int, n)
	for i := range out {
		out[i] = i
	}
	return out
}

// leftRank is the dimension of the left null space of the changes, one column a
// flux, over the given species.
func leftRank(fluxes []flux, species []int) int {
	m := newRational(len(fluxes), len(species))
	for r, f := range fluxes {
		for j, i := range species {
			m[r][j].SetInt64(f.change[i])
		}
	}
	return len(species) - len(m.reduce(ascending(len(species))))
}

// whole scales a row to whole numbers without common divisor; ok is false where
// they are large.
func wholeRow(row []*big.Rat) (out []int64, ok bool) {
	scale := big.NewInt(1)
	for _, v := range row {
		gcd := new(big.Int).GCD(nil, nil, scale, v.Denom())
		scale.Div(new(big.Int).Mul(scale, v.Denom()), gcd)
	}
	divisor := new(big.Int)
	whole := make([]*big.Int, len(row))
	for i, v := range row {
		whole[i] = new(big.Int).Div(new(big.Int).Mul(v.Num(), scale), v.Denom())
		divisor.GCD(nil, nil, divisor, new(big.Int).Abs(whole[i]))
	}
	if divisor.Sign() == 0 {
		return nil, false
	}
	out = make([]int64, len(row))
	for i, v := range whole {
		v.Div(v, divisor)
		if !v.IsInt64() || v.BitLen() > 50 {
			return nil, false
		}
		out[i] = v.Int64()
	}
	return out, true
}

// orders is the number of orders that elementary tries.
const orders = 6

// elementary gives combinations of the rows of the changes in which fluxes cancel:
// the rows of echelon forms for several orders of the fluxes, whole numbers, one a
// flux. At rest each sum of fluxes with these weights is 0.
func elementary(fluxes []flux, species []int) [][]int64 {
	n := len(fluxes)
	order := ascending(n)
	var out [][]int64
	for range min(n, orders) {
		m := newRational(len(species), n)
		for k, i := range species {
			for r, f := range fluxes {
				m[k][r].SetInt64(f.change[i])
			}
		}
		for k := range m.reduce(order) {
			if row, ok := wholeRow(m[k]); ok && !slices.ContainsFunc(out, func(o []int64) bool { return slices.Equal(o, row) }) {
				out = append(out, row)
			}
		}
		order = append(order[n/orders+1:], order[:n/orders+1]...)
	}
	return out
}
