package survey

import (
	"math"
	"slices"

	"holdfast/analysis/hold"
	"holdfast/deterministic/branch"
)

// The settings at which noise is worked out: the distance from the end falls from
// today's by halves, in rows of the report as many as noiseRows; between two rows
// there are noiseSteps points in the records.
const (
	noiseRows  = 11
	noiseSteps = 4
)

// addNoise works out the noise of the window's state from today to the end.
func (t *turning) addNoise(w *branch.Window, e *branch.End) {
	arc := t.arc(w)
	out := Noise{State: w.State, Toward: e.Mark.Kind.String(), End: hold.Value(e.Knob)}
	span := t.d.Today - e.Knob
	for k := range (noiseRows-1)*noiseSteps + 1 {
		left := span * math.Exp2(-float64(k)/noiseSteps)
		p, ok := t.at(w.Branch, arc, e.Knob+left)
		if !ok {
			continue
		}
		if k%noiseSteps == 0 {
			out.Rows = append(out.Rows, t.noiseRow(&p, left))
		}
	}
	if len(out.Rows) > 0 {
		t.out.Noise = append(t.out.Noise, out)
	}
}

func (t *turning) noiseRow(p *branch.Point, left float64) NoiseRow {
	r := t.network.Readout
	distance := math.NaN()
	if t.d.Today != 0 {
		distance = 100 * math.Abs(left) / t.d.Today
	}
	return NoiseRow{
		Knob: hold.Value(p.Knob), Distance: hold.Value(distance), Amount: hold.Value(p.Amounts[r]),
		Molecules: hold.Value(p.Amounts[r] * t.unit(r, p.Knob)), Deviation: hold.Value(p.SD(r)),
		SlowRate: hold.Value(p.SlowRate), CorrelationTime: hold.Value(p.CorrelationTime()),
	}
}

// unit gives the molecules in one unit of a species' amount at a setting of the knob.
func (t *turning) unit(species int, knob float64) float64 {
	turned := t.d.Knob.Name == "copies" && t.network.ConstantIndex("copies") < 0
	if turned && !t.network.Species[species].Fixed {
		return knob
	}
	return t.network.Unit(species)
}

// arc lists the points of the window's branch from its lower to its upper end, by the
// knob ascending.
func (t *turning) arc(w *branch.Window) []int {
	b := &t.d.Branches[w.Branch]
	for _, step := range []int{1, -1} {
		if arc := walk(b, w.Low.Mark.Index, w.High.Mark.Index, step); arc != nil {
			return arc
		}
	}
	return nil
}

// walk goes from one point of a branch to another, round a closed one, as long as the
// knob rises; nil where it does not rise all the way.
func walk(b *branch.Branch, from, to, step int) []int {
	arc := []int{from}
	for at := from; at != to; {
		next := at + step
		if n := len(b.Points) - 1; b.Closed() {
			next = (next + n) % n
		}
		if next < 0 || next >= len(b.Points) || b.Points[next].Knob < b.Points[at].Knob || len(arc) > len(b.Points) {
			return nil
		}
		arc = append(arc, next)
		at = next
	}
	return arc
}

// at gives the point of an arc at a value of the knob, and keeps it for the records.
func (t *turning) at(index int, arc []int, value float64) (branch.Point, bool) {
	points := t.d.Branches[index].Points
	for k := range len(arc) - 1 {
		a, b := arc[k], arc[k+1]
		if !(points[a].Knob <= value && value <= points[b].Knob) {
			continue
		}
		from := min(a, b)
		if max(a, b)-from > 1 { // round the seam of a closed branch
			from = max(a, b)
		}
		p, ok := t.refiner.Between(index, from, value)
		if !ok || !p.Stable {
			return branch.Point{}, false
		}
		at := piece{index, from}
		known := slices.ContainsFunc(t.extra[at], func(q branch.Point) bool { return q.Knob == value })
		if !known && points[a].Knob != value && points[b].Knob != value {
			t.extra[at] = append(t.extra[at], p)
		}
		return p, true
	}
	return branch.Point{}, false
}
