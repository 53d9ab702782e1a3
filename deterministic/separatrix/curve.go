package separatrix

import (
	"context"
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"

	"holdfast/deterministic"
	"holdfast/model"
)

// Options steers Trace, Manifold and Measure. The zero value is right for nearly
// all designs.
type Options struct {
	// Low and High are the box of amounts, one value a species; nil: from 0 to the
	// upper end of the map's box.
	Low, High []float64
	// Spacing is the distance of the points of a curve, relative to each amount or,
	// where that is larger, to a hundredth of the box; 0: 0.02.
	Spacing float64
	// Tolerance is the largest error of one step in the same measure; 0: 1e-10.
	Tolerance float64
	// Points is the most points on one side of a curve; 0: 20000.
	Points int
	// Lines is the number of lines that the box is cut along to measure basins by
	// the curves; 0: 200. Samples is the number of points by which they are measured
	// where there are no curves; 0: 2000.
	Lines, Samples int
}

func (o Options) withDefaults() Options {
	if o.Spacing == 0 {
		o.Spacing = 0.02
	}
	if o.Tolerance == 0 {
		o.Tolerance = 1e-10
	}
	for _, d := range []struct {
		field *int
		value int
	}{{&o.Points, 20000}, {&o.Lines, 200}, {&o.Samples, 2000}} {
		if *d.field == 0 {
			*d.field = d.value
		}
	}
	return o
}

// Ending says why one side of a curve ends.
type Ending uint8

// The ways in which a curve ends.
const (
	// AtEdge: it reaches the edge of the box.
	AtEdge Ending = iota
	// AtState: it comes out of a resting state that repels, or out of a saddle.
	AtState
	// WindsOn: it neither leaves the box nor comes to rest: it winds, towards a cycle
	// say, until the most points were made.
	WindsOn
)

// String names it in words.
func (e Ending) String() string {
	switch e {
	case AtEdge:
		return "edge of the box"
	case AtState:
		return "resting state"
	case WindsOn:
		return "winds on"
	}
	return fmt.Sprintf("Ending(%d)", uint8(e))
}

// An End is one end of a curve.
type End struct {
	Ending Ending
	// Species is the one that meets the edge of the box; empty otherwise.
	Species string
}

// A Curve is the stable manifold of a saddle: the points that flow into it, which
// part the basins on its two sides.
type Curve struct {
	// Saddle is the saddle's name.
	Saddle string
	// Points are amounts by species, from one end to the other through the saddle,
	// which is Points[At].
	Points [][]float64
	At     int
	// Ends says how the curve ends at its first and last point.
	Ends [2]End
}

// Trace gives the separatrices of a map whose class has two dimensions: the stable
// manifold of every saddle, both sides, to the edge of the box.
//
// Errors are *DimensionError, *BoxError, *SaddleError, and ctx's.
func Trace(ctx context.Context, m *deterministic.Map, o Options) ([]Curve, error) {
	b, err := newBox(m.Network, o.Low, o.High, m.High)
	if err != nil {
		return nil, err
	}
	o.Low, o.High = b.low, b.high
	if d := len(m.Network.Species) - len(m.Totals); d != 2 {
		return nil, &DimensionError{d}
	}
	var out []Curve
	for _, s := range m.States {
		if s.Kind != deterministic.Saddle || !b.holds(s.Amounts) {
			continue
		}
		c, err := Manifold(ctx, m.Network, s.Amounts, o)
		if err != nil {
			return nil, err
		}
		c.Saddle = s.Name
		out = append(out, c)
	}
	return out, nil
}

// Manifold gives the stable manifold of the saddle with the given amounts, both
// sides, to the edge of the box, which Options must state. It is integrated backward
// in time from both sides of the saddle along the stable eigenvector; the error of
// that start, of second order in its distance, dies away, since backward in time
// the manifold attracts (Parker and Chua, Practical Numerical Algorithms for Chaotic
// Systems, Springer 1989, ch. 6; from memory).
//
// Errors are *DimensionError, *BoxError, *SaddleError, and ctx's.
func Manifold(ctx context.Context, n *model.Network, saddle []float64, o Options) (Curve, error) {
	o = o.withDefaults()
	b, err := newBox(n, o.Low, o.High, nil)
	if err != nil {
		return Curve{}, err
	}
	if d := len(n.Species) - len(n.Conserved()); d != 2 {
		return Curve{}, &DimensionError{d}
	}
	f := newFlow(n, b)
	direction, err := f.stable(saddle)
	if err != nil {
		return Curve{}, err
	}
	t := tracer{ctx: ctx, f: f, box: b, options: o}
	back, first, err := t.side(saddle, direction, -1)
	if err != nil {
		return Curve{}, err
	}
	forth, last, err := t.side(saddle, direction, 1)
	if err != nil {
		return Curve{}, err
	}
	slices.Reverse(back)
	c := Curve{Saddle: "saddle", At: len(back), Ends: [2]End{first, last}}
	c.Points = append(append(back, slices.Clone(saddle)), forth...)
	return c, nil
}

// stable gives the stable direction of the saddle, of length 1 in the local measure.
func (f *flow) stable(saddle []float64) ([]float64, error) {
	n := len(saddle)
	a := deterministic.Jacobian(f.net, saddle)
	for i := range n {
		for j := range n {
			a[i*n+j] *= f.unit(j, saddle[j]) / f.unit(i, saddle[i])
		}
	}
	var e mat.Eigen
	if !finite(a) || !e.Factorize(mat.NewDense(n, n, a), mat.EigenRight) {
		return nil, &SaddleError{saddle, "the derivatives of the laws are not finite"}
	}
	values := e.Values(nil)
	var vectors mat.CDense
	e.VectorsTo(&vectors)
	least := 0
	up := false
	for k, v := range values {
		if real(v) < real(values[least]) {
			least = k
		}
		up = up || real(v) > 0
	}
	if !up || !(real(values[least]) < 0) || imag(values[least]) != 0 {
		return nil, &SaddleError{saddle, fmt.Sprintf("not a saddle: its eigenvalues are %.4g", values)}
	}
	out := make([]float64, n)
	for i := range n {
		out[i] = real(vectors.At(i, least)) * f.unit(i, saddle[i])
	}
	scale := 1 / f.length(saddle, out)
	for i := range out {
		out[i] *= scale
	}
	return out, nil
}

func finite(v []float64) bool {
	return !slices.ContainsFunc(v, func(e float64) bool { return !(math.Abs(e) <= math.MaxFloat64) })
}

// tracer follows one side of a manifold.
type tracer struct {
	ctx     context.Context
	f       *flow
	box     box
	options Options
}

// startAway is how far from the saddle a side is started, in the local measure: the
// square of it is the error of the start.
const startAway = 1e-5

// side follows one side from the saddle, sign −1 or 1, and gives its points in the
// order in which they are met, the saddle left out.
func (t *tracer) side(saddle, direction []float64, sign float64) ([][]float64, End, error) {
	x := slices.Clone(saddle)
	for i, d := range direction {
		x[i] += sign * startAway * d
	}
	if i := t.box.beyond(x); i >= 0 {
		return nil, End{AtEdge, t.f.net.Species[i].Name}, nil
	}
	s := newStepper(t.f, t.options.Tolerance)
	var points [][]float64
	h, gap := startAway, startAway // gap: the length since the last point
	for steps := 0; len(points) < t.options.Points && steps < 20*t.options.Points; steps++ {
		if steps%64 == 0 && t.ctx.Err() != nil {
			return nil, End{}, t.ctx.Err()
		}
		made, next := s.advance(x, min(h, t.options.Spacing-gap))
		if made == 0 || s.turnsBack() {
			return append(points, x), End{Ending: AtState}, nil
		}
		if i := t.box.beyond(s.next); i >= 0 {
			return append(points, t.edge(s, x, made)), End{AtEdge, t.f.net.Species[i].Name}, nil
		}
		copy(x, s.next)
		h, gap = next, gap+made
		if gap >= t.options.Spacing*(1-1e-9) {
			points, gap = append(points, slices.Clone(x)), 0
		}
	}
	return points, End{Ending: WindsOn}, nil
}

// edge gives the point on the edge of the box that the step of length h from x
// passes, by halving the step.
func (t *tracer) edge(s *stepper, x []float64, h float64) []float64 {
	low, high := 0.0, h
	for range 60 {
		mid := (low + high) / 2
		s.try(x, mid)
		if t.box.holds(s.next) {
			low = mid
		} else {
			high = mid
		}
	}
	s.try(x, high)
	out := slices.Clone(s.next)
	for i, v := range out { // to the last bit
		out[i] = min(max(v, t.box.low[i]), t.box.high[i])
	}
	return out
}
