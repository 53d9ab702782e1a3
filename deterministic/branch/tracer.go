package branch

import (
	"context"
	"fmt"
	"math"

	"gonum.org/v1/gonum/floats"
)

// spot is a point of a traced branch.
type spot struct {
	u, weight []float64
	values    []complex128
	mark      *Mark
	meeting   *crossing // where branches meet
}

// tracer traces branches in one knob.
type tracer struct {
	frame
	ctx   context.Context
	knob  Knob
	kinks []kink
}

// path is one run along a branch from its start, which it leaves out.
type path struct {
	t      *tracer
	start  *place
	spots  []spot
	last   spot
	count  int
	closed bool
}

// trace runs along the branch from the start in the direction of its tangent.
func (t *tracer) trace(start *place) (*path, error) {
	p := &path{t: t, start: start, last: t.spotAt(start.u, start.weight)}
	if t.leaving(start) {
		p.last.mark = t.endMark(start.u, RangeEnd, "")
		return p, nil
	}
	at := start
	for {
		last, end := t.follow(t.ctx, at, p.visit)
		switch end {
		case pathStopped:
			return p, nil
		case pathCancelled:
			return p, t.ctx.Err()
		case pathSpent:
			p.lose(last, fmt.Sprintf("not at an end after %d steps", t.most))
			return p, nil
		case pathStuck:
			next, mark, ok := t.corner(last)
			if !ok {
				p.lose(last, "no step along it succeeds: a law is not finite or not smooth there, or branches touch")
				return p, nil
			}
			s := t.spotAt(mark.u, mark.weight)
			s.mark = mark.mark
			p.push(s)
			p.last.values = nil // they are another on either side
			at = next
		}
	}
}

// leaving tells whether a start at an end of the knob's range heads out of it.
func (t *tracer) leaving(p *place) bool {
	v, d := p.u[t.f.n], p.tangent[t.f.n]
	return (v >= t.knob.High && d > 0) || (v <= t.knob.Low && d < 0)
}

// push takes in a spot; a knob that rounding has put outside its range is put back.
func (p *path) push(s spot) {
	n, k := p.t.f.n, p.t.knob
	if v := min(max(s.u[n], k.Low), k.High); v != s.u[n] {
		s.u[n] = v
		if s.mark != nil {
			s.mark.Knob = v
		}
	}
	p.spots = append(p.spots, s)
	p.last = s
}

func (p *path) lose(at *place, text string) {
	s := p.t.spotAt(at.u, at.weight)
	s.mark = p.t.endMark(at.u, Lost, "")
	s.mark.Text = text
	p.push(s)
}

func (t *tracer) spotAt(u, weight []float64) spot {
	return spot{
		u: append([]float64(nil), u...), weight: append([]float64(nil), weight...),
		values: t.f.eigenvalues(u, weight),
	}
}

func (t *tracer) endMark(u []float64, kind Kind, species string) *Mark {
	return &Mark{Kind: kind, Knob: u[t.f.n], Amounts: append([]float64(nil), u[:t.f.n]...), Species: species}
}

// visit takes in one step; true where the branch ends in it.
func (p *path) visit(g segment) bool {
	p.count++
	t := p.t
	if p.count > 2 && t.returns(g, p.start) {
		p.closed = true
		return true
	}
	end := t.cut(&g)
	to := t.spotAt(g.to.u, g.to.weight)
	to.mark = end
	for _, s := range t.events(g, p.last.values, to.values) {
		if end != nil && s.meeting != nil && distance(s.u, to.u, to.weight) < closeBy {
			to = s // the branch ends where it meets another
			continue
		}
		p.push(s)
	}
	if end != nil && end.Kind == Emptied && to.meeting == nil {
		if c, ok := locateCrossing(t.f, to.u, to.weight); ok && distance(c.u, to.u, to.weight) < nearEnd {
			to = *t.meetingSpot(g, c)
		}
	}
	p.push(to)
	return end != nil
}

// nearEnd is how near to the point where an amount reaches 0 a crossing counts as
// that point, which by itself is only found to the root of rounding there.
const nearEnd = 1e-5

// cut ends the segment where it leaves the frame and gives the mark of that end;
// nil where it does not leave.
func (t *tracer) cut(g *segment) *Mark {
	e := t.boundary(g)
	if e == nil {
		return nil
	}
	m := t.endMark(g.to.u, e.kind, t.species(e))
	if e.kind == Lost {
		m.Text = "the edge just ahead cannot be reached: a law is not finite or not smooth there"
	}
	return m
}

// corner is a sharp turn of the branch at a kink.
type corner struct {
	u, weight []float64
	mark      *Mark
}

// corner looks for a kink just ahead of p at which the branch turns sharply, and
// gives the place on its far side, with the tangent there.
func (t *tracer) corner(p *place) (*place, corner, bool) {
	for _, k := range t.kinks {
		u := append([]float64(nil), p.u...)
		if !newton(&kinkSystem{t.f, k}, u, p.weight) || distance(u, p.u, p.weight) > longestStep {
			continue
		}
		if next, ok := t.beyond(p, u, k); ok {
			m := t.endMark(u, Kink, "")
			m.Text = t.f.text(k)
			m.Turns = math.Signbit(p.tangent[t.f.n]) != math.Signbit(next.tangent[t.f.n])
			return next, corner{u, p.weight, m}, true
		}
	}
	return nil, corner{}, false
}

// beyond gives the place at u with the tangent that the branch has on the far side
// of the kink: the derivatives are taken a little further along the old tangent.
func (t *tracer) beyond(p *place, u []float64, k kink) (*place, bool) {
	const nudge = 1e-7
	grad := make([]float64, len(u))
	t.f.sideGradient(k, u, grad)
	heading := func(q *place) float64 {
		sum := 0.0
		for j := range grad {
			sum += grad[j] * q.tangent[j] * q.weight[j]
		}
		return sum
	}
	probe := append([]float64(nil), u...)
	for j := range probe {
		probe[j] += nudge * p.tangent[j] * p.weight[j]
	}
	weight := t.ruler.weights(u)
	q, ok := t.at(probe, weight, p.tangentIn(weight))
	if !ok {
		return nil, false
	}
	if heading(q)*heading(p) < 0 {
		floats.Scale(-1, q.tangent)
		q.sign = -q.sign
	}
	q.u = append([]float64(nil), u...)
	return q, true
}
