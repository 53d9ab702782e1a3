package deterministic

import "slices"

// flowStarts follows flows from some of the seeds to rest.
func (f *finder) flowStarts(c *class, seeds *seeder) {
	for k := range max(leastFlows, seeds.corners()) {
		if x := seeds.point(k); x != nil && f.ctx.Err() == nil {
			f.flowToRest(c, x)
		}
	}
}

// searchTolerance is the accuracy of the flows of the search: only their ends
// count.
const searchTolerance = 1e-3

// searchSteps bounds each of them.
const searchSteps = 3000

// atStandstill is the relative change in one step, the steps growing sixfold,
// below which a flow is at rest: on a saddle, on a degenerate state, or where some
// species is vanishing.
const atStandstill = 1e-7

// flowToRest follows the flow from x, in place, until a Newton step from it is
// short and leads to a stable state, or it stands still; it gives the state or nil.
func (f *finder) flowToRest(c *class, x []float64) *candidate {
	f.flows++
	g := newIntegrator(f.w, searchTolerance, f.resolution)
	var at *candidate
	quiet, still := 0, 0
	end, species := g.follow(f.ctx, x, f.limit, searchSteps, func(moved float64) bool {
		if moved > 0.1 {
			quiet = 0
			return false
		}
		if moved > atStandstill {
			still = 0
		}
		still++
		if quiet++; quiet%4 != 0 && still < 20 {
			return false
		}
		at = f.nearRest(c, x)
		return still >= 20 || at != nil && (at.kind.Stable() || f.atop(at, x))
	})
	switch end {
	case flowSettled:
		if at == nil {
			f.linger(c, x)
		}
		return at
	case flowRanAway:
		f.ranAway = append(f.ranAway, species)
	case flowUnsettled:
		f.unsettled++
	}
	return nil
}

// atop tells whether x is a state to within a thousandth of its amounts: a flow
// that comes so near a saddle is not followed on.
func (f *finder) atop(r *candidate, x []float64) bool {
	for i, v := range x {
		if !(abs(v-r.x[i]) <= 1e-3*(r.x[i]+f.resolution[i])) {
			return false
		}
	}
	return true
}

// nearRest gives the resting state within a short Newton step of x, or nil.
func (f *finder) nearRest(c *class, x []float64) *candidate {
	w := f.w
	w.rescale(x, f.floor)
	if !w.factor(c, x) {
		return nil
	}
	w.residuals(c, x, w.f, w.gross)
	if !(w.correct(w.f, w.step) <= 0.1) {
		return nil
	}
	y := slices.Clone(x)
	if !w.polish(c, y, f.floor) {
		return nil
	}
	for i := range y {
		if !(abs(y[i]-x[i]) <= 0.5*max(x[i], f.resolution[i])) {
			return nil
		}
	}
	return f.take(c, y)
}
