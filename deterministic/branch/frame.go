package branch

import (
	"slices"

	"gonum.org/v1/gonum/floats"
)

// frame is a follower that stays within the knobs' ranges and the box of amounts.
type frame struct {
	follower
	f     *field
	knobs []Knob
	high  []float64
}

// closeBy is the distance, in the ruler's units, of what counts as one point.
const closeBy = 1e-6

// returns tells whether the segment comes back to the start.
func (t *frame) returns(g segment, start *place) bool {
	s := g.share(start.u)
	if s <= 0 || s > 1 || distance(start.u, g.from.u, g.from.weight) > 1.5*g.length {
		return false
	}
	p, ok := t.within(g, s)
	return ok && distance(p.u, start.u, p.weight) < closeBy && floats.Dot(start.tangentIn(p.weight), p.tangent) > 0
}

// edge is a limit that a step has crossed.
type edge struct {
	unknown int
	value   float64
	kind    Kind
	share   float64
}

// species names the one that meets the edge; empty for a knob.
func (t *frame) species(e *edge) string {
	if e.unknown >= t.f.n {
		return ""
	}
	return t.f.net.Species[e.unknown].Name
}

// boundary cuts the segment where it first leaves the knobs' ranges or the box; nil
// where it does not leave. Where the edge itself cannot be reached, the segment is
// cut to nothing and the edge's kind is Lost.
func (t *frame) boundary(g *segment) *edge {
	first := t.firstEdge(g)
	if first == nil {
		return nil
	}
	q, ok := t.edgePlace(*g, first)
	if !ok {
		q, first.kind = g.from, Lost
	}
	*g = segment{g.from, q, g.length * min(max(g.share(q.u), 0), 1)}
	return first
}

func (t *frame) firstEdge(g *segment) *edge {
	var first *edge
	n := t.f.n
	check := func(j int, value, beyond float64, kind Kind) {
		if beyond <= 0 {
			return
		}
		share := 0.0
		if d := g.to.u[j] - g.from.u[j]; d != 0 {
			share = (value - g.from.u[j]) / d
		}
		if first == nil || share < first.share {
			first = &edge{j, value, kind, share}
		}
	}
	for k, knob := range t.knobs {
		check(n+k, knob.Low, knob.Low-g.to.u[n+k], RangeEnd)
		check(n+k, knob.High, g.to.u[n+k]-knob.High, RangeEnd)
	}
	for i := range n {
		check(i, 0, -g.to.u[i]-1e-9*t.ruler.floor[i], Emptied)
		check(i, t.high[i], g.to.u[i]-t.high[i], BoxEdge)
	}
	return first
}

// edgePlace gives the place where the segment meets the edge.
func (t *frame) edgePlace(g segment, e *edge) (*place, bool) {
	u := g.from.step(e.share * g.length)
	if q, ok := t.within(g, e.share); ok {
		u = q.u
	}
	for i := range t.f.n {
		u[i] = max(u[i], 0)
	}
	if t.hold(u, g.from.weight, e.unknown, e.value) && g.holds(u) {
		weight := t.ruler.weights(u)
		if q, ok := t.at(u, weight, g.from.tangentIn(weight)); ok {
			return q, true
		}
		return &place{u: u, weight: weight, tangent: g.from.tangentIn(weight), sign: g.from.sign}, true
	}
	q, ok := t.zero(g, g.from.u[e.unknown]-e.value, g.to.u[e.unknown]-e.value, func(p *place) float64 {
		return p.u[e.unknown] - e.value
	})
	if ok {
		q.u[e.unknown] = e.value
	}
	return q, ok
}

// passes tells whether the curve between its points p and q goes through u: the
// point of the curve in the plane through u across the chord is compared with it.
func (t *frame) passes(p, q, u []float64) bool {
	weight := t.ruler.weights(u)
	chord := distance(p, q, weight)
	if chord == 0 || distance(p, u, weight) > 1.2*chord {
		return distance(p, u, weight) < closeBy
	}
	row := make([]float64, len(u))
	share := 0.0
	for j := range row {
		row[j] = (q[j] - p[j]) / weight[j] / chord
		share += row[j] * (u[j] - p[j]) / weight[j] / chord
	}
	if share < -0.05 || share > 1.05 {
		return false
	}
	v := make([]float64, len(u))
	for j := range v {
		v[j] = p[j] + share*(q[j]-p[j])
	}
	guess := slices.Clone(v)
	_, ok := t.correct(v, weight, row)
	return ok && distance(v, guess, weight) <= sagitta*chord+closeBy && distance(u, v, weight) < closeBy
}

// sagitta bounds how far a curve bends away from the chord of a step.
const sagitta = 0.2
