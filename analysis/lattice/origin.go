package lattice

import "math"

// An origin is what one elimination says of dwells that start in one core.
type origin struct {
	state int
	chain *restricted

	mean  float64   // mean time to the first entry elsewhere or out of the box, from the core's start
	ends  []float64 // probability of ending in each region
	leave float64   // probability of leaving the box first
	trap  bool      // the dwell may end never

	time     columns // one vector: mean time from every node
	flip     columns // one vector: probability of flipping before leaving the box
	stay     columns // one vector: expected time in every node (per visit rate), from the start
	longest  float64 // the largest of time
	weakest  float64 // the smallest of flip
	flipping float64 // probability of flipping before leaving the box, from the start
}

// origins solves for the dwells of every core.
func (s *solver) origins() {
	s.problem.report("substituting", 0)
	for a := range s.problem.Cores {
		s.origin = append(s.origin, s.newOrigin(a))
	}
	s.extend()
}

// rewards prepares the right-hand side of mean times: 1 in every lattice state.
func (s *solver) rewards() {
	reward := s.newColumns(1)
	for i, node := range s.node {
		if s.isState(int(node)) {
			reward[0][i] = 1
		}
	}
	s.forward(reward)
	s.reward = reward[0]
}

func (s *solver) newOrigin(a int) *origin {
	k, last := s.kept, s.ordering.kept
	o := &origin{state: a, ends: make([]float64, s.regions.count)}
	o.chain = k.restrict(s.team, true, func(i int) bool { return k.region[i] == int32(a) || k.region[i] < 0 })
	at := o.chain.place[k.start[a]]
	if at < 0 {
		o.trap, o.mean = true, math.Inf(1)
		return o
	}
	values := make([]float64, len(k.exit))
	solve := func(x []float64, fill float64) columns {
		o.chain.right(x)
		v := s.newColumns(1)
		o.chain.spread(values, x, fill)
		copy(v[0][last:], values)
		return v
	}
	time := o.chain.gather(s.reward[last:])
	o.time = solve(time, 0)
	o.mean = time[at]
	copy(o.time[0], s.reward[:last])
	flip := o.chain.into(func(i int) bool { return k.region[i] >= 0 && k.region[i] != int32(a) })
	o.flip = solve(flip, 1)
	o.flipping = flip[at]
	s.endings(o, at)
	s.staying(o, at)
	return o
}

// endings fills in the probabilities of where a dwell ends.
func (s *solver) endings(o *origin, at int) {
	k := s.kept
	for b := range o.ends {
		if b == o.state {
			continue
		}
		x := o.chain.into(func(i int) bool { return k.region[i] == int32(b) })
		o.chain.right(x)
		o.ends[b] = x[at]
	}
	if len(o.chain.stuck) > 0 {
		x := o.chain.into(func(i int) bool { return o.chain.region[i] < 0 || o.chain.region[i] == int32(o.state) })
		o.chain.right(x)
		o.trap = x[at] > 0
	}
	exits := o.chain.gather(s.leaving()[s.ordering.kept:])
	o.chain.right(exits)
	o.leave = exits[at]
}

// leaving is the rate out of the box by position, eliminated forward.
func (s *solver) leaving() []float64 {
	if s.exiting == nil {
		s.exiting = make([]float64, s.nodes())
		for f := range s.fronts {
			fr := &s.fronts[f]
			copy(s.exiting[fr.low:fr.high], fr.exit)
		}
		copy(s.exiting[s.ordering.kept:], s.kept.exit)
	}
	return s.exiting
}

// staying prepares the expected times spent in the nodes.
func (s *solver) staying(o *origin, at int) {
	y := make([]float64, len(o.chain.inside))
	y[at] = 1
	o.chain.left(y)
	o.stay = s.newColumns(1)
	values := make([]float64, len(s.kept.exit))
	o.chain.spread(values, y, 0)
	copy(o.stay[0][s.ordering.kept:], values)
}

// extend carries the origins' values from the kept nodes to all others.
func (s *solver) extend() {
	var right, left columns
	for _, o := range s.origin {
		if o.time != nil {
			right = append(right, o.time[0], o.flip[0])
			left = append(left, o.stay[0])
		}
	}
	s.backward(right)
	s.backwardLeft(left)
	for _, o := range s.origin {
		if o.time != nil {
			s.extremes(o)
		}
	}
}

// extremes finds the longest mean time and the weakest chance of flipping among
// the nodes that a dwell may visit.
func (s *solver) extremes(o *origin) {
	o.weakest = 1
	for i, node := range s.node {
		if r := s.of[node]; r >= 0 && r != int32(o.state) {
			continue
		}
		o.longest = max(o.longest, o.time[0][i])
		o.weakest = min(o.weakest, o.flip[0][i])
	}
}
