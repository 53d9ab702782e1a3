package branch

import (
	"context"
	"math"
)

// Limits of a step, in units of the ruler: about the relative change of the
// unknowns. firstStep to longestStep are the distance along the tangent; the angle
// between tangents at its ends is steered to goodAngle and refused beyond
// widestAngle, as is a correction of more than driftShare of the step.
const (
	firstStep    = 0.01
	shortestStep = 1e-9
	longestStep  = 0.2
	goodAngle    = 0.12
	widestAngle  = 0.4
	driftShare   = 0.3
	mostNewton   = 6
)

// segment is one step of a followed curve.
type segment struct {
	from, to *place
	length   float64 // of the step along from's tangent
}

// follower follows a curve step by step.
type follower struct {
	*corrector
	ruler *ruler
	turns []int // unknowns whose turning back must not be stepped over: the knobs
	most  int   // steps
}

// pathEnd says why following stopped.
type pathEnd uint8

const (
	pathStopped pathEnd = iota // visit said so
	pathStuck                  // no step short enough succeeds
	pathSpent                  // the most steps were made
	pathCancelled
)

// follow steps along the curve from a place until visit, called after each step,
// says stop. It gives the last place.
func (f *follower) follow(ctx context.Context, start *place, visit func(segment) bool) (*place, pathEnd) {
	p, h := start, firstStep
	for range f.most {
		if ctx.Err() != nil {
			return p, pathCancelled
		}
		s, ok := f.advance(p, h)
		if !ok {
			return p, pathStuck
		}
		if visit(s) {
			return s.to, pathStopped
		}
		angle := math.Acos(min(cosine(s.from, s.to), 1))
		h = min(s.length*min(max(goodAngle/angle, 0.5), 2), longestStep)
		p = s.to
	}
	return p, pathSpent
}

// advance makes one step of length h or, if that fails, of h/2, h/4, …
func (f *follower) advance(p *place, h float64) (segment, bool) {
	for ; h >= shortestStep; h /= 2 {
		if q, ok := f.reach(p, h); ok && f.smooth(p, q, h) {
			return segment{p, q, h}, true
		}
	}
	return segment{}, false
}

// reach gives the place where the plane at distance h across p's tangent meets
// the curve.
func (f *follower) reach(p *place, h float64) (*place, bool) {
	u := p.step(h)
	guess := append([]float64(nil), u...)
	steps, ok := f.correct(u, p.weight, p.tangent)
	if !ok || steps > mostNewton || distance(u, guess, p.weight) > driftShare*h {
		return nil, false
	}
	weight := f.ruler.weights(u)
	return f.at(u, weight, p.tangentIn(weight))
}

// smooth tells whether the step from p to q leaves nothing out: the tangents agree
// and no knob turns back twice in between.
func (f *follower) smooth(p, q *place, h float64) bool {
	if cosine(p, q) < math.Cos(widestAngle) {
		return false
	}
	for _, j := range f.turns {
		if h > 1e-4 && turnsTwice(p, q, j) {
			return false
		}
	}
	return true
}

// turnsTwice tells whether the cubic through both ends of a step, with their
// slopes, has two extrema of unknown j inside.
func turnsTwice(p, q *place, j int) bool {
	a, b := p.tangent[j]*p.weight[j], q.tangent[j]*q.weight[j]
	if a*b < 0 {
		return false
	}
	rise := q.u[j] - p.u[j]
	length := distance(q.u, p.u, p.weight)
	a, b = a*length, b*length
	if math.Abs(a)+math.Abs(b) == 0 {
		return false
	}
	// the slope along the step is a + 2(3·rise − 2a − b)s + 3(a + b − 2·rise)s²
	c1, c2 := 2*(3*rise-2*a-b), 3*(a+b-2*rise)
	if c2 == 0 {
		return false
	}
	s := -c1 / (2 * c2)
	if s <= 0 || s >= 1 {
		return false
	}
	return (a+c1*s+c2*s*s)*a < 0
}

// within gives the place at share s of the segment, 0 to 1.
func (f *follower) within(g segment, s float64) (*place, bool) {
	u := g.from.step(s * g.length)
	if _, ok := f.correct(u, g.from.weight, g.from.tangent); !ok {
		return nil, false
	}
	weight := f.ruler.weights(u)
	return f.at(u, weight, g.from.tangentIn(weight))
}

// share gives where u lies on the segment: 0 at its start, 1 at its end.
func (g segment) share(u []float64) float64 {
	sum := 0.0
	for j := range u {
		sum += g.from.tangent[j] * (u[j] - g.from.u[j]) / g.from.weight[j]
	}
	return sum / g.length
}

// holds tells whether u lies on the segment, give or take a tenth of its length.
func (g segment) holds(u []float64) bool {
	s := g.share(u)
	return s >= -0.1 && s <= 1.1 && distance(u, g.from.u, g.from.weight) <= 1.5*g.length
}

// zero finds the place on the segment where test changes sign, to rounding, by
// regula falsi with the Illinois rule (Dowell and Jarratt, BIT 11 (1971) 168);
// from and to are its values at the ends. false where a point in between cannot
// be had.
func (f *follower) zero(g segment, from, to float64, test func(*place) float64) (*place, bool) {
	low, high, side, last := 0.0, 1.0, 0, -1.0
	for range 100 {
		s := (low*to - high*from) / (to - from)
		p, ok := f.within(g, s)
		if !ok {
			return nil, false
		}
		v := test(p)
		switch {
		case math.IsNaN(v):
			return nil, false
		case v == 0, math.Abs(s-last) <= 1e-15:
			return p, true
		case (v > 0) == (to > 0):
			high, to = s, v
			if side == 1 {
				from /= 2
			}
			side = 1
		default:
			low, from = s, v
			if side == -1 {
				to /= 2
			}
			side = -1
		}
		last = s
	}
	return nil, false
}
