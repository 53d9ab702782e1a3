package branch

import "math"

// ruler sets the unit that each unknown of a curve is measured in near a point:
// its own amount, so that steps are steps in its logarithm; below a floor, the
// floor; a knob never more than its range.
type ruler struct {
	floor []float64
	cap   []float64
}

// newRuler makes a ruler for the amounts' floors and for the knobs. A knob's floor
// is a hundredth of its range, or its low end where that is smaller and not 0, so
// that a range over decades is followed decade by decade.
func newRuler(floor []float64, knobs []Knob) *ruler {
	r := &ruler{floor: append([]float64(nil), floor...)}
	for range floor {
		r.cap = append(r.cap, math.Inf(1))
	}
	for _, k := range knobs {
		span := k.High - k.Low
		least := span / 100
		if k.Low > 0 {
			least = min(least, k.Low)
		}
		r.floor = append(r.floor, least)
		r.cap = append(r.cap, span)
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

// floors gives each species the smallest amount that is told from 0: a tenth of
// its least positive amount in the states given, but not below 1e-8 of its largest.
func floors(states [][]float64, n int) []float64 {
	out := make([]float64, n)
	for i := range out {
		least, most := math.Inf(1), 0.0
		for _, x := range states {
			most = max(most, x[i])
			if x[i] > 0 {
				least = min(least, x[i])
			}
		}
		out[i] = max(0.1*min(least, most), 1e-8*most)
		if most == 0 {
			out[i] = math.NaN()
		}
	}
	return out
}
