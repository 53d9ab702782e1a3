package separatrix

import (
	"context"
	"fmt"
	"math"
	"slices"

	"gonum.org/v1/gonum/floats"

	"holdfast/deterministic"
)

// Method is how basins were measured.
type Method uint8

// The methods.
const (
	// ByCurves: the box was cut along lines, and the lines at the separatrices.
	ByCurves Method = iota
	// BySample: points of a low-discrepancy sequence were labelled.
	BySample
)

// String names it in words.
func (m Method) String() string {
	switch m {
	case ByCurves:
		return "cut by the separatrix"
	case BySample:
		return "sampled"
	}
	return fmt.Sprintf("Method(%d)", uint8(m))
}

// Basins is the shares of the box's volume (on the compatibility class) that the
// basins of the stable states fill.
type Basins struct {
	// Shares and Errors have one entry for each of Map.Stable(). An error is that of
	// the cut into lines, or the half width of the 95 % interval of a sample
	// (Wilson, J. Am. Stat. Assoc. 22 (1927) 209), which for a low-discrepancy sample
	// is wide.
	Shares, Errors []float64
	// Unlabelled is the share from which the flow comes to rest at no stable state.
	Unlabelled float64
	Method     Method
	// Labels is the number of points that were labelled.
	Labels int
}

// Measure gives the basins' shares of the box. Where the class has two dimensions
// it cuts the box along the separatrices and labels the pieces; in any other number,
// or where a piece turns out to belong to several basins (as beside a cycle that
// repels), it labels a sample.
//
// Errors are *BoxError, *SaddleError, and ctx's.
func Measure(ctx context.Context, m *deterministic.Map, o Options) (Basins, error) {
	o = o.withDefaults()
	b, err := newBox(m.Network, o.Low, o.High, m.High)
	if err != nil {
		return Basins{}, err
	}
	g := &gauge{ctx: ctx, m: m, box: b, plane: newPlane(m), stable: len(m.Stable())}
	if len(g.plane.free) == 2 {
		curves, err := Trace(ctx, m, o)
		if err != nil {
			return Basins{}, err
		}
		if !slices.ContainsFunc(curves, Curve.endless) {
			if out, ok := g.byLines(curves, o.Lines); ok {
				return out, ctx.Err()
			}
		}
	}
	return g.bySample(o.Samples), ctx.Err()
}

// gauge measures basins.
type gauge struct {
	ctx    context.Context
	m      *deterministic.Map
	box    box
	plane  *plane
	stable int
	labels int
}

// label gives the basin of the point with these coordinates, or −1.
func (g *gauge) label(c ...float64) int {
	g.labels++
	x := g.plane.point(c)
	for i := range x {
		x[i] = max(x[i], 0) // rounding of the totals
	}
	s, err := g.m.BasinContext(g.ctx, x)
	if err != nil {
		return -1
	}
	return s
}

// byLines cuts the box along lines, halfway between equal strips of each panel;
// false where a piece between separatrices has several labels. Every third line is
// the middle of three strips: what the shares change by from those lines to all
// bounds their error, ninefold where they vary smoothly.
func (g *gauge) byLines(curves []Curve, lines int) (Basins, bool) {
	all, coarse := make([]float64, g.stable+1), make([]float64, g.stable+1)
	edges := g.panels(curves)
	span := edges[len(edges)-1] - edges[0]
	for p := range len(edges) - 1 {
		low, high := edges[p], edges[p+1]
		count := 3 * int(math.Ceil(float64(lines)/3*(high-low)/span))
		strip := (high - low) / float64(count)
		for k := range count {
			sums := make([]float64, g.stable+1)
			if g.ctx.Err() != nil || !g.cut(curves, low+(float64(k)+0.5)*strip, k%8 == 0, sums) {
				return Basins{}, g.ctx.Err() != nil
			}
			floats.AddScaled(all, strip, sums)
			if k%3 == 1 {
				floats.AddScaled(coarse, 3*strip, sums)
			}
		}
	}
	out, rough := g.result(ByCurves, all), g.result(ByCurves, coarse)
	for s := range out.Errors {
		out.Errors[s] = math.Abs(out.Shares[s] - rough.Shares[s])
	}
	return out, true
}

// samePanel is the share of the box below which two edges of panels are one.
const samePanel = 1e-6

// panels gives the edges, ascending, of the parts of the second coordinate's range
// in which the pieces of a line change smoothly from line to line: no curve ends,
// or turns back, within one.
func (g *gauge) panels(curves []Curve) []float64 {
	j := g.plane.free[1]
	low, high := g.box.low[j], g.box.high[j]
	edges := []float64{low, high}
	for _, c := range curves {
		for k, p := range c.Points {
			last, next := c.Points[max(k-1, 0)][j], c.Points[min(k+1, len(c.Points)-1)][j]
			if (p[j]-last)*(next-p[j]) <= 0 && p[j] > low && p[j] < high {
				edges = append(edges, p[j])
			}
		}
	}
	slices.Sort(edges)
	edges = slices.CompactFunc(edges, func(a, b float64) bool { return math.Abs(b-a) <= samePanel*(high-low) })
	edges[len(edges)-1] = high
	return edges
}

// result turns lengths or counts, that without a label last, into shares.
func (g *gauge) result(method Method, sums []float64) Basins {
	total := floats.Sum(sums)
	out := Basins{Method: method, Labels: g.labels, Errors: make([]float64, g.stable)}
	for _, v := range sums[:g.stable] {
		out.Shares = append(out.Shares, v/total)
	}
	out.Unlabelled = sums[g.stable] / total
	return out
}

// cut adds the lengths of one line's pieces by label; a probed line has each piece
// labelled in three places, which must agree.
func (g *gauge) cut(curves []Curve, b float64, probe bool, sums []float64) bool {
	low, high := g.plane.line(g.box, b)
	cuts := append(g.crossings(curves, b, low, high), high)
	for _, c := range cuts {
		if c <= low {
			continue
		}
		label := g.label((low+c)/2, b)
		for _, share := range []float64{0.1, 0.9} {
			if probe && g.label(low+share*(c-low), b) != label {
				return false
			}
		}
		if label < 0 {
			label = g.stable
		}
		sums[label] += c - low
		low = c
	}
	return true
}

// crossings lists, ascending, where the curves cross the line on which the second
// coordinate is b, between low and high.
func (g *gauge) crossings(curves []Curve, b, low, high float64) []float64 {
	return slices.DeleteFunc(g.plane.crossings(curves, b), func(a float64) bool { return a <= low || a >= high })
}
