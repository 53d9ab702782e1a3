package model

import (
	"cmp"
	"math/big"
)

// entry is one number of a sparse vector.
type entry struct {
	index int
	value *big.Int
}

// sparse is a vector of whole numbers: its entries that are not zero, by index.
type sparse []entry

// reduce divides by the common divisor and makes the first number positive.
func (v sparse) reduce() {
	if len(v) == 0 {
		return
	}
	g := new(big.Int)
	for _, e := range v {
		g.GCD(nil, nil, g, new(big.Int).Abs(e.value))
	}
	if v[0].value.Sign() < 0 {
		g.Neg(g)
	}
	for i := range v {
		v[i].value = new(big.Int).Quo(v[i].value, g)
	}
}

// compare orders vectors by their entries.
func (v sparse) compare(w sparse) int {
	for i := range min(len(v), len(w)) {
		if c := cmp.Or(v[i].index-w[i].index, v[i].value.Cmp(w[i].value)); c != 0 {
			return c
		}
	}
	return len(v) - len(w)
}

// signs is 1 if the vector has numbers of both signs, else 0.
func (v sparse) signs() int {
	for _, e := range v {
		if e.value.Sign() != v[0].value.Sign() {
			return 1
		}
	}
	return 0
}

// covers tells whether every index of w is one of v.
func (v sparse) covers(w sparse) bool {
	i := 0
	for _, e := range w {
		for i < len(v) && v[i].index < e.index {
			i++
		}
		if i == len(v) || v[i].index != e.index {
			return false
		}
	}
	return true
}

func (v sparse) dot(w sparse) *big.Int {
	sum, i := new(big.Int), 0
	for _, e := range w {
		for i < len(v) && v[i].index < e.index {
			i++
		}
		if i < len(v) && v[i].index == e.index {
			sum.Add(sum, new(big.Int).Mul(v[i].value, e.value))
		}
	}
	return sum
}

// combine gives a·v + b·w.
func combine(v sparse, a *big.Int, w sparse, b *big.Int) sparse {
	out := make(sparse, 0, len(v)+len(w))
	for i, j := 0, 0; i < len(v) || j < len(w); {
		sum, index := new(big.Int), 0
		switch {
		case j == len(w) || i < len(v) && v[i].index < w[j].index:
			index = v[i].index
			sum.Mul(a, v[i].value)
			i++
		case i == len(v) || w[j].index < v[i].index:
			index = w[j].index
			sum.Mul(b, w[j].value)
			j++
		default:
			index = v[i].index
			sum.Mul(a, v[i].value)
			sum.Add(sum, new(big.Int).Mul(b, w[j].value))
			i++
			j++
		}
		if sum.Sign() != 0 {
			out = append(out, entry{index, sum})
		}
	}
	return out
}

// total turns a vector into a conserved total, if its weights are small enough.
func (v sparse) total(start []int64) (Total, bool) {
	t := Total{Weights: make([]int64, len(start))}
	value := new(big.Int)
	for _, e := range v {
		if !e.value.IsInt64() || new(big.Int).Abs(e.value).Int64() > largestWhole {
			return Total{}, false
		}
		t.Weights[e.index] = e.value.Int64()
		value.Add(value, new(big.Int).Mul(e.value, big.NewInt(start[e.index])))
	}
	t.Value = value.Int64()
	return t, value.IsInt64()
}

// echelon is a set of independent vectors, each with a leading index (its first)
// that no other leads with.
type echelon struct {
	rows map[int]sparse
}

// add puts a vector in, unless it depends on those that are there.
func (e *echelon) add(v sparse) bool {
	if e.rows == nil {
		e.rows = map[int]sparse{}
	}
	for len(v) > 0 {
		row, ok := e.rows[v[0].index]
		if !ok {
			v.reduce()
			e.rows[v[0].index] = v
			return true
		}
		v = combine(v, row[0].value, row, new(big.Int).Neg(v[0].value))
		v.reduce()
	}
	return false
}

// nullSpace gives a basis of the whole vectors orthogonal to every direction: one
// for each index that leads no row, by back substitution.
func nullSpace(directions []sparse, size int) []sparse {
	var e echelon
	for _, d := range directions {
		e.add(append(sparse(nil), d...))
	}
	var out []sparse
	for free := range size {
		if _, leads := e.rows[free]; !leads {
			out = append(out, e.solve(free))
		}
	}
	return out
}

// solve gives the vector that is 1 (before clearing denominators) at a free index
// and 0 at all others. Only indices below free can be bound to it.
func (e *echelon) solve(free int) sparse {
	values := map[int]*big.Rat{free: big.NewRat(1, 1)}
	for lead := free - 1; lead >= 0; lead-- {
		row, ok := e.rows[lead]
		if !ok {
			continue
		}
		sum := new(big.Rat)
		for _, x := range row[1:] {
			if v := values[x.index]; v != nil {
				sum.Add(sum, new(big.Rat).Mul(new(big.Rat).SetInt(x.value), v))
			}
		}
		if sum.Sign() != 0 {
			values[lead] = sum.Quo(sum.Neg(sum), new(big.Rat).SetInt(row[0].value))
		}
	}
	return clearDenominators(values, free)
}

func clearDenominators(values map[int]*big.Rat, last int) sparse {
	scale := big.NewInt(1)
	for _, v := range values {
		g := new(big.Int).GCD(nil, nil, scale, v.Denom())
		scale.Mul(scale, new(big.Int).Quo(v.Denom(), g))
	}
	var out sparse
	for i := range last + 1 {
		if v := values[i]; v != nil {
			out = append(out, entry{i, new(big.Int).Quo(new(big.Int).Mul(v.Num(), scale), v.Denom())})
		}
	}
	out.reduce()
	return out
}
