package lattice

import (
	"context"
	"sync"
	"time"
)

// firstDeviations is how many standard deviations around the resting states the
// first box reaches.
const firstDeviations = 8

// A solver is one elimination of one box and what is read from it.
type solver struct {
	*factors
	problem *Problem
	box     Box
	kept    *keptChain
	reward  []float64 // one for every lattice state, eliminated forward
	exiting []float64
	origin  []*origin
}

func newSolver(ctx context.Context, p *Problem, l *laid) (*solver, error) {
	p.report("eliminating", 0)
	var one sync.Mutex
	f, err := factor(ctx, l.plan, p.threads(), func(done float64) {
		one.Lock()
		defer one.Unlock()
		p.report("eliminating", min(done, 1))
	})
	if err != nil {
		return nil, err
	}
	s := &solver{factors: f, problem: p, box: l.box}
	s.kept = f.keptChain()
	s.rewards()
	return s, ctx.Err()
}

// Solve computes the mean dwell time of every state and, unless only means are
// wanted, all else that a Solution holds. It stops promptly when ctx is done.
//
// Errors: ErrOneState, *CoreError, *UnreachableError, *RateError,
// *DimensionError, *TooLargeError, *BoxError, *RangeError, and that of ctx.
func Solve(ctx context.Context, p Problem) (*Solution, error) {
	begin := time.Now()
	if len(p.Cores) < 2 {
		return nil, ErrOneState
	}
	if err := p.check(); err != nil {
		return nil, err
	}
	s, err := p.settle(ctx)
	if err != nil {
		return nil, err
	}
	if err := s.refuse(); err != nil {
		return nil, err
	}
	out := s.means()
	if p.Sensitivities {
		if err := s.sensitivities(out); err != nil {
			return nil, err
		}
	}
	if !p.MeansOnly {
		if err := s.describe(out); err != nil {
			return nil, err
		}
	}
	out.Seconds = time.Since(begin).Seconds()
	return out, ctx.Err()
}

// settle solves in a box that grows until its truncation error is below what was
// asked.
func (p *Problem) settle(ctx context.Context) (*solver, error) {
	const attempts = 12
	b := firstBox(p, firstDeviations)
	for try := 1; ; try++ {
		l, err := p.lay(ctx, b)
		if err != nil {
			return nil, err
		}
		s, err := newSolver(ctx, p, l)
		if err != nil {
			return nil, err
		}
		s.origins()
		bound := s.worstBound()
		if bound <= p.truncation() || p.Fixed {
			return s, nil
		}
		if try == attempts {
			return nil, &BoxError{b, bound, p.truncation()}
		}
		b = s.grown(s.visits())
	}
}
