package deterministic

// Numbers of starts.
const (
	leastStarts = 96
	mostStarts  = 4096
	leastFlows  = 16
	unseenShare = 1e-3
	emptyStarts = 768 // without a hit, before a face counts as empty
)

// multiStart searches a face of two or more dimensions: flows for the stable
// states, Newton from many starts for all, then along the slow direction of each
// state and between pairs of stable ones.
func (f *finder) multiStart(c *class) {
	seeds := &seeder{c: c, low: f.low, high: f.high, floor: f.resolution}
	if seeds.point(0) == nil {
		return
	}
	f.flowStarts(c, seeds)
	hits := 0
	next := 0
	for target := leastStarts; ; target *= 2 {
		for ; next < min(target, f.most()) && f.ctx.Err() == nil; next++ {
			if f.newtonStart(c, seeds.point(next)) {
				hits++
			}
		}
		f.refine(c)
		if target > leastStarts && !f.indexBalanced(c) {
			f.between(c)
		}
		if f.many(c) {
			f.drift(c, nil)
			return
		}
		if f.ctx.Err() != nil || next >= f.most() || f.enough(c, next, hits) {
			return
		}
	}
}

func (f *finder) most() int {
	if f.options.Starts > 0 {
		return f.options.Starts
	}
	return mostStarts
}

// enough tells whether the starts that converged leave little unseen: with w
// states seen in n converged starts, w(w+1)/(n(n−1)) estimates the share of
// starts that would lead to others (Boender and Rinnooy Kan, Math. Program. 37
// (1987) 59); and whether the states' indices add up.
func (f *finder) enough(c *class, starts, hits int) bool {
	on := 0
	for _, r := range f.found {
		if r.face == c {
			on++
		}
	}
	if hits == 0 {
		return f.indexBalanced(c) && starts >= emptyStarts
	}
	unseen := float64(on) * float64(on+1) / (float64(hits) * float64(max(hits-1, 1)))
	return unseen <= unseenShare && f.indexBalanced(c)
}

func (f *finder) newtonStart(c *class, x []float64) bool {
	if x == nil {
		return false
	}
	f.starts++
	f.w.perCapita = f.starts/2%2 == 1 // in turn, for either spacing of the starts
	ok := f.w.newton(c, x, f.floor, f.high)
	f.w.perCapita = false
	return ok && f.take(c, x) != nil
}
