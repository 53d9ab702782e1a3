package separatrix

import (
	"context"
	"math"
	"slices"
	"sync"

	"holdfast/deterministic"
)

// rows labels lattice points of a class of two dimensions row by row: a row is the
// points with one count of the second free species. It is safe for concurrent use.
type rows struct {
	m      *deterministic.Map
	plane  *plane
	box    box
	curves []Curve
	mutex  sync.Mutex
	known  map[int64]*row
}

// row is the pieces of one row: labels[k] holds up to cuts[k], 0 where a piece has
// several labels.
type row struct {
	once   sync.Once
	cuts   []float64
	labels []int32
}

// rowSpacing is the spacing of the curves' points, besideCurve the distance from a
// curve within which its chords are not trusted, both in the local measure.
const (
	rowSpacing  = 0.005
	besideCurve = 0.003
)

// newRows traces the separatrices over twice the map's box; nil where the class has
// not two dimensions or a curve has no end.
func newRows(m *deterministic.Map) *rows {
	r := &rows{m: m, plane: newPlane(m), known: map[int64]*row{}}
	high := slices.Clone(m.High)
	for i := range high {
		high[i] *= 2
	}
	var err error
	if r.box, err = newBox(m.Network, nil, high, nil); err != nil {
		return nil
	}
	r.curves, err = Trace(context.Background(), m, Options{High: high, Spacing: rowSpacing})
	if err != nil || slices.ContainsFunc(r.curves, Curve.endless) {
		return nil
	}
	return r
}

// endless tells whether an end of the curve winds on.
func (c Curve) endless() bool { return c.Ends[0].Ending == WindsOn || c.Ends[1].Ending == WindsOn }

// label gives a point's label, or 0 where its row does not tell.
func (r *rows) label(counts []int64) int32 {
	for _, t := range r.m.Totals {
		sum := int64(0)
		for i, w := range t.Weights {
			sum += w * counts[i]
		}
		if sum != t.Value {
			return notLabelled
		}
	}
	x := r.m.Network.Amounts(nil, counts)
	if !r.box.holds(x) {
		return 0
	}
	i, j := r.plane.free[0], r.plane.free[1]
	unit := [2]float64{max(x[i], localShare*r.box.high[i]), max(x[j], localShare*r.box.high[j])}
	if r.plane.near(r.curves, x[i], x[j], besideCurve, unit) {
		return 0
	}
	w := r.row(counts[j], x[j])
	k, _ := slices.BinarySearch(w.cuts, x[i])
	return w.labels[min(k, len(w.labels)-1)]
}

// row gives the row at count k, amount b, of the second free species.
func (r *rows) row(k int64, b float64) *row {
	r.mutex.Lock()
	w := r.known[k]
	if w == nil {
		w = &row{}
		r.known[k] = w
	}
	r.mutex.Unlock()
	w.once.Do(func() { r.fill(w, b) })
	return w
}

// fill labels the pieces of a row, each in three places that must agree.
func (r *rows) fill(w *row, b float64) {
	g := &gauge{ctx: context.Background(), m: r.m, box: r.box, plane: r.plane}
	low, high := r.plane.line(r.box, b)
	w.cuts = append(g.crossings(r.curves, b, low, high), math.Inf(1))
	for k, c := range w.cuts {
		end := min(c, high)
		label := g.label((low+end)/2, b)
		if g.label(low+0.1*(end-low), b) != label || g.label(low+0.9*(end-low), b) != label {
			label = notLabelled
		}
		w.labels = append(w.labels, int32(label)+1)
		low = w.cuts[k]
	}
}
