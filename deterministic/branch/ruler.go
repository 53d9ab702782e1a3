package branch

import "math"

// ruler sets the unit that each unknown of a curve is measured in near a point:
// its own amount, so that steps are steps in its logarithm; below a floor, the
// floor; a knob never more than its range.
type ruler struct {
	floor []float64
	cap   []float64
}

// knobFloor and amountFloor are the smallest units, relative to a knob's range and
// to a species' largest amount.
const (
	knobFloor   = 1e-3
	amountFloor = 1e-4
)

// newRuler makes a ruler for amounts up to typical and for the knobs.
func newRuler(typical []float64, knobs []Knob) *ruler {
	r := &ruler{}
	for _, t := range typical {
		r.floor = append(r.floor, amountFloor*t)
		r.cap = append(r.cap, math.Inf(1))
	}
	for _, k := range knobs {
		r.floor = append(r.floor, knobFloor*(k.High-k.Low))
		r.cap = append(r.cap, k.High-k.Low)
	}
	return r
}

func (r *ruler) weights(u []float64) []float64 {
	out := make([]float64, len(u))
	for j, v := range u {
		out[j] = min(max(math.Abs(v), r.floor[j]), r.cap[j])
	}
	return out
}
