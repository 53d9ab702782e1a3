package hold

import "math"

// halving holds runs against as many with half of something: their means, what halving
// moves the mean by, relative to it, and the standard error of that from sampling.
func (j *job) halving(full, half *stateRuns) (whole, halved, change, sampling Value) {
	whole, a := j.mean(full)
	halved, b := j.mean(half)
	ratio := halved / whole
	return whole, halved, ratio - 1, Value(math.Hypot(a, b)) * ratio
}

// mean gives the mean dwell and its relative standard error; NaN without flips.
func (j *job) mean(r *stateRuns) (Value, float64) {
	s, err := j.summarise(r)
	if err != nil || s.Any.Flips == 0 {
		return Value(math.NaN()), math.NaN()
	}
	return Value(s.Any.Mean), s.Any.StandardError / s.Any.Mean
}

// beyondChance tells whether what halving moves a mean by is more than three standard
// errors of its logarithm.
func beyondChance(change, sampling Value) bool {
	ratio := 1 + float64(change)
	return math.Abs(math.Log(ratio)) > 3*float64(sampling)/ratio
}
