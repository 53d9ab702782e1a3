package staged

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/stat"
	"gonum.org/v1/gonum/stat/distuv"
)

// An Ending says why an estimate was ended.
type Ending uint8

const (
	// Reached: the repeats that the precision takes were made.
	Reached Ending = iota
	// Spent: the budget of events is spent.
	Spent
	// Cancelled: the context was done before the repeats were.
	Cancelled
)

// String gives the ending in words.
func (e Ending) String() string {
	switch e {
	case Reached:
		return "repeats as planned"
	case Spent:
		return "event budget spent"
	case Cancelled:
		return "cancelled"
	}
	return fmt.Sprintf("ending %d", uint8(e))
}

// Early tells whether the estimate was ended before the plan let it.
func (e Ending) Early() bool { return e == Cancelled }

// A Stage tells how one stage went, all repeats together.
type Stage struct {
	// Share is how far along the coordinate its runs begin, from 0 to 1.
	Share float64
	// Success is the share of them that reached the next rung, or, in the last
	// stage, the other core.
	Success float64
	// Runs and Events that were made.
	Runs, Events int64
}

// A Result is an estimate of the rate of one flip.
type Result struct {
	// Rate is the number of flips in a unit of time spent in From, with its standard
	// error and 95 % interval.
	Rate, StandardError, Low, High float64
	// Flux is the rate at which runs that come out of From's core meet the first rung.
	Flux float64
	// Stages are those after the first rung, in order; WatchEvents are the events of
	// the first stage, in which the flux is counted.
	Stages      []Stage
	WatchEvents int64
	// Repeats are the estimates of the repeats, each independent of the others.
	Repeats []float64
	// Effective is how many independent flips would tell the rate as well.
	Effective float64
	// Disagreement is the variance between the repeats over the one that each repeat's
	// own families lead to expect; Missed tells that it is more than chance.
	Disagreement float64
	Missed       bool
	// Emptied counts the runs that came to a state that no reaction leads out of and
	// that lies in no core: that way of leaving is in no rate.
	Emptied int64
	Ending  Ending
	within  float64 // relative variance that a repeat's own families lead to expect
	Events  int64   // reaction firings, those of the pilots included
}

// estimate takes the repeats together. It needs two that are done.
func estimate(d *design, repeats []*repeat) *Result {
	r := &Result{Stages: make([]Stage, len(d.steps))}
	within, crossings := 0.0, 0
	won, made := make([]float64, len(d.steps)), make([]float64, len(d.steps))
	for _, one := range repeats {
		r.Repeats = append(r.Repeats, one.rate)
		within += one.within
		crossings += one.crossings
		r.Emptied += int64(one.emptied)
		r.WatchEvents += one.events[0]
		for k := range r.Stages {
			won[k], made[k] = won[k]+one.won[k], made[k]+one.made[k]
			r.Stages[k].Events += one.events[k+1]
			if one.made[k] > 0 {
				r.Stages[k].Runs += int64(d.runs[k])
			}
		}
	}
	for k := range r.Stages {
		r.Stages[k].Share, r.Stages[k].Success = d.steps[k].share, won[k]/made[k]
	}
	n := float64(len(repeats))
	r.Flux = float64(crossings) / (n * d.time)
	r.within = within / n
	r.interval()
	r.disagree()
	return r
}

// interval gives the mean of the repeats with its standard error and an interval on
// the logarithm, by Student's t.
func (r *Result) interval() {
	n := float64(len(r.Repeats))
	mean, variance := stat.MeanVariance(r.Repeats, nil)
	r.Rate, r.StandardError = mean, math.Sqrt(variance/n)
	reach := math.Exp(quantile(n) * r.StandardError / mean)
	r.Low, r.High = mean/reach, mean*reach
	r.Effective = (mean / r.StandardError) * (mean / r.StandardError)
}

// quantile is Student's 0.975 quantile for the mean of n numbers.
func quantile(n float64) float64 {
	return distuv.StudentsT{Mu: 0, Sigma: 1, Nu: n - 1}.Quantile(0.975)
}

// disagree holds the spread of the repeats against what each expects of itself.
func (r *Result) disagree() {
	n := float64(len(r.Repeats))
	relative := r.StandardError * r.StandardError * n / (r.Rate * r.Rate)
	r.Disagreement = relative / r.within
	limit := distuv.ChiSquared{K: n - 1}.Quantile(1-1e-4) / (n - 1)
	r.Missed = r.Disagreement > margin*limit
}

// margin allows for what the families' variance does not know well.
const margin = 2
