package sde

import (
	"context"
	"math"
)

// A Halving holds runs with a step and as many other runs with half of it.
type Halving struct{ Full, Half Result }

// Halve makes the plan's runs, and as many again, independent of the first, with
// half the step they took. Sample is called for the first only. A budget of steps is
// doubled for the second. Errors are those of Run.
func Halve(ctx context.Context, p Plan) (Halving, error) {
	full, err := Run(ctx, p)
	if err != nil {
		return Halving{Full: full}, err
	}
	p.Step, p.stream, p.Times, p.Sample = full.Step/2, halfStream, nil, nil
	p.MaxSteps *= 2
	half, err := Run(ctx, p)
	return Halving{full, half}, err
}

// StepError gives the mean time to a flip with the full step minus that with half
// of it, which is about half the error of the full step where that is of first
// order and 0.29 of it where it is of order 1/2, and the standard error that it has
// from sampling. A difference within two standard errors is no sign of a step error. Both are
// NaN where one of the two has no flip.
func (h Halving) StepError() (difference, sampling float64) {
	a, errA := h.Full.meanTime()
	b, errB := h.Half.meanTime()
	return a - b, math.Hypot(errA, errB)
}

// meanTime gives the exposure over the flips, and its standard error for flips that
// come without memory.
func (r *Result) meanTime() (mean, sampling float64) {
	exposure, flips := 0.0, 0.0
	for i := range r.Outcomes {
		o := &r.Outcomes[i]
		if o.Ending == NotFinite || o.Ending == RanAway {
			continue
		}
		exposure += o.Time
		if o.Ending == Flipped {
			flips++
		}
	}
	if flips == 0 {
		return math.NaN(), math.NaN()
	}
	mean = exposure / flips
	return mean, mean / math.Sqrt(flips)
}
