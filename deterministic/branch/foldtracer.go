package branch

import (
	"context"
	"slices"

	"holdfast/model"
)

// foldTracer traces fold curves.
type foldTracer struct {
	frame
	ctx     context.Context
	system  *foldSystem
	diagram *FoldDiagram
	traced  [][][]float64
	floor   []float64
	steps   int
}

func newFoldTracer(ctx context.Context, n *model.Network, d *FoldDiagram, high, floor []float64, o Options) *foldTracer {
	knobs := []Knob{d.First, d.Second}
	f := newField(n, knobs...)
	t := &foldTracer{ctx: ctx, diagram: d, floor: floor, steps: o.Steps}
	t.frame = frame{f: f, knobs: knobs, high: high}
	t.follower = follower{ruler: newRuler(floor, knobs), most: o.Steps}
	return t
}

// traceAll traces the curve of every fold that is not on one already.
func (t *foldTracer) traceAll(folds [][]float64) error {
	for _, u := range folds {
		weight := t.ruler.weights(u)
		s, ok := newFoldSystem(t.f, u, weight)
		if !ok {
			continue
		}
		t.system = s
		t.corrector = newCorrector(s)
		last := len(u) - 1
		if !t.hold(u, weight, last, u[last]) || t.known(u) || !s.renew(u, weight) {
			continue
		}
		direction := make([]float64, len(u))
		direction[last] = 1
		start, ok := t.at(u, weight, direction)
		if !ok {
			continue
		}
		if err := t.both(start); err != nil {
			return err
		}
	}
	return nil
}

func (t *foldTracer) known(u []float64) bool {
	for _, c := range t.traced {
		for i := range len(c) - 1 {
			if t.passes(c[i], c[i+1], u) {
				return true
			}
		}
	}
	return false
}

// run is one run along a fold curve.
type run struct {
	t      *foldTracer
	start  *place
	points [][]float64
	cusps  []bool
	end    CurveEnd
	count  int
}

// both traces a curve to both sides of a start.
func (t *foldTracer) both(start *place) error {
	forth, err := t.trace(start)
	if err != nil {
		return err
	}
	back := &run{end: forth.end}
	if forth.end.Kind != Closed {
		if back, err = t.trace(start.reversed()); err != nil {
			return err
		}
	}
	slices.Reverse(back.points)
	slices.Reverse(back.cusps)
	points := append(append(back.points, start.u), forth.points...)
	cusps := append(append(back.cusps, false), forth.cusps...)
	curve := FoldCurve{Ends: [2]CurveEnd{back.end, forth.end}}
	n := t.f.n
	for i, u := range points {
		curve.Points = append(curve.Points, FoldPoint{u[n], u[n+1], slices.Clone(u[:n]), cusps[i]})
	}
	if forth.end.Kind == Closed {
		curve.Points = append(curve.Points, curve.Points[0])
		points = append(points, points[0])
	}
	t.traced = append(t.traced, points)
	t.diagram.Curves = append(t.diagram.Curves, curve)
	return nil
}

// trace runs along the curve from the start in the direction of its tangent.
func (t *foldTracer) trace(start *place) (*run, error) {
	r := &run{t: t, start: start}
	if end := t.leavingRange(start); end != "" {
		r.end = CurveEnd{Kind: RangeEnd, Knob: end}
		return r, nil
	}
	if !t.system.renew(start.u, start.weight) {
		r.end = CurveEnd{Kind: Lost, Text: "the equations are not finite"}
		return r, nil
	}
	_, end := t.follow(t.ctx, start, r.visit)
	switch end {
	case pathCancelled:
		return nil, t.ctx.Err()
	case pathSpent:
		r.end = CurveEnd{Kind: Lost, Text: "the most steps were made"}
	case pathStuck:
		r.end = CurveEnd{Kind: Lost, Text: "no step along the curve succeeds"}
	case pathStopped:
	}
	return r, nil
}

// leavingRange names the knob whose range the start, on its end, heads out of.
func (t *foldTracer) leavingRange(p *place) string {
	for i, k := range t.knobs {
		v, d := p.u[t.f.n+i], p.tangent[t.f.n+i]
		if (v >= k.High && d > 0) || (v <= k.Low && d < 0) {
			return k.Name
		}
	}
	return ""
}

func (r *run) visit(g segment) bool {
	r.count++
	t := r.t
	if r.count > 2 && t.returns(g, r.start) {
		r.end.Kind = Closed
		return true
	}
	e := t.boundary(&g)
	if p, ok := t.cuspOn(g); ok {
		r.points, r.cusps = append(r.points, p.u), append(r.cusps, true)
	}
	r.points, r.cusps = append(r.points, g.to.u), append(r.cusps, false)
	if e != nil {
		r.end = CurveEnd{Kind: e.kind, Species: t.species(e)}
		if e.kind == Lost {
			r.end.Text = "the edge just ahead cannot be reached"
		}
		if e.kind == RangeEnd {
			r.end.Knob = t.knobs[e.unknown-t.f.n].Name
		}
		return true
	}
	return !t.system.renew(g.to.u, g.to.weight)
}

// cuspOn finds the point of the segment where the fold's quadratic coefficient
// changes sign.
func (t *foldTracer) cuspOn(g segment) (*place, bool) {
	quadratic := func(p *place) float64 { return t.system.quadratic(p.u) }
	a, b := quadratic(g.from), quadratic(g.to)
	if !(a*b < 0) {
		return nil, false
	}
	return t.zero(g, a, b, quadratic)
}

// quadratic is wᵀF_xx v v with the bordered null vectors, in the ruler's units.
func (s *foldSystem) quadratic(u []float64) float64 {
	n := s.f.n
	s.f.evaluate(u, make([]float64, n), s.jac)
	right, left, _, ok := s.bordered()
	if !ok {
		return 0
	}
	d := make([]float64, n)
	for j := range n {
		d[j] = right[j] * s.weight[j]
	}
	sum := 0.0
	for i, e := range s.f.expand(u, d) {
		sum += left[i] * s.scale[i] * 2 * e[2]
	}
	return sum
}
