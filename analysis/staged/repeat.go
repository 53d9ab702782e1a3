package staged

import (
	"context"

	"holdfast/ssa"
)

const (
	// keep is the chance that a run goes on that has fallen back by a rung: less saves
	// events, but the few that come back then weigh too much.
	keep = 0.7
	// families is the number of stretches of the first stage.
	families = ssa.Walkers * ssa.Stretches
)

// A repeat is one estimate of the rate, independent of the others.
type repeat struct {
	done      bool
	rate      float64
	crossings int
	emptied   int
	within    float64 // relative variance, from its own families
	won, made []float64
	events    []int64
}

// repeat makes one repeat with a climber that has been reset for it.
func (j *job) repeat(ctx context.Context, c *ssa.Climber, d *design) (*repeat, error) {
	r := &repeat{}
	var shares [families]float64
	before := c.Events()
	seen, err := c.Watch(ctx, ssa.Watch{Rungs: rungs(d.steps[:1]), Time: d.time, Burn: burnTimes * j.plan.Relaxation})
	if err != nil {
		return nil, err
	}
	var pool []ssa.Perch
	for i := range seen {
		s := &seen[i]
		switch {
		case len(s.Hits) > 0:
			pool = append(pool, ssa.Perch{Counts: s.Hits[0], Weight: 1, Family: s.Family})
		case s.Ending == ssa.Arrived && s.Core == j.plan.To:
			shares[s.Family]++
		case s.Ending == ssa.Emptied:
			r.emptied++
		}
	}
	r.crossings = len(pool)
	r.events = append(r.events, c.Events()-before)
	for k := range d.steps {
		if pool, err = j.stage(ctx, c, d, r, k, pool, &shares); err != nil {
			return nil, err
		}
	}
	r.close(&shares, d.time)
	return r, nil
}

// stage makes the runs of stage k and gives the states that they came to at the
// next rung. What arrives goes into shares, by family.
func (j *job) stage(ctx context.Context, c *ssa.Climber, d *design, r *repeat, k int, pool []ssa.Perch, shares *[families]float64) (next []ssa.Perch, err error) {
	before := c.Events()
	s := ssa.Stage{Floors: d.floors(k), Keep: keep, Open: true, Guide: d.steps[k].Rung}
	if k+1 < len(d.steps) {
		s.Rungs, s.Open = rungs(d.steps[k+1:k+2]), false
	}
	var climbs []ssa.Climb
	if len(pool) > 0 {
		climbs, err = c.Climb(ctx, s, deal(pool, d.runs[k], c.Draw()))
	}
	won, made := 0.0, 0.0
	for i := range pool {
		made += pool[i].Weight
	}
	for i := range climbs {
		o := &climbs[i]
		switch {
		case o.Ending == ssa.Climbed:
			next = append(next, ssa.Perch{Counts: o.Hits[len(o.Hits)-1], Weight: o.Weight, Family: o.Family})
			won += o.Weight
		case o.Ending == ssa.Arrived && o.Core == j.plan.To:
			shares[o.Family] += o.Weight
			won += o.Weight
		case o.Ending == ssa.Emptied:
			r.emptied++
		}
	}
	r.won, r.made, r.events = append(r.won, won), append(r.made, made), append(r.events, c.Events()-before)
	return next, err
}

// close sums up what arrived. The relative variance within the repeat is that of the
// sum of its families' shares, each from a stretch of the first stage of its own
// (after Lee, Whiteley, Biometrika 105 (2018) 609, who trace families through
// resampling in this way).
func (r *repeat) close(shares *[families]float64, time float64) {
	sum, square := 0.0, 0.0
	for _, s := range shares {
		sum += s
		square += s * s
	}
	r.done, r.rate = true, sum/time
	if sum > 0 {
		const n = families
		r.within = (square*n/(sum*sum) - 1) / (n - 1)
	}
}
