package branch

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
