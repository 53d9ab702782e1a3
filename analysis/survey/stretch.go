package survey

import (
	"math"
	"slices"

	"holdfast/analysis/hold"
	"holdfast/deterministic/branch"
)

// sameKnob is the share of the range below which two settings are one.
const sameKnob = 1e-9

// addStretches counts the stable states over the range: between two neighbouring
// marks their number does not change.
func (t *turning) addStretches() {
	k := t.d.Knob
	edges := []float64{k.Low, k.High}
	for _, b := range t.d.Branches {
		for _, m := range b.Marks {
			edges = append(edges, m.Knob)
		}
	}
	slices.Sort(edges)
	edges = slices.CompactFunc(edges, func(a, b float64) bool { return math.Abs(b-a) <= sameKnob*(k.High-k.Low) })
	for i := range len(edges) - 1 {
		t.addStretch(edges[i], edges[i+1])
	}
}

// addStretch adds a stretch, or widens the last one where the number is the same.
func (t *turning) addStretch(low, high float64) {
	count := 0
	for i := range t.d.Branches {
		count += stableAt(&t.d.Branches[i], (low+high)/2)
	}
	if last := len(t.out.Stretches) - 1; last >= 0 && t.out.Stretches[last].Stable == count {
		t.out.Stretches[last].High = hold.Value(high)
		return
	}
	t.out.Stretches = append(t.out.Stretches, Stretch{hold.Value(low), hold.Value(high), count})
}

// stableAt counts the stable states of a branch at a value of the knob that is none
// of its marks'. A piece from a stable point to a mark is stable.
func stableAt(b *branch.Branch, value float64) int {
	count := 0
	for i := range len(b.Points) - 1 {
		p, q := &b.Points[i], &b.Points[i+1]
		across := (p.Knob <= value) != (q.Knob <= value)
		if across && (p.Stable || q.Stable) {
			count++
		}
	}
	return count
}
