package separatrix

import (
	"math"

	"holdfast/model"
)

// box is bounds on the amounts, one value a species.
type box struct{ low, high []float64 }

// newBox checks the bounds of the options; low nil is 0, high nil is fallback.
func newBox(n *model.Network, low, high, fallback []float64) (box, error) {
	if low == nil {
		low = make([]float64, len(n.Species))
	}
	if high == nil {
		high = fallback
	}
	for i, s := range n.Species {
		switch {
		case i >= len(low) || i >= len(high):
			return box{}, &BoxError{s.Name, math.NaN(), math.NaN(), "no bounds given"}
		case !(low[i] >= 0) || math.IsInf(high[i], 0):
			return box{}, &BoxError{s.Name, low[i], high[i], "the ends must be finite and not below 0"}
		case !(low[i] < high[i]):
			return box{}, &BoxError{s.Name, low[i], high[i], "the upper end must lie above the lower one"}
		}
	}
	return box{low, high}, nil
}

// beyond gives the species that x has furthest outside the box, or −1.
func (b box) beyond(x []float64) int {
	worst, most := -1, 0.0
	for i, v := range x {
		if out := max(b.low[i]-v, v-b.high[i]) / (b.high[i] - b.low[i]); out > most {
			worst, most = i, out
		}
	}
	return worst
}

// holds tells whether x lies in the box.
func (b box) holds(x []float64) bool { return b.beyond(x) < 0 }
