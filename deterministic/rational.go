package deterministic

import (
	"math/big"

	"holdfast/model"
)

// reduceRows brings rows, in place, to reduced echelon form in exact arithmetic
// over the first columns columns, drops rows that are zero there into rest, and
// gives the pivot column of each row that is left.
func reduceRows(rows [][]*big.Rat, columns int) (left [][]*big.Rat, pivots []int, rest [][]*big.Rat) {
	top := 0
	for c := 0; c < columns && top < len(rows); c++ {
		p := top
		for p < len(rows) && rows[p][c].Sign() == 0 {
			p++
		}
		if p == len(rows) {
			continue
		}
		rows[top], rows[p] = rows[p], rows[top]
		clearColumn(rows, top, c)
		pivots = append(pivots, c)
		top++
	}
	return rows[:top], pivots, rows[top:]
}

// clearColumn makes rows[top][c] one and every other entry of column c zero.
func clearColumn(rows [][]*big.Rat, top, c int) {
	inverse := new(big.Rat).Inv(rows[top][c])
	for _, v := range rows[top] {
		v.Mul(v, inverse)
	}
	for k, row := range rows {
		if k == top || row[c].Sign() == 0 {
			continue
		}
		f := new(big.Rat).Set(row[c])
		for j, v := range row {
			v.Sub(v, new(big.Rat).Mul(f, rows[top][j]))
		}
	}
}

// reactionVectors lists the whole-number changes of counts that the reactions
// chosen by use make: each net change, and each burst species by one on its own,
// since a burst's count is random.
func reactionVectors(net *model.Network, use func(r int) bool) [][]int64 {
	var out [][]int64
	for r := range net.Reactions {
		if !use(r) {
			continue
		}
		re := &net.Reactions[r]
		v := make([]int64, len(net.Species))
		for _, t := range re.Net {
			v[t.Species] += int64(t.Count)
		}
		out = append(out, v)
		for _, t := range re.Bursts {
			b := make([]int64, len(net.Species))
			b[t.Species] = 1
			out = append(out, b)
		}
	}
	return out
}

// rank gives the number of independent vectors among those given, of length n.
func rank(vectors [][]int64, n int) int {
	rows := make([][]*big.Rat, len(vectors))
	for k, v := range vectors {
		rows[k] = rationals(v)
	}
	left, _, _ := reduceRows(rows, n)
	return len(left)
}

func rationals(v []int64) []*big.Rat {
	out := make([]*big.Rat, len(v))
	for i, k := range v {
		out[i] = new(big.Rat).SetInt64(k)
	}
	return out
}
