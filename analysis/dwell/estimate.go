package dwell

import "math"

// A Range is a value with the limits of its interval.
type Range struct {
	Value, Low, High float64
}

// absent stands for a range that was not asked for.
func absent() Range { return Range{math.NaN(), math.NaN(), math.NaN()} }

// An Estimate is what the dwells in one state say about flips to one target.
type Estimate struct {
	To       int     // the state entered, Elsewhere, or Any
	Flips    int     // flips to it
	Exposure float64 // sum of all dwells in the design's unit, cut off or not
	// Mean is exposure/flips: the mean time until a flip to the target, had it been
	// the only one; +Inf, which means absent, if no flip was seen. Low and High are
	// the limits of its interval, made by Method; without flips High is +Inf.
	Mean, Low, High float64
	// StandardError is that of Mean, NaN without flips. Intervals do not come from
	// it: they are not symmetric.
	StandardError float64
	Method        Method
	// Rate is 1/Mean with its interval, in 1/unit.
	Rate Range
	// PerGeneration is Rate times the generation: expected flips in one; all NaN if
	// no generation is given.
	PerGeneration Range
	// Hold is the chance of no flip to the target within so many generations, one
	// entry for each asked; nil if no generation is given.
	Hold []Hold
}

// fill sets what follows from flips, exposure and the interval of the mean.
func (e *Estimate) fill(generation float64) {
	e.Rate = Range{float64(e.Flips) / e.Exposure, 1 / e.High, 1 / e.Low}
	e.PerGeneration = absent()
	if generation > 0 {
		g := generation
		e.PerGeneration = Range{e.Rate.Value * g, e.Rate.Low * g, e.Rate.High * g}
	}
}
