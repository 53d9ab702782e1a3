package deterministic

import "slices"

// nearestWithin gives the point of ranges and totals, both in molecules, nearest
// to the target, by Dykstra's alternating projections (Boyle and Dykstra, in: Advances
// in Order Restricted Statistical Inference, Springer 1986, p. 28); false where they
// have no point in common.
func (c *class) nearestWithin(s *system, target []float64, low, high []int64) ([]float64, bool) {
	x := slices.Clone(target)
	owed := make([]float64, c.n)
	f := newLU(len(c.rows))
	for range 5000 {
		moved := 0.0
		for i, v := range x {
			v += owed[i]
			clipped := min(max(v, float64(low[i])), float64(high[i]))
			owed[i] = v - clipped
			moved = max(moved, abs(clipped-x[i]))
			x[i] = clipped
		}
		off := c.ontoTotals(s, f, x)
		if off < 1e-6 && moved < 1e-6 {
			return x, true
		}
	}
	return x, c.offRanges(x, low, high) < 0.5
}

// offRanges is the furthest that x lies outside the ranges.
func (c *class) offRanges(x []float64, low, high []int64) float64 {
	worst := 0.0
	for i, v := range x {
		worst = max(worst, float64(low[i])-v, v-float64(high[i]))
	}
	return worst
}

// ontoTotals moves x, in molecules, to the nearest point with the class's totals,
// and gives the largest change.
func (c *class) ontoTotals(s *system, f *lu, x []float64) float64 {
	k := len(c.rows)
	if k == 0 {
		return 0
	}
	row := func(p, i int) float64 { return c.rows[p][i] / s.unit[i] }
	y := make([]float64, k)
	for p := range k {
		y[p] = -c.total[p]
		for i, v := range x {
			y[p] += row(p, i) * v
			for q := range k {
				if i == 0 {
					f.a[p*k+q] = 0
				}
				f.a[p*k+q] += row(p, i) * row(q, i)
			}
		}
	}
	f.factor()
	f.solve(y)
	moved := 0.0
	for i := range x {
		d := 0.0
		for p := range k {
			d += row(p, i) * y[p]
		}
		x[i] -= d
		moved = max(moved, abs(d))
	}
	return moved
}
