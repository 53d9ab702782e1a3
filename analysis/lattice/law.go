package lattice

import (
	"context"
	"errors"
	"math"
)

// ErrManyLaws is what Stationary returns where the stationary law depends on the
// start, because there are several sets of states that are never left.
var ErrManyLaws = errors.New("the stationary law is not unique: more than one set of states is never left")

// A Law is a stationary law on the lattice.
type Law struct {
	// Species is the number of species; Counts holds each lattice state's counts,
	// Species numbers a state; Probability its probability.
	Species     int
	Counts      []int32
	Probability []float64
	Box         Box
	// Truncation bounds the error that cutting the lattice off causes in the
	// probability of any set of states.
	Truncation float64
}

// Stationary computes the stationary law of the network on what can be reached
// from the cores' starts, or without cores from its starting counts, in a box
// that grows until the truncation error is below what is asked. Errors are those
// of Solve, and ErrManyLaws.
func Stationary(ctx context.Context, p Problem) (*Law, error) {
	const attempts = 12
	if err := p.check(); err != nil {
		return nil, err
	}
	b := firstBox(&p, firstDeviations)
	for try := 1; ; try++ {
		l, err := p.lay(ctx, b)
		if err != nil {
			return nil, err
		}
		if l.nClosed != 1 {
			return nil, ErrManyLaws
		}
		s, err := newSolver(ctx, &p, l)
		if err != nil {
			return nil, err
		}
		law, v := s.stationaryVisit()
		bound := v.scale * total(s.flows(law))
		if bound <= p.truncation() || p.Fixed {
			return &Law{s.species, s.stateCounts(), s.onStates(law), b, bound}, ctx.Err()
		}
		if try == attempts {
			return nil, &BoxError{b, bound, p.truncation()}
		}
		b = s.grown([]visit{v})
	}
}

// stationaryVisit gives the stationary law and how far leaving the box moves it.
//
// Take cycles between visits to one state: the law is the time spent in a set
// during a cycle over the length of a cycle. The box is left with probability
// ε = (rate of leaving)·(length) in a cycle; what such a cycle adds to either is
// at most 2Tₘ/κ as for mean dwell times, with Tₘ the longest mean time to that
// state and κ the smallest chance of reaching it before leaving. So no
// probability is off by more than 2·(rate of leaving)·Tₘ/κ.
func (s *solver) stationaryVisit() ([]float64, visit) {
	law := s.stationary()
	pin, last := s.heaviest(law), s.ordering.kept
	chain := s.keptChain().restrict(s.team, true, func(i int) bool { return i != pin })
	x := s.newColumns(2)
	solve := func(v int, values []float64, fill float64) {
		chain.right(values)
		kept := make([]float64, len(s.kept.exit))
		chain.spread(kept, values, fill)
		copy(x[v][last:], kept)
	}
	solve(0, chain.gather(s.reward[last:]), 0)
	copy(x[0], s.reward[:last])
	solve(1, chain.into(func(i int) bool { return i == pin }), 1)
	s.backward(x)
	longest, weakest := 0.0, 1.0
	for i := range x[0] {
		longest, weakest = max(longest, x[0][i]), min(weakest, x[1][i])
	}
	return law, visit{law, min(2*longest/weakest, math.MaxFloat64)}
}
