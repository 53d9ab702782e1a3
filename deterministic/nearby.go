package deterministic

import (
	"math"
	"slices"
)

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
