package lattice

import "math"

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

// quasi finds the quasi-stationary laws and escape rates by inverse iteration
// with the same factors: x ← x M⁻¹, on the nodes outside the other regions, has
// only positive numbers. It starts from the expected times of a dwell, which for
// a rare flip is the law already.
func (s *solver) quasi(out *Solution) {
	n := len(s.origin)
	out.Quasi, out.Escape = make([][]float64, n), make([]float64, n)
	for a, o := range s.origin {
		if o.time == nil || o.trap {
			continue
		}
		x, rate := s.iterate(o)
		out.Quasi[a], out.Escape[a] = s.onStates(x), rate
	}
}

const (
	mostIterations = 400
	settled        = 1e-13
)

func (s *solver) iterate(o *origin) (law []float64, rate float64) {
	x := columns{append([]float64(nil), o.stay[0]...)}
	s.timeless(x[0])
	scale(x[0], 1/total(x[0]))
	for range mostIterations {
		y := columns{append([]float64(nil), x[0]...)}
		s.apply(o.chain, y)
		s.timeless(y[0])
		mass := total(y[0])
		scale(y[0], 1/mass)
		gap := distance(x[0], y[0])
		x, rate = y, 1/mass
		if gap < settled || s.ctx.Err() != nil {
			break
		}
	}
	return x[0], rate
}

func distance(x, y []float64) float64 {
	d := 0.0
	for i, v := range x {
		d += math.Abs(v - y[i])
	}
	return d
}

// apply replaces y by y M⁻¹, M being the generator restricted to the chain's
// inside nodes and all eliminated ones.
func (s *solver) apply(r *restricted, y columns) {
	s.forwardLeft(y)
	values := make([]float64, len(s.kept.exit))
	for v := range y {
		x := r.gather(y[v][s.ordering.kept:])
		r.left(x)
		r.spread(values, x, 0)
		copy(y[v][s.ordering.kept:], values)
	}
	s.backwardLeft(y)
}
