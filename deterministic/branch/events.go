package branch

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/floats"
)

// events lists what happens inside a segment, in the order in which it runs;
// before and after are the eigenvalues at its ends, nil at a corner.
func (t *tracer) events(g segment, before, after []complex128) []spot {
	var out []spot
	meeting := t.meetingOn(g)
	if meeting != nil {
		out = append(out, *meeting)
	}
	n := t.f.n
	if g.from.tangent[n]*g.to.tangent[n] < 0 && (meeting == nil || !meeting.mark.Turns) {
		out = append(out, t.turnOn(g))
	}
	if s, ok := t.hopfOn(g, before, after); ok {
		out = append(out, s)
	}
	for _, k := range t.kinks {
		if s, ok := t.kinkOn(g, k); ok {
			out = append(out, s)
		}
	}
	if len(out) == 0 && before != nil && unstable(before) != unstable(after) {
		if s, ok := t.changeOn(g, unstable(before)); ok {
			out = append(out, s)
		}
	}
	slices.SortStableFunc(out, func(a, b spot) int { return compare(g.share(a.u), g.share(b.u)) })
	return out
}

// meetingOn finds the point of the segment where branches meet, which the
// determinant's change of sign tells of; nil where there is none.
func (t *tracer) meetingOn(g segment) *spot {
	if g.from.sign*g.to.sign >= 0 {
		return nil
	}
	low, high := 0.0, 1.0
	for range 40 {
		mid := (low + high) / 2
		p, ok := t.within(g, mid)
		if !ok {
			p = &place{u: g.from.step(mid * g.length), weight: g.from.weight}
		}
		if c, ok := locateCrossing(t.f, p.u, p.weight); ok && g.holds(c.u) {
			return t.meetingSpot(g, c)
		}
		if !ok {
			return nil
		}
		if p.sign == g.from.sign {
			low = mid
		} else {
			high = mid
		}
	}
	return nil
}

func (t *tracer) meetingSpot(g segment, c *crossing) *spot {
	m := c.mark(t.f)
	own := c.own(g)
	m.Turns = own != nil && math.Abs(own[t.f.n]) < flatKnob
	return &spot{u: c.u, weight: c.weight, values: t.f.eigenvalues(c.u, c.weight), mark: &m, meeting: c}
}

// own is the direction of the branch that the segment lies on; nil where the
// directions are not known.
func (c *crossing) own(g segment) []float64 {
	var best []float64
	most := -1.0
	for _, d := range c.directions {
		if v := math.Abs(floats.Dot(d, g.from.tangentIn(c.weight))); v > most {
			best, most = d, v
		}
	}
	return best
}

// turnOn finds the point of the segment where the branch turns back in the knob: a
// fold or, where the turn is not transversal, a place where branches meet.
func (t *tracer) turnOn(g segment) spot {
	n := t.f.n
	slope := func(p *place) float64 { return p.tangent[n] }
	a, b := slope(g.from), slope(g.to)
	if p, ok := t.within(g, a/(a-b)); ok {
		if d, ok := locateFold(t.f, p.u, p.weight); ok && g.holds(d.u) && d.transversal >= leastTransversal {
			return t.foldSpot(d)
		}
	}
	p, ok := t.zero(g, a, b, slope)
	if !ok {
		p = g.to
	}
	if d, ok := locateFold(t.f, p.u, p.weight); ok && g.holds(d.u) && d.transversal >= leastTransversal {
		return t.foldSpot(d)
	}
	if c, ok := locateCrossing(t.f, p.u, p.weight); ok && g.holds(c.u) {
		return *t.meetingSpot(g, c)
	}
	s := t.spotAt(p.u, p.weight)
	s.mark = t.endMark(p.u, Crossing, "")
	s.mark.Turns = true
	return s
}

func (t *tracer) foldSpot(d *fold) spot {
	m := d.mark(t.f)
	s := t.spotAt(d.u, d.weightIn(t.ruler))
	s.mark = &m
	return s
}

func (d *fold) weightIn(r *ruler) []float64 { return r.weights(d.u) }

// leastFrequency is the frequency, relative to the fastest rate, below which a pair
// counts as real: rounding splits a double eigenvalue into a pair by about its root.
const leastFrequency = 1e-7

// hopfOn finds the point of the segment where a complex pair crosses.
func (t *tracer) hopfOn(g segment, before, after []complex128) (spot, bool) {
	a, _ := pairs(before)
	b, _ := pairs(after)
	if !(a*b < 0) || math.IsInf(a, 0) || math.IsInf(b, 0) {
		return spot{}, false
	}
	p, ok := t.zero(g, a, b, func(q *place) float64 {
		v, _ := pairs(t.f.eigenvalues(q.u, q.weight))
		return v
	})
	if !ok {
		return spot{}, false
	}
	s := t.spotAt(p.u, p.weight)
	_, frequency := pairs(s.values)
	fastest := 0.0
	for _, v := range s.values {
		fastest = max(fastest, math.Hypot(real(v), imag(v)))
	}
	if frequency <= leastFrequency*fastest { // real ones: of opposite sign, or both 0
		return spot{}, false
	}
	s.mark = t.endMark(p.u, Hopf, "")
	s.mark.Frequency = frequency
	return s, true
}

// changeOn finds, by bisection, where the number of unstable directions changes and
// neither a determinant nor a pair tells why: several eigenvalues pass 0 at once, as
// they do where symmetric branches meet. before is the number at the segment's start.
func (t *tracer) changeOn(g segment, before int) (spot, bool) {
	low, high := 0.0, 1.0
	var at *place
	for high-low > 1e-12 {
		mid := (low + high) / 2
		p, ok := t.within(g, mid)
		if !ok {
			break
		}
		at = p
		if unstable(t.f.eigenvalues(p.u, p.weight)) == before {
			low = mid
		} else {
			high = mid
		}
	}
	if at == nil {
		return spot{}, false
	}
	s := t.spotAt(at.u, at.weight)
	s.mark = t.endMark(at.u, Crossing, "")
	s.mark.Text = "several eigenvalues pass 0 at once"
	return s, true
}

// kinkOn finds the point of the segment where the kink's sides change over.
func (t *tracer) kinkOn(g segment, k kink) (spot, bool) {
	a, b := t.f.side(k, g.from.u), t.f.side(k, g.to.u)
	if !(a*b < 0) {
		return spot{}, false
	}
	p, ok := t.zero(g, a, b, func(q *place) float64 { return t.f.side(k, q.u) })
	if !ok {
		return spot{}, false
	}
	s := t.spotAt(p.u, p.weight)
	s.mark = t.endMark(p.u, Kink, "")
	s.mark.Text = t.f.text(k)
	return s, true
}
