package lattice

import "math"

// Inverse iteration ends when a step changes a law, in total, by less than
// settled, and is given up after mostIterations. After plainIterations a Krylov
// space takes over, and plain iteration finishes.
const (
	mostIterations  = 500
	plainIterations = 5
	settled         = 1e-12
)

// quasi finds the quasi-stationary laws and escape rates by inverse iteration
// with the same factors: x ← x M⁻¹, on the nodes outside the other regions, has
// only positive numbers. It starts from the expected times of a dwell, which for
// a rare flip is the law already. All states go through the factors together.
func (s *solver) quasi(out *Solution) {
	n := len(s.origin)
	out.Quasi, out.Escape = make([][]float64, n), make([]float64, n)
	var active []int
	laws := make(columns, n)
	for a, o := range s.origin {
		if o.time == nil || o.trap {
			continue
		}
		active = append(active, a)
		laws[a] = append([]float64(nil), o.stay[0]...)
		s.timeless(laws[a])
		scale(laws[a], 1/total(laws[a]))
	}
	for i := range mostIterations {
		if i == plainIterations {
			s.leap(laws, active)
		}
		active = s.iterate(laws, out.Escape, active)
		if len(active) == 0 || s.ctx.Err() != nil {
			break
		}
	}
	out.Persistence, out.Forgetting = make([]float64, n), make([]float64, n)
	for a, law := range laws {
		if law != nil {
			out.Quasi[a] = s.onStates(law)
			out.Persistence[a], out.Forgetting[a] = s.persistence(s.origin[a], out.Escape[a])
		}
	}
}

// persistence gives the weight c of the slowest mode in a dwell begun at the start,
// and the rate of the next one. With S(t) = c e^{−λt} + Σ cₖ e^{−λₖt} the chance of
// still being in the dwell, the mass of δ M⁻ⁿ is c/λⁿ + Σ cₖ/λₖⁿ: times λⁿ it tends to
// c, by a factor λ/λₖ a step.
func (s *solver) persistence(o *origin, escape float64) (c, forgetting float64) {
	y := append([]float64(nil), o.stay[0]...)
	s.timeless(y)
	scale(y, escape)
	c, forgetting = total(y), math.Inf(1)
	last := c - 1
	for range mostIterations {
		next := columns{append([]float64(nil), y...)}
		s.apply([]*restricted{o.chain}, next)
		y = next[0]
		s.timeless(y)
		scale(y, escape)
		step := total(y) - c
		c += step
		if math.Abs(step) <= persistent*c || s.ctx.Err() != nil {
			break
		}
		forgetting, last = escape*last/step, step
	}
	if !(forgetting > escape) {
		forgetting = escape
	}
	return c, forgetting
}

// persistent is the relative accuracy of the weight of the slowest mode.
const persistent = 1e-10

// leap moves the laws that are slow to settle near to where they will, without
// regard to small entries; negative ones are set to 0, and the steps that follow
// make them positive again.
func (s *solver) leap(laws columns, active []int) {
	for _, a := range active {
		k := krylov{apply: func(x []float64) []float64 {
			y := columns{append([]float64(nil), x...)}
			s.apply([]*restricted{s.origin[a].chain}, y)
			s.timeless(y[0])
			if s.ctx.Err() != nil {
				return nil
			}
			return y[0]
		}}
		law, ok := k.run(laws[a], settled)
		if !ok {
			continue
		}
		sign := math.Copysign(1, total(law))
		for i, v := range law {
			law[i] = max(v*sign, 0)
		}
		scale(law, 1/total(law))
		laws[a] = law
	}
}

// iterate does one step for the active states and gives those that still change.
func (s *solver) iterate(laws columns, rates []float64, active []int) (still []int) {
	var next columns
	var chains []*restricted
	for _, a := range active {
		next = append(next, append([]float64(nil), laws[a]...))
		chains = append(chains, s.origin[a].chain)
	}
	s.apply(chains, next)
	for k, a := range active {
		s.timeless(next[k])
		mass := total(next[k])
		scale(next[k], 1/mass)
		if distance(laws[a], next[k]) > settled {
			still = append(still, a)
		}
		laws[a], rates[a] = next[k], 1/mass
	}
	return still
}

func distance(x, y []float64) float64 {
	d := 0.0
	for i, v := range x {
		d += math.Abs(v - y[i])
	}
	return d
}

// apply replaces each y by y M⁻¹, M being the generator restricted to its chain's
// inside nodes and all eliminated ones.
func (s *solver) apply(chains []*restricted, y columns) {
	s.forwardLeft(y)
	values := make([]float64, len(s.kept.exit))
	for v, r := range chains {
		x := r.gather(y[v][s.ordering.kept:])
		r.left(x)
		r.spread(values, x, 0)
		copy(y[v][s.ordering.kept:], values)
	}
	s.backwardLeft(y)
}
