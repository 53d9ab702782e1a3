package dwell

import (
	"cmp"
	"math"
	"slices"
	"sort"

	"gonum.org/v1/gonum/stat/distuv"
)

// A Step is one step of a survival curve: the chance of holding beyond Time.
type Step struct {
	Time   float64 // of the flips, in the design's unit
	AtRisk int     // dwells that were still watched then, those that flipped included
	Flips  int     // flips at that very time
	// Chance is the estimate, Low and High its pointwise interval.
	Chance, Low, High float64
}

// A Survival is the product-limit curve of the chance that a dwell lasts longer
// than a time.
type Survival struct {
	Steps []Step // one a distinct flip time, ascending

	confidence float64
	watched    []float64 // all dwells, ascending
}

// KaplanMeier gives the survival curve of the dwells against flips to target (a
// state's index, Elsewhere, or Any); dwells that ended otherwise count as cut off
// then. The interval at each step is at the given confidence.
//
// The estimate: Kaplan and Meier, J. Am. Stat. Assoc. 53 (1958) 457. Its interval:
// Greenwood's variance carried to the logarithm of the cumulative hazard
// (Kalbfleisch and Prentice, The Statistical Analysis of Failure Time Data, Wiley
// 1980, section 1.3), which stays between 0 and 1. When the last dwell watched
// ends by a flip the chance is 0 from there, and its upper limit that of the step
// before.
func KaplanMeier(obs []Observation, target int, confidence float64) Survival {
	return productLimit(byTime(obs), target, confidence)
}

// productLimit is KaplanMeier for dwells sorted by time.
func productLimit(sorted []Observation, target int, confidence float64) Survival {
	s := Survival{confidence: confidence, watched: make([]float64, len(sorted))}
	for i := range sorted {
		s.watched[i] = sorted[i].Time
	}
	z := distuv.UnitNormal.Quantile((1 + confidence) / 2)
	before := Step{Chance: 1, Low: 1, High: 1}
	greenwood := 0.0
	for i := 0; i < len(sorted); {
		step := Step{Time: sorted[i].Time, AtRisk: len(sorted) - i}
		for ; i < len(sorted) && sorted[i].Time == step.Time; i++ {
			if sorted[i].flipped(target) {
				step.Flips++
			}
		}
		if step.Flips == 0 {
			continue
		}
		n, d := float64(step.AtRisk), float64(step.Flips)
		greenwood += d / (n * (n - d))
		step.Chance = before.Chance * (1 - d/n)
		step.Low, step.High = survivalLimits(step.Chance, greenwood, z, before.High)
		s.Steps = append(s.Steps, step)
		before = step
	}
	return s
}

func survivalLimits(chance, greenwood, z, before float64) (low, high float64) {
	if chance <= 0 {
		return 0, before
	}
	log := math.Log(chance)
	w := z * math.Sqrt(greenwood) / -log
	return math.Exp(log * math.Exp(w)), math.Exp(log * math.Exp(-w))
}

// byTime gives the dwells by ascending time, at equal times those that flipped
// before those that were cut off.
func byTime(obs []Observation) []Observation {
	sorted := slices.Clone(obs)
	slices.SortFunc(sorted, func(a, b Observation) int {
		switch {
		case a.Time < b.Time:
			return -1
		case a.Time > b.Time:
			return 1
		}
		return cmp.Compare(b.cutOff(), a.cutOff())
	})
	return sorted
}

// At gives the chance of holding beyond time t, with its interval. ok is false
// where the curve does not reach: t is beyond every dwell, and the longest of them
// was cut off.
//
// Before the first flip the chance is 1 and its lower limit the exact one for no
// flip among the dwells watched until t, (α/2)^(1/n).
func (s *Survival) At(t float64) (chance, low, high float64, ok bool) {
	i := sort.Search(len(s.Steps), func(i int) bool { return s.Steps[i].Time > t })
	if i > 0 && s.Steps[i-1].Chance <= 0 {
		return 0, 0, s.Steps[i-1].High, true
	}
	atRisk := len(s.watched) - sort.SearchFloat64s(s.watched, t)
	if atRisk == 0 {
		return math.NaN(), math.NaN(), math.NaN(), false
	}
	if i == 0 {
		return 1, math.Pow((1-s.confidence)/2, 1/float64(atRisk)), 1, true
	}
	last := s.Steps[i-1]
	return last.Chance, last.Low, last.High, true
}
