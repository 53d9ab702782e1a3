package deterministic

import "math"

// indexBalanced tells whether the simple states' indices add up. Where no flow
// leaves a bounded region, the signs of det(−J) on the class over all resting
// states add up to 1 (Poincaré–Hopf; Milnor, Topology from the Differentiable
// Viewpoint, 1965, §6): an odd number of states, stable ones one more than
// saddles of one unstable direction, and so on. A state on the boundary counts
// where adding a small flow towards the inside moves it inside. The sum is no
// proof that all are found, but a wrong one proves that some are not.
func (f *finder) indexBalanced() bool {
	sum, ok := f.indexSum()
	return !ok || sum == 1
}

// indexSum gives the sum of indices; false where some state is degenerate or
// some flow ran away, so that it need not be 1.
func (f *finder) indexSum() (int, bool) {
	if len(f.ranAway) > 0 {
		return 0, false
	}
	inside := f.insidePoint()
	sum := 0
	for _, r := range f.found {
		if r.kind == Degenerate || inside == nil && countTrue(r.face.frozen) > 0 {
			return 0, false
		}
		sum += f.index(r, inside)
	}
	return sum, true
}

// insidePoint is a point of the class with every amount positive, or nil.
func (f *finder) insidePoint() []float64 {
	x := make([]float64, f.whole.n)
	for i := range x {
		x[i] = max(f.high[i], math.SmallestNonzeroFloat64) / 2
	}
	return f.whole.project(x)
}

// index is the sign of det(−J) on the class, or 0 for a boundary state that
// leaves the positive amounts when the flow is pushed inwards.
func (f *finder) index(r *candidate, inside []float64) int {
	w, c := f.w, f.whole
	copy(w.scale, r.scale)
	if !w.factor(c, r.x) {
		return 0
	}
	if countTrue(r.face.frozen) > 0 {
		push := make([]float64, c.n)
		for _, i := range c.independent {
			push[i] = -(inside[i] - r.x[i])
		}
		w.lu.solve(push)
		for i, frozen := range r.face.frozen {
			if frozen && push[i] < 0 {
				return 0
			}
		}
	}
	index := 1
	for _, v := range r.values {
		if real(v) > 0 && imag(v) == 0 {
			index = -index
		}
	}
	return index
}
