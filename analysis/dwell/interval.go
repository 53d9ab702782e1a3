package dwell

import (
	"math"

	"gonum.org/v1/gonum/stat/distuv"
)

// FewFlips is the number of flips below which the Ratio interval is not trusted
// alone.
const FewFlips = 50

// A Method is how the interval of a mean was made. The package documentation
// says when each is used and when it is exact.
type Method uint8

// The methods.
const (
	NoneSeen Method = iota // no flip: a lower limit only
	Gamma                  // complete memoryless dwells, number fixed beforehand: exact
	Poisson                // limits on the count, given the exposure
	Ratio                  // from the spread of the dwells, no law assumed
	Widest                 // the union of Ratio and the memoryless interval
)

// String names the method in a few words.
func (m Method) String() string {
	switch m {
	case NoneSeen:
		return "no flip seen, lower limit only"
	case Gamma:
		return "exact for memoryless dwells, all complete"
	case Poisson:
		return "count given the exposure"
	case Ratio:
		return "from the spread of the dwells"
	case Widest:
		return "wider of the spread and the memoryless one"
	}
	return "unknown"
}

// interval sets the estimate's mean, limits, standard error and method.
func (e *Estimate) interval(obs []Observation, o Options, memoryless bool) {
	e.Mean = e.Exposure / float64(e.Flips)
	e.StandardError = e.Mean / math.Sqrt(float64(e.Flips))
	e.exponential(len(obs), o)
	if memoryless || e.Flips < 2 {
		return
	}
	error2 := ratioVariance(obs, e.To, e.Exposure, e.Flips)
	low, high := e.Low, e.High
	t := distuv.StudentsT{Mu: 0, Sigma: 1, Nu: float64(e.Flips - 1)}.Quantile((1 + o.Confidence) / 2)
	factor := math.Exp(t * math.Sqrt(error2))
	e.StandardError = e.Mean * math.Sqrt(error2)
	e.Low, e.High, e.Method = e.Mean/factor, e.Mean*factor, Ratio
	if e.Flips < FewFlips {
		e.Low, e.High, e.Method = math.Min(low, e.Low), math.Max(high, e.High), Widest
	}
}

// exponential sets the limits and the method for memoryless dwells.
func (e *Estimate) exponential(dwells int, o Options) {
	switch {
	case e.Flips == 0:
		_, most := Garwood(0, o.Confidence)
		e.Mean, e.StandardError = math.Inf(1), math.NaN()
		e.Low, e.High, e.Method = e.Exposure/most, math.Inf(1), NoneSeen
	case e.Flips == dwells && (e.To == Any || o.oneTarget):
		low, high := gammaLimits(e.Flips, o.Confidence)
		e.Low, e.High, e.Method = e.Mean/high, e.Mean/low, Gamma
	default:
		low, high := Garwood(e.Flips, o.Confidence)
		e.Low, e.High, e.Method = e.Exposure/high, e.Exposure/low, Poisson
	}
}

// ratioVariance gives the variance of the logarithm of exposure/flips for dwells
// that are independent and alike, from the spread of each one's time and flip
// about their means (Cochran, Sampling Techniques, Wiley 1977, chapter 6).
func ratioVariance(obs []Observation, target int, exposure float64, flips int) float64 {
	n := float64(len(obs))
	sum := 0.0
	for i := range obs {
		d := obs[i].Time * n / exposure
		if obs[i].flipped(target) {
			d -= n / float64(flips)
		}
		sum += d * d
	}
	return sum / (n * (n - 1))
}
