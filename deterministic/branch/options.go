package branch

import (
	"math"

	"holdfast/model"
)

// Options steers Follow and FoldCurves. The zero value is right for nearly all
// designs.
type Options struct {
	// Samples is the number of settings over the knob's range, ends included, at
	// which states are looked for besides today's; 0: 5.
	Samples int
	// High is the upper edge of the box of amounts, one value a species; nil: ten
	// times the boxes that hold all states at the samples.
	High []float64
	// Steps is the most steps along one branch in one direction; 0: 4000.
	Steps int
}

func (o Options) withDefaults() Options {
	if o.Samples == 0 {
		o.Samples = 5
	}
	o.Samples = max(o.Samples, 2)
	if o.Steps == 0 {
		o.Steps = 4000
	}
	return o
}

// checkBox sees that the box, if there is one, has a positive edge for each species.
func (o Options) checkBox(n *model.Network) error {
	if o.High == nil {
		return nil
	}
	for i, s := range n.Species {
		if i >= len(o.High) || !(o.High[i] > 0) || math.IsInf(o.High[i], 0) {
			return &BoxError{s.Name, o.High}
		}
	}
	return nil
}
