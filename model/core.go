package model

// A Core is the region of counts around one resting state that a path must enter
// to count as having reached the state.
//
// It is the set of counts n with Low ≤ n ≤ High in every species and, where Shape
// is not nil, (n−Center)ᵀ Shape (n−Center) ≤ 1.
type Core struct {
	// State names the resting state that the core belongs to.
	State string
	// Low and High bound each species' count, both included.
	Low, High []int64
	// Center is the resting state in molecules, one value per species.
	Center []float64
	// Shape is a symmetric positive semi-definite matrix, species by species in
	// row-major order, in 1/molecules²; nil where the bounds alone make the core.
	Shape []float64
	// Start is a lattice point of the core on the network's conserved totals, the
	// one nearest to Center: where a run of this state begins.
	Start []int64
}

// Contains tells whether counts, one per species, lie in the core.
func (c *Core) Contains(counts []int64) bool {
	for i, k := range counts {
		if k < c.Low[i] || k > c.High[i] {
			return false
		}
	}
	return c.Shape == nil || c.distance(counts) <= 1
}

func (c *Core) distance(counts []int64) float64 {
	s := len(counts)
	q := 0.0
	for i := range s {
		di := float64(counts[i]) - c.Center[i]
		row := c.Shape[i*s : (i+1)*s]
		for j := range s {
			q += di * row[j] * (float64(counts[j]) - c.Center[j])
		}
	}
	return q
}
