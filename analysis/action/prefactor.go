package action

import "math"

// A Prefactor says how the mean time over a path depends on copies besides exp(Ω S):
// ln τ = Ω S + Power·ln Ω + c₀ + c₁/Ω + …, known at a few numbers of copies.
type Prefactor struct {
	// Copies are those at which the mean time is known, ascending, at least two; Logs
	// are ln τ there, less Ω S and Power·ln Ω, and Deviations their standard errors (nil:
	// exact).
	Copies, Logs, Deviations []float64
	// Power is that of copies in the prefactor: 0 over a saddle, −1/2 where the path
	// ends with species gone (Assaf and Meerson, Phys. Rev. E 81 (2010) 021116, from
	// memory: the test of the logistic confirms it).
	Power float64
}

// PowerOf gives the Power that belongs to a path.
func PowerOf(p *Path) float64 {
	if p.Extinct {
		return -0.5
	}
	return 0
}

// Add takes up the mean time, by its logarithm, at a number of copies, for a path
// of exponent s.
func (f *Prefactor) Add(copies, logTime, s float64) {
	f.Copies = append(f.Copies, copies)
	f.Logs = append(f.Logs, logTime-copies*s-f.Power*math.Log(copies))
}

// share is the part of a kept correction that the interval allows for what is not
// kept, besides the whole of the last one.
const share = 0.25

// At gives the logarithm of the prefactor at a number of copies, Power included, with
// the half-width of an interval.
//
// It is the polynomial in 1/Ω through all points. The half-width is the last
// correction (from the order before) and a quarter of the one before that: in a series
// whose terms fall, what is neglected is below the last term that was kept, and a last
// term that is small by accident must not say that the neglected ones are. To it come
// 1.96 standard errors of the logs as the polynomial carries them on.
func (f *Prefactor) At(copies float64) (log, half float64) {
	orders := make([]float64, len(f.Copies))
	for k := range orders {
		orders[k], _ = f.through(len(orders)-1-k, copies)
	}
	last := len(orders) - 1
	log, spread := f.through(0, copies)
	for k := 1; k <= last; k++ {
		half += math.Abs(orders[k]-orders[k-1]) * math.Pow(share, float64(last-k))
	}
	return log + f.Power*math.Log(copies), half + 1.96*spread
}

// through is the polynomial through the points from first on, at 1/copies, and the
// standard error that those of the points give it (Lagrange's form).
func (f *Prefactor) through(first int, copies float64) (value, spread float64) {
	u := 1 / copies
	for i := first; i < len(f.Copies); i++ {
		weight := 1.0
		for k := first; k < len(f.Copies); k++ {
			if k != i {
				weight *= (u - 1/f.Copies[k]) / (1/f.Copies[i] - 1/f.Copies[k])
			}
		}
		value += weight * f.Logs[i]
		if f.Deviations != nil {
			spread = math.Hypot(spread, weight*f.Deviations[i])
		}
	}
	return value, spread
}
