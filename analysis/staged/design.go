package staged

import "math"

const (
	// spread is the relative standard deviation that a repeat is sized for: small
	// enough that repeats are nearly symmetric about their mean.
	spread = 0.3
	// inflation is what the variance of a repeat is likely to be over that of
	// independent stages, before a pilot has told.
	inflation = 1.5
	// entrance is about the relative variance of what comes of one crossing of the first
	// rung, with that of their number.
	entrance = 2.5
	// fewestRuns are made in a stage, so that families do not die out.
	fewestRuns = 50
	// spare repeats, over those that the pilot asks for, make a miss of the precision rare.
	spare = 1.2
	// fewestRepeats are made whatever the budget.
	fewestRepeats = 4
)

// A design is what every repeat does: fixed before the first of those that count.
type design struct {
	*ladder
	time float64 // watched in the first stage
	runs []int   // of each later stage
	// variance is the relative variance of a repeat, were the stages independent.
	variance float64
}

// design sizes the repeats for ladder l, whose variance is so many times that of
// independent stages. The relative variance of a repeat is about entrance/crossings
// for where its runs enter the ladder plus (1−p)/(p·runs) for each stage. What costs least
// is to make as many of each as the root of its variance over its cost.
func (l *ladder) design(inflated float64) *design {
	d := &design{ladder: l}
	sum := math.Sqrt(entrance * l.crossing)
	for k := range l.chances {
		sum += math.Sqrt(l.lack(k) * l.costs[k])
	}
	scale := sum * inflated / (spread * spread)
	crossings := math.Max(leastCrossings, math.Sqrt(entrance/l.crossing)*scale)
	d.time, d.variance = crossings/l.flux, entrance/crossings
	for k := range l.chances {
		runs := math.Max(fewestRuns, math.Ceil(math.Sqrt(l.lack(k)/l.costs[k])*scale))
		d.runs, d.variance = append(d.runs, int(runs)), d.variance+l.lack(k)/runs
	}
	return d
}

// lack is the relative variance that one run of stage k makes.
func (l *ladder) lack(k int) float64 {
	p := math.Min(math.Max(l.chances[k], 0.01), 0.9)
	return (1 - p) / p
}

// design plans the repeats that count by the pilot's: how large they are, how many,
// and why no more.
func (j *job) design(first *design, pilot []*repeat) (d *design, n int, e Ending) {
	l := &ladder{steps: first.steps, flux: first.flux, crossing: first.crossing}
	total := estimate(first, pilot)
	for k := range total.Stages {
		s := &total.Stages[k]
		if s.Runs == 0 { // never reached: as the pilot before had it
			l.chances, l.costs = append(l.chances, first.chances[k]), append(l.costs, first.costs[k])
			continue
		}
		l.chances = append(l.chances, s.Success)
		l.costs = append(l.costs, math.Max(1, float64(s.Events)/float64(s.Runs)))
	}
	if total.Flux > 0 {
		l.flux, l.crossing = total.Flux, float64(total.WatchEvents)/(total.Flux*first.time*float64(len(pilot)))
	}
	inflated := math.Max(1, total.relativeVariance()/first.variance)
	d = l.design(math.Min(inflated, mostInflation))
	n = repeatsFor(spare*inflated*d.variance, j.plan.Precision)
	n, e = j.afford(d, n, fewestRepeats)
	return d, n, e
}

// events is about what a repeat takes.
func (d *design) events() float64 {
	each := d.time * d.flux * d.crossing
	for k, runs := range d.runs {
		each += float64(runs) * d.costs[k]
	}
	return each
}

// afford cuts a number of repeats down to what the budget has left, and says if it did.
func (j *job) afford(d *design, n, least int) (int, Ending) {
	left := float64(j.plan.Events - j.events.Load())
	if most := max(int(left/d.events()), least); j.plan.Events > 0 && most < n {
		return most, Spent
	}
	return n, Reached
}

// mostInflation is what repeats are enlarged for at most.
const mostInflation = 20

// relativeVariance gives that of one repeat: that between them or that expected by their families,
// whichever is larger; 1 where nothing arrived.
func (r *Result) relativeVariance() float64 {
	if r.Rate == 0 {
		return 1
	}
	n := float64(len(r.Repeats))
	between := n * r.StandardError * r.StandardError / (r.Rate * r.Rate)
	return math.Max(between, r.within)
}

// repeatsFor gives the number of repeats that a precision takes, where one has this
// relative variance.
func repeatsFor(variance, precision float64) int {
	half := math.Log1p(precision)
	n := float64(leastRepeats)
	for range 20 {
		n = math.Max(leastRepeats, math.Ceil(variance*math.Pow(quantile(n)/half, 2)))
	}
	return int(n)
}
