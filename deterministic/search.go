package deterministic

import (
	"context"
	"math"
	"slices"
)

// finder gathers the resting states of one network's class.
type finder struct {
	ctx        context.Context
	w          *workspace
	options    Options
	whole      *class // without frozen species: decides stability
	low, high  []float64
	floor      []float64 // Newton: smallest amount told from 0
	resolution []float64 // flows: amounts below are not resolved relatively
	limit      []float64 // flows: amounts that count as running away
	found      []*candidate
	starts     int // Newton starts and scan points
	flows      int
	ranAway    []int // species, by flow that ran away
	unsettled  int
	scanned    bool // every line was searched without a gap
	drifting   *ContinuumError
	lingering  []float64 // where a flow came to rest on no separate state, or nil
}

// candidate is a resting state with its type.
type candidate struct {
	*root
	kind     Kind
	values   []complex128
	unstable int
	probed   bool
}

// spectrumScale is the amounts that perturbations of each species are measured in.
func (f *finder) spectrumScale(x []float64) []float64 {
	scale := slices.Clone(f.resolution)
	for i, v := range x {
		scale[i] = max(scale[i], v)
	}
	return scale
}

func (f *finder) classify(r *root) *candidate {
	values, slack, ok := f.w.spectrum(f.whole, r.x, f.spectrumScale(r.x))
	c := &candidate{root: r, values: values}
	c.kind, c.unstable = kindOf(values, slack)
	if !ok || !r.simple() {
		c.kind = Degenerate
	}
	return c
}

// tryRoot polishes x, which it overwrites, and takes it up if it is a resting
// state inside its face. It gives the state, or nil.
func (f *finder) tryRoot(c *class, x []float64) *candidate {
	if !f.w.polish(c, x, f.floor) {
		return nil
	}
	return f.take(c, x)
}

// take adds the converged point x unless it is known or lies on a further face.
func (f *finder) take(c *class, x []float64) *candidate {
	for i, v := range x {
		if !c.frozen[i] && !(v > 0) {
			return nil
		}
	}
	if known := f.known(x); known != nil {
		return known
	}
	r := f.w.examine(c, x, f.floor)
	for k, known := range f.found {
		if !known.same(r) {
			continue
		}
		if r.quality.Isolation < known.quality.Isolation && countTrue(r.face.frozen) >= countTrue(known.face.frozen) {
			better := f.classify(r)
			better.probed = known.probed
			*f.found[k] = *better
		}
		return f.found[k]
	}
	f.found = append(f.found, f.classify(r))
	return f.found[len(f.found)-1]
}

// known gives the simple state that x is to within its own error bound, or nil.
func (f *finder) known(x []float64) *candidate {
	for _, k := range f.found {
		same := k.simple()
		for i, v := range x {
			same = same && abs(v-k.x[i]) <= 2*k.quality.Error[i]+4*epsilon*v
		}
		if same {
			return k
		}
	}
	return nil
}

// searchFace finds the resting states with every species present that the face
// does not freeze.
func (f *finder) searchFace(c *class) {
	switch c.dim() {
	case 0:
		x := make([]float64, c.n)
		for k, d := range c.dependent {
			x[d] = max(c.total[k], 0)
		}
		f.starts++
		f.tryRoot(c, x)
	case 1:
		f.scanLine(c)
	default:
		f.multiStart(c)
	}
}

// Numbers of starts.
const (
	leastStarts = 96
	mostStarts  = 4096
	leastFlows  = 16
	unseenShare = 1e-3
	emptyStarts = 768 // without a hit, before a face counts as empty
)

// multiStart searches a face of two or more dimensions: flows for the stable
// states, Newton from many starts for all, then along the slow direction of each
// state and between pairs of stable ones.
func (f *finder) multiStart(c *class) {
	seeds := &seeder{c: c, low: f.low, high: f.high, floor: f.resolution}
	if seeds.point(0) == nil {
		return
	}
	f.flowStarts(c, seeds)
	hits := 0
	next := 0
	for target := leastStarts; ; target *= 2 {
		for ; next < min(target, f.most()) && f.ctx.Err() == nil; next++ {
			if f.newtonStart(c, seeds.point(next)) {
				hits++
			}
		}
		f.refine(c)
		if target > leastStarts && !f.indexBalanced(c) {
			f.between(c)
		}
		if f.many(c) {
			f.drift(c, nil)
			return
		}
		if f.ctx.Err() != nil || next >= f.most() || f.enough(c, next, hits) {
			return
		}
	}
}

func (f *finder) most() int {
	if f.options.Starts > 0 {
		return f.options.Starts
	}
	return mostStarts
}

// enough tells whether the starts that converged leave little unseen: with w
// states seen in n converged starts, w(w+1)/(n(n−1)) estimates the share of
// starts that would lead to others (Boender and Rinnooy Kan, Math. Program. 37
// (1987) 59); and whether the states' indices add up.
func (f *finder) enough(c *class, starts, hits int) bool {
	on := 0
	for _, r := range f.found {
		if r.face == c {
			on++
		}
	}
	if hits == 0 {
		return f.indexBalanced(c) && starts >= emptyStarts
	}
	unseen := float64(on) * float64(on+1) / (float64(hits) * float64(max(hits-1, 1)))
	return unseen <= unseenShare && f.indexBalanced(c)
}

func (f *finder) newtonStart(c *class, x []float64) bool {
	if x == nil {
		return false
	}
	f.starts++
	f.w.perCapita = f.starts/2%2 == 1 // in turn, for either spacing of the starts
	ok := f.w.newton(c, x, f.floor, f.high)
	f.w.perCapita = false
	return ok && f.take(c, x) != nil
}

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

// refine looks for states near and between those found, until there are no new
// ones.
func (f *finder) refine(c *class) {
	for k := 0; k < len(f.found); k++ {
		r := f.found[k]
		if r.face != c || r.probed || f.ctx.Err() != nil {
			continue
		}
		r.probed = true
		f.probeAlong(c, r)
	}
}

// bisections halves the way between two states to a millionth.
const bisections = 20

// between looks for the states on the boundaries between basins: along the straight
// way from each stable state to each other it finds where the flow's end changes,
// by bisection; the flows from near there pass, and take up, what lies on the
// boundary.
func (f *finder) between(c *class) {
	var stable []*candidate
	for _, r := range f.found {
		if r.kind.Stable() {
			stable = append(stable, r)
		}
	}
	for i, a := range stable {
		for _, b := range stable[:i] {
			low, high := 0.0, 1.0
			for range bisections {
				s := (low + high) / 2
				x := make([]float64, c.n)
				for k := range x {
					x[k] = (1-s)*a.x[k] + s*b.x[k]
				}
				if f.ctx.Err() != nil {
					return
				}
				if at := f.flowToRest(f.whole, x); at != nil && at.same(a.root) {
					low = s
				} else {
					high = s
				}
			}
		}
	}
}

// probeAlong starts Newton on both sides of a state along its slowest direction,
// at distances from a thousandth of the state to all of it, and follows the
// flows away from it where it is unstable.
func (f *finder) probeAlong(c *class, r *candidate) {
	d := f.slowDirection(c, r.root)
	if d == nil {
		return
	}
	for _, reach := range []float64{1e-3, 1e-2, 0.1, 0.5, 0.9, -1e-3, -1e-2, -0.1, -0.5, -0.9} {
		x := make([]float64, c.n)
		for i := range x {
			x[i] = r.x[i] * max(1+reach*d[i]/max(r.x[i]/r.scale[i], 1e-3), 0.05)
		}
		if x = c.project(x); x == nil {
			continue
		}
		if r.kind != Degenerate && r.unstable > 0 && abs(reach) == 1e-2 {
			f.flowToRest(c, slices.Clone(x))
		}
		f.newtonStart(c, x)
	}
}

// slowDirection is the direction, largest entry 1 in units of the state's scale,
// that the equations resist least: by three steps of inverse iteration.
func (f *finder) slowDirection(c *class, r *root) []float64 {
	w := f.w
	copy(w.scale, r.scale)
	if !w.factor(c, r.x) {
		return nil
	}
	d := make([]float64, c.n)
	for _, i := range c.independent {
		d[i] = 1 + 0.1*halton(i+1, 0)
	}
	for range 3 {
		for _, k := range c.dependent {
			d[k] = 0
		}
		w.lu.solve(d)
		size := norm(d)
		if size == 0 || math.IsInf(size, 0) {
			return nil
		}
		for i := range d {
			d[i] /= size
		}
	}
	return d
}
