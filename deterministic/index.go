package deterministic

import "math"

// indexBalanced tells whether the states' indices on a class add up. Where no flow
// leaves a bounded region, the signs of det(−J) along the class over all resting
// states add up to 1 (Poincaré–Hopf; Milnor, Topology from the Differentiable
// Viewpoint, 1965, §6): an odd number of states, stable ones one more than saddles
// of one unstable direction, and so on. A state on the boundary counts where adding
// a small flow towards the inside moves it inside. The sum is no proof that all are
// found, but a wrong one proves that some are not.
func (f *finder) indexBalanced(c *class) bool {
	sum, ok := f.indexSum(c)
	return !ok || sum == 1
}

// indexSum gives the sum of indices of the states on the class, which may be a
// face, and on its boundary; false where some state is degenerate or some flow ran
// away, so that it need not be 1.
func (f *finder) indexSum(c *class) (int, bool) {
	if len(f.ranAway) > 0 {
		return 0, false
	}
	inside := f.insidePoint(c)
	sum := 0
	for _, r := range f.found {
		if !r.face.within(c) {
			continue
		}
		if r.kind == Degenerate || inside == nil {
			return 0, false
		}
		sum += f.index(c, r, inside)
	}
	return sum, true
}

// within tells whether c is the face o or on its boundary.
func (c *class) within(o *class) bool {
	for i, frozen := range o.frozen {
		if frozen && !c.frozen[i] {
			return false
		}
	}
	return true
}

// insidePoint is a point of the class with every species that it does not freeze
// present, or nil.
func (f *finder) insidePoint(c *class) []float64 {
	x := make([]float64, c.n)
	for _, i := range c.free() {
		x[i] = max(f.high[i], math.SmallestNonzeroFloat64) / 2
	}
	return c.project(x)
}

// index is the sign of det(−J) along the class, or 0 for a state on its boundary
// that leaves the positive amounts when the flow is pushed inwards.
func (f *finder) index(c *class, r *candidate, inside []float64) int {
	w := f.w
	if countTrue(r.face.frozen) > countTrue(c.frozen) {
		copy(w.scale, r.scale)
		if !w.factor(c, r.x) {
			return 0
		}
		push := make([]float64, c.n)
		for _, i := range c.independent {
			push[i] = r.x[i] - inside[i]
		}
		w.lu.solve(push)
		for i, frozen := range r.face.frozen {
			if frozen && !c.frozen[i] && push[i] < 0 {
				return 0
			}
		}
	}
	values := r.values
	if c != f.whole {
		values, _, _ = w.spectrum(c, r.x, f.spectrumScale(r.x))
	}
	index := 1
	for _, v := range values {
		if real(v) > 0 && imag(v) == 0 {
			index = -index
		}
	}
	return index
}
