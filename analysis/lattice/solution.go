package lattice

import "math"

// A Solution is what the master equation says of a switch. Times are in the
// design's unit.
type Solution struct {
	// Names are the states' names, in the order of all that follows.
	Names []string
	// States is the number of lattice states, Box the box that they lie in.
	States int
	Box    Box
	// Truncation bounds the relative error that cutting the lattice off causes in
	// each mean dwell time, the largest of Bound.
	Truncation float64
	// Bound is the same by state.
	Bound []float64
	// Mean is the mean first-passage time from each core's start to the first
	// entry into another core or a trap; +Inf where there may be none.
	Mean []float64
	// Never marks the states that are not left at all.
	Never []bool
	// End[a][b] is the probability that a dwell in a ends in b; Lost[a] that it
	// ends in a trap that is no state (an absorbing state without a core).
	End  [][]float64
	Lost []float64
	// Pair[a][b] is Mean[a]/End[a][b], the mean time between flips from a to b
	// while in a; +Inf where there are none and on the diagonal. PairBound bounds
	// the relative error that cutting the lattice off causes in it; where an end is
	// as rare as leaving the box it is large, and no number is to be trusted.
	Pair, PairBound [][]float64
	// Sensitivity[a] has the derivatives in the constants, if they were asked for; nil
	// for a state whose dwell may never end.
	Sensitivity []*Sensitivity

	// Species is the number of species; Counts holds each lattice state's counts,
	// Species numbers a state. What follows is nil if only means were wanted.
	Species int
	Counts  []int32
	// Quasi[a] is the quasi-stationary law of state a on the lattice: that of
	// paths which have not yet entered another core. Nil where a is never left.
	Quasi [][]float64
	// Escape[a] is the rate at which it is left, 1/time.
	Escape []float64
	// Persistence[a] is the c of the chance c·exp(−Escape·t) that a dwell begun at a's
	// start still lasts at time t, once the start is forgotten; what is left of the
	// start falls off at the rate Forgetting[a] or faster, as far as the inverse
	// iteration tells.
	Persistence, Forgetting []float64
	// Committor[a] is the probability, from each lattice state, that a's core is
	// the first to be entered.
	Committor [][]float64
	// Stationary is the stationary law; nil where it depends on the start because
	// there are several closed classes.
	Stationary []float64
	// Weight[a] is the stationary probability of state a, each lattice state
	// shared out by its committors.
	Weight []float64
	// Relaxation is the slowest relaxation time of the whole network, 1 over the
	// smallest non-zero eigenvalue of its generator; NaN where the stationary law
	// is not unique or the iteration did not settle.
	Relaxation float64

	// Seconds is the time it took, Bytes the memory needed, by the estimate.
	Seconds float64
	Bytes   int64
}

// Point gives the counts of lattice state i.
func (s *Solution) Point(i int) []int32 { return s.Counts[i*s.Species : (i+1)*s.Species] }

// refuse gives an error where a mean cannot be told.
func (s *solver) refuse() error {
	for a, o := range s.origin {
		name := s.problem.Cores[a].State
		if !s.leads(a, s.regions.start[a]) {
			if !s.entered(a) {
				return &UnreachableError{name}
			}
			continue
		}
		for _, i := range o.chain.stuck {
			if s.leads(a, s.node[s.ordering.kept+i]) {
				return &RangeError{name} // the way out is there and its rate is no number
			}
		}
		if !o.trap && !(o.mean < 1e280 && o.flipping > 0) {
			return &RangeError{name}
		}
	}
	return nil
}

// leads tells whether any path of transitions leads from a node of a core to
// another region.
func (s *solver) leads(a int, from int32) bool {
	seen := make([]bool, s.nodes())
	queue := []int32{from}
	seen[from] = true
	for len(queue) > 0 {
		i := queue[len(queue)-1]
		queue = queue[:len(queue)-1]
		for _, j := range s.successors(int(i)) {
			if r := s.of[j]; r >= 0 && r != int32(a) {
				return true
			}
			if !seen[j] {
				seen[j] = true
				queue = append(queue, j)
			}
		}
	}
	return false
}

// entered tells whether a dwell elsewhere can end in core a.
func (s *solver) entered(a int) bool {
	for b, o := range s.origin {
		if b != a && o.ends[a] > 0 {
			return true
		}
	}
	return false
}

// means starts a Solution with the dwell times.
func (s *solver) means() *Solution {
	n := len(s.problem.Cores)
	out := &Solution{
		States: s.states(), Box: s.box, Species: s.species, Relaxation: math.NaN(),
		Mean: make([]float64, n), Never: make([]bool, n), Lost: make([]float64, n), Bound: make([]float64, n),
		Bytes: s.problem.estimate(&laid{s.plan, s.box}).Bytes,
	}
	for a, o := range s.origin {
		out.Names = append(out.Names, s.problem.Cores[a].State)
		out.Mean[a], out.Bound[a] = o.mean, o.bound()
		out.Truncation = max(out.Truncation, out.Bound[a])
		if o.trap {
			out.Mean[a] = math.Inf(1)
		}
		out.End = append(out.End, o.ends[:n])
		ended := 0.0
		for b, p := range o.ends {
			ended += p
			if b >= n {
				out.Lost[a] += p
			}
		}
		out.Never[a] = ended == 0
		out.addPairs(a, o)
	}
	return out
}

func (s *Solution) addPairs(a int, o *origin) {
	pair, bound := make([]float64, len(s.Mean)), make([]float64, len(s.Mean))
	for b := range pair {
		pair[b], bound[b] = s.Mean[a]/o.ends[b], s.Bound[a]+o.leave/o.ends[b]
		if b == a || o.ends[b] == 0 {
			pair[b], bound[b] = math.Inf(1), 0
		}
	}
	s.Pair, s.PairBound = append(s.Pair, pair), append(s.PairBound, bound)
}
