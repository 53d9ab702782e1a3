package deterministic

import (
	"math"
	"slices"
)

// farFlows follows the flow from the design's start, from the upper corner of the
// box, and from ten times that, to learn whether amounts run away or keep moving
// where no resting state is.
func (f *finder) farFlows() {
	net := f.w.sys.net
	points := [][]float64{net.Amounts(nil, net.StartCounts())}
	for _, times := range []float64{1, 10} {
		x := make([]float64, f.whole.n)
		for i, v := range f.high {
			x[i] = times * max(v, 1/f.w.sys.unit[i])
		}
		if x = f.whole.project(x); x != nil {
			points = append(points, x)
		}
	}
	for _, x := range points {
		f.flowToRest(f.whole, x)
	}
}

// loosen looks on a face whose own reactions conserve more than the start fixes:
// if flows come to rest there with its species present, they do so on a continuum.
func (f *finder) loosen(face face) {
	if !face.loose || f.drifting != nil {
		return
	}
	seeds := &seeder{c: face.class, low: f.low, high: f.high, floor: f.resolution}
	for k := range leastFlows {
		x := seeds.point(k)
		if x == nil {
			return
		}
		g := newIntegrator(f.w, searchTolerance, f.resolution)
		still := 0
		end, _ := g.follow(f.ctx, x, f.limit, searchSteps, func(moved float64) bool {
			if still++; moved > atStandstill {
				still = 0
			}
			return still >= 20
		})
		if end == flowSettled && f.present(face.class, x) {
			f.drift(face.class, x)
			return
		}
	}
}

// linger notes where a flow came to rest, with every species present, on no
// separate state; two such places apart make a continuum.
func (f *finder) linger(c *class, x []float64) {
	if f.drifting != nil || !f.present(c, x) {
		return
	}
	if f.lingering == nil {
		f.lingering = slices.Clone(x)
		return
	}
	for i, v := range x {
		if abs(v-f.lingering[i]) > 1e-3*(v+f.resolution[i]) {
			f.drift(c, x)
			return
		}
	}
}

// present tells whether every species that the face does not freeze is there.
func (f *finder) present(c *class, x []float64) bool {
	for _, i := range c.free() {
		if x[i] < 1e-3*f.resolution[i] {
			return false
		}
	}
	return true
}

// drift notes that resting states near x form a continuum on the class; nil: near
// the degenerate state found last.
func (f *finder) drift(c *class, x []float64) {
	if x == nil {
		x = f.found[len(f.found)-1].x
	}
	e := &ContinuumError{Amounts: slices.Clone(x)}
	d := make([]float64, c.n)
	if r := f.w.examine(c, slices.Clone(x), f.resolution); r != nil {
		if slow := f.slowDirection(c, r); slow != nil {
			d = slow
		}
	}
	for _, i := range c.free() {
		if norm(d) == 0 || abs(d[i]) > 1e-3 {
			e.Species = append(e.Species, f.w.sys.net.Species[i].Name)
		}
	}
	f.drifting = e
}

// manyDegenerate is the number of distinct degenerate states on one face from
// which on they count as one continuum: each alone takes one coincidence.
const manyDegenerate = 5

func (f *finder) many(c *class) bool {
	count := 0
	for _, r := range f.found {
		if r.face == c && r.kind == Degenerate {
			count++
		}
	}
	return count >= manyDegenerate
}

// flat tells whether the rate along a line is 0 to within rounding at nine points
// of a piece.
func (f *finder) flat(l *line, p piece) bool {
	x, bound := make([]float64, l.c.n), make([]float64, l.c.n)
	i := l.c.independent[0]
	for k := range 9 {
		l.at(p.from+(p.to-p.from)*(float64(k)+0.5)/9, x)
		f.w.sys.turnover(x, f.w.f, f.w.gross)
		f.w.sys.rounding(x, bound)
		if !(abs(f.w.f[i]) <= math.Max(bound[i], 4*epsilon*f.w.gross[i])) {
			return false
		}
	}
	return true
}
