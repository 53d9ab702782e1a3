package lattice

// describe fills in the laws on the lattice.
func (s *solver) describe(out *Solution) error {
	out.Counts = s.stateCounts()
	s.problem.report("quasi-stationary laws", 0)
	s.quasi(out)
	s.problem.report("committors", 0)
	committors := s.committors()
	for a := range s.problem.Cores {
		out.Committor = append(out.Committor, s.onStates(committors[a]))
	}
	s.problem.report("stationary law", 0)
	if s.nClosed == 1 {
		law := s.stationary()
		s.timeless(law)
		out.Stationary = s.onStates(law)
		out.Weight = weights(out.Stationary, out.Committor)
		s.problem.report("relaxation", 0)
		out.Relaxation = s.relaxation(law, out)
	}
	return s.ctx.Err()
}

func (s *solver) stateCounts() []int32 {
	if s.states() == s.nodes() {
		return s.counts
	}
	var out []int32
	for i := range s.nodes() {
		if s.isState(i) {
			out = append(out, s.point(i)...)
		}
	}
	return out
}

// onStates picks the lattice states' values, in their own order, from those by
// position.
func (s *solver) onStates(x []float64) []float64 {
	out := make([]float64, 0, s.nodes())
	for i := range s.nodes() {
		if s.isState(i) {
			out = append(out, x[s.position[i]])
		}
	}
	return out
}

// timeless sets to zero the nodes in which no time passes.
func (s *solver) timeless(x []float64) {
	for i, node := range s.node {
		if !s.isState(int(node)) {
			x[i] = 0
		}
	}
}

func total(x []float64) float64 {
	sum := 0.0
	for _, v := range x {
		sum += v
	}
	return sum
}

func scale(x []float64, f float64) {
	for i := range x {
		x[i] *= f
	}
}

// committors gives, for every core, the probability that it is the first to be
// entered, by position. Paths that leave the box are left out of account.
func (s *solver) committors() columns {
	k, n := s.kept, s.regions.count
	free := k.restrict(s.team, true, func(i int) bool { return k.region[i] < 0 })
	h := s.newColumns(n)
	values := make([]float64, len(k.exit))
	for b := range n {
		x := free.into(func(i int) bool { return k.region[i] == int32(b) })
		free.right(x)
		free.spread(values, x, 0)
		for i, r := range k.region {
			if r == int32(b) {
				values[i] = 1
			}
		}
		copy(h[b][s.ordering.kept:], values)
	}
	s.backward(h)
	for i, node := range s.node {
		s.settleCommittor(h, i, s.of[node])
	}
	return h
}

// settleCommittor makes the values at one position add up to 1, and those inside
// a region 0 and 1.
func (s *solver) settleCommittor(h columns, i int, region int32) {
	sum := 0.0
	for b := range h {
		sum += h[b][i]
	}
	for b := range h {
		switch {
		case region == int32(b):
			h[b][i] = 1
		case region >= 0:
			h[b][i] = 0
		case sum > 0:
			h[b][i] /= sum
		}
	}
}

// stationary gives the stationary law by position. At nodes in which no time
// passes it is how often they are passed through.
func (s *solver) stationary() []float64 {
	law := s.newColumns(1)
	copy(law[0][s.ordering.kept:], s.kept.stationary(s.team))
	s.backwardLeft(law)
	timed := 0.0
	for i, node := range s.node {
		if s.isState(int(node)) {
			timed += law[0][i]
		}
	}
	scale(law[0], 1/timed)
	return law[0]
}

// weights shares the stationary law out by committors.
func weights(law []float64, committor [][]float64) []float64 {
	out := make([]float64, len(committor))
	for a, h := range committor {
		for i, v := range law {
			out[a] += v * h[i]
		}
	}
	return out
}
