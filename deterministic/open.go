package deterministic

import (
	"math"
	"slices"
)

// openEnds closes the ends of the box that no bound was found for, by following
// flows from ever larger amounts of those species until three rounds in a row
// lead nowhere new.
func (f *finder) openEnds(b *box) error {
	var open []int
	for i, high := range b.high {
		if math.IsInf(high, 1) {
			open = append(open, i)
		}
	}
	if len(open) == 0 {
		return nil
	}
	base := make([]float64, len(open))
	for k, i := range open {
		base[k] = max(f.w.sys.net.Species[i].Start, 1, 1/f.w.sys.unit[i])
		f.limit[i] = 1e12 * base[k]
		b.high[i] = base[k]
	}
	reached := slices.Clone(base)
	quiet := 0
	for round := 0; round < 9 && quiet < 3 && f.ctx.Err() == nil; round++ {
		for k, i := range open {
			b.high[i] = base[k] * math.Pow(10, float64(round))
		}
		if f.roundOfFlows(b, open, reached) {
			quiet = 0
		} else {
			quiet++
		}
	}
	if len(f.ranAway) > 0 && len(f.found) == 0 {
		i := f.ranAway[0]
		return &RunawayError{f.w.sys.net.Species[i].Name, f.limit[i]}
	}
	for k, i := range open {
		b.high[i] = 10 * reached[k]
	}
	found := f.found
	f.setBox(b)
	f.found = found
	return nil
}

// roundOfFlows follows flows in the present box, and moves reached up to the
// amounts they rest at; true where that is a change.
func (f *finder) roundOfFlows(b *box, open []int, reached []float64) bool {
	seeds := &seeder{c: f.whole, low: b.low, high: b.high, floor: f.resolution}
	grown := false
	for k := range leastFlows {
		x := seeds.point(k)
		if x == nil {
			continue
		}
		at := f.flowToRest(f.whole, x)
		if at == nil {
			continue
		}
		for k, i := range open {
			if at.x[i] > reached[k] {
				reached[k], grown = at.x[i], true
			}
		}
	}
	return grown
}
