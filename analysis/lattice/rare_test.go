package lattice

import (
	"math/big"
	"testing"

	"holdfast/model"
)

// bandedMean is the mean first-passage time from one core's start to another
// core on a two-species lattice of single steps, [0, high]² with leaving it as an
// end, by banded elimination with subtraction in 72 digits.
func bandedMean(n *model.Network, high int64, from, to *model.Core) float64 {
	side := int(high) + 1
	size := side * side
	m := make([][]*big.Float, size) // m[i][j-i+side], right-hand side last
	for i := range m {
		m[i] = bandedRow(n, side, i, to)
	}
	tmp := exact(0)
	for k := range m {
		for i := k + 1; i <= k+side && i < size; i++ {
			if m[i][k-i+side].Sign() == 0 {
				continue
			}
			f := exact(0).Quo(m[i][k-i+side], m[k][side])
			for j := k + 1; j <= k+side && j < size; j++ {
				if m[k][j-k+side].Sign() != 0 {
					m[i][j-i+side].Sub(m[i][j-i+side], tmp.Mul(f, m[k][j-k+side]))
				}
			}
			m[i][2*side+1].Sub(m[i][2*side+1], tmp.Mul(f, m[k][2*side+1]))
		}
	}
	x := make([]*big.Float, size)
	for k := size - 1; k >= 0; k-- {
		x[k] = m[k][2*side+1]
		for j := k + 1; j <= k+side && j < size; j++ {
			x[k].Sub(x[k], tmp.Mul(m[k][j-k+side], x[j]))
		}
		x[k].Quo(x[k], m[k][side])
	}
	f, _ := x[int(from.Start[0])*side+int(from.Start[1])].Float64()
	return f
}

func bandedRow(n *model.Network, side, i int, to *model.Core) []*big.Float {
	row := make([]*big.Float, 2*side+2)
	for j := range row {
		row[j] = exact(0)
	}
	at := []int64{int64(i / side), int64(i % side)}
	if to.Contains(at) {
		row[side].SetInt64(1)
		return row
	}
	row[2*side+1].SetInt64(1)
	for r := range n.Reactions {
		a := exact(n.Propensity(r, at))
		row[side].Add(row[side], a)
		t := n.Reactions[r].Net[0]
		if k := at[t.Species] + int64(t.Count); k < 0 || k >= int64(side) {
			continue
		}
		step := t.Count
		if t.Species == 0 {
			step *= side
		}
		row[side+step].Sub(row[side+step], a)
	}
	return row
}

// pooled is top (size−xᵢ)/(1+xⱼ^power): production from a pool of the given size.
func pooled(size, top float64, i, j int, power float64) *model.Node {
	left := model.Call(model.OpSub, model.Number(size), model.SpeciesRef(i))
	return model.Call(model.OpMul, left, repressed(top, j, power))
}

// Rare flips in two dimensions against banded elimination in 72 digits, of which
// the near singularity costs as many as the dwell time has. Each gene's pool is
// finite, so that nothing is cut off.
func TestRareTwoSpecies(t *testing.T) {
	const size = 16
	for _, top := range []float64{8, 100, 1e4} {
		d := draft{species: []string{"u", "v"}, readout: 1, reactions: []draftReaction{
			{makes: counts{0: 1}, rate: pooled(size, top, 0, 1, 6)},
			{uses: counts{0: 1}, k: 1},
			{makes: counts{1: 1}, rate: pooled(size, top/2, 1, 0, 6)},
			{uses: counts{1: 1}, k: 0.9},
		}}
		cores := []model.Core{
			box("low", []int64{13, 0}, []int64{15, 0}, []int64{16, 1}),
			box("high", []int64{0, 13}, []int64{0, 15}, []int64{1, 16}),
		}
		n := bind(t, d, 1)
		s := solve(t, Problem{Network: n, Cores: cores, Low: []int64{0, 0}, High: []int64{size, size}})
		for a := range 2 {
			if want := bandedMean(n, size, &cores[a], &cores[1-a]); relative(s.Mean[a], want) > 1e-12 {
				t.Errorf("top %v, %s: %v, want %v", top, s.Names[a], s.Mean[a], want)
			}
		}
		if s.Truncation != 0 || relative(s.Mean[0]*s.Escape[0], 1) > 1e-2 {
			t.Errorf("top %v: truncation %v, mean %v, escape rate %v", top, s.Truncation, s.Mean[0], s.Escape[0])
		}
	}
}
