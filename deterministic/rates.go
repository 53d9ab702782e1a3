package deterministic

import (
	"math"
	"slices"
)

// checkRates gives an error where a law is not finite, or negative beyond its
// rounding, at the design's start or at a resting state.
func (m *Map) checkRates() error {
	start := m.Network.Amounts(nil, m.Network.StartCounts())
	if err := m.rateError(start, "the start"); err != nil {
		return err
	}
	for i := range m.States {
		if err := m.rateError(m.States[i].Amounts, "the state "+m.States[i].Name); err != nil {
			return err
		}
	}
	return nil
}

func (m *Map) rateError(x []float64, place string) error {
	for r := range m.Network.Reactions {
		re := &m.Network.Reactions[r]
		v, bound := lawRounding(re.Law, x)
		if !(abs(v) <= math.MaxFloat64) || v < -bound {
			return &RateError{Reaction: re.Name, Place: place, Amounts: slices.Clone(x), Value: v}
		}
	}
	return nil
}
