package lattice

import "math"

// relaxation is 1 over the smallest non-zero eigenvalue of the generator.
//
// Inverse iteration, sped up by a Krylov space, on signed measures of total mass
// 0: y = x M⁻¹ with M made
// regular by killing paths at the start of the heaviest state, then as much of
// the stationary law added as makes the mass 0 again. There is no cancellation
// that grows with the dwell times: the killed chain acts on the measure of each
// basin by itself, what starts in the heaviest basin is killed at once, and the
// stationary law's share outside that basin, which is what the correction adds to
// the other basins, is small beside 1 when the heaviest holds most and of order 1
// when none does.
func (s *solver) relaxation(law []float64, out *Solution) float64 {
	pin := s.heaviest(law)
	chain := s.kept.restrict(s.team, false, func(i int) bool { return i != pin })
	if len(chain.stuck) > 0 {
		return math.NaN()
	}
	x := s.firstMode(law, out)
	if x == nil {
		return math.NaN()
	}
	k := krylov{apply: func(x []float64) []float64 {
		y := columns{append([]float64(nil), x...)}
		s.apply([]*restricted{chain}, y)
		s.timeless(y[0])
		balance(y[0], law)
		if s.ctx.Err() != nil {
			return nil
		}
		return y[0]
	}}
	if _, ok := k.run(x, relaxed); !ok {
		return math.NaN()
	}
	return (real(k.slowest)*real(k.slowest) + imag(k.slowest)*imag(k.slowest)) / real(k.slowest)
}

// relaxed is how small the residual of the slowest mode must be, relative to its
// eigenvalue.
const relaxed = 1e-11

// heaviest is the kept node at which paths are killed: the start of the state of
// the largest weight, or any kept node of the closed class.
func (s *solver) heaviest(law []float64) int {
	best, pin := 0.0, 0
	for i := range s.kept.exit {
		if v := law[s.ordering.kept+i]; v > best {
			best, pin = v, i
		}
	}
	return pin
}

// firstMode is the measure to begin with: the quasi-stationary law of the state
// that is left soonest less the stationary law.
func (s *solver) firstMode(law []float64, out *Solution) []float64 {
	a := -1
	for b := range out.Escape {
		if out.Quasi[b] != nil && (a < 0 || out.Weight[b] < out.Weight[a]) {
			a = b
		}
	}
	if a < 0 {
		return nil
	}
	x := make([]float64, len(law))
	at := 0
	for i := range s.nodes() {
		if s.isState(i) {
			x[s.position[i]] = out.Quasi[a][at]
			at++
		}
	}
	balance(x, law)
	return x
}

// balance takes from x the multiple of the law that leaves a total of 0.
func balance(x, law []float64) {
	sum := total(x)
	for i, v := range law {
		x[i] -= sum * v
	}
}
