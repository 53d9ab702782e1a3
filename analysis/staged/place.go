package staged

import (
	"context"
	"math"

	"holdfast/ssa"
)

const (
	// burnTimes is how many relaxation times a run needs to forget its start, but for e⁻¹⁰.
	burnTimes = 10
	// pilotTimes is how many relaxation times the first pilot watches.
	pilotTimes = 400
	// crossingTimes is about how many relaxation times lie between two crossings of the
	// first rung, so that they know little of each other.
	crossingTimes = 1.5
	// aim is the chance of a stage. Were all runs alike in cost, work at a given precision would
	// go as (1−p)/(p ln²p), which is least at 0.2. But the nearer the rungs are, the sooner a run
	// is dropped or done: in the latch a half takes fewer events than a quarter.
	aim = 0.5
	// pilotRuns is the number of runs that a stage is placed by.
	pilotRuns = 240
	// mostPilotRuns is how many are made before a stage counts as one that never
	// succeeds.
	mostPilotRuns = 64 * pilotRuns
)

// A ladder is where the rungs have been placed, and what the pilot saw there.
type ladder struct {
	steps   []step
	flux    float64   // crossings of the first rung in a unit of time
	chances []float64 // of each stage: from rung k on
	// crossing is the number of events that a crossing of the first rung takes, and costs
	// those of one run of each stage.
	crossing float64
	costs    []float64
	stuck    *StuckError
}

// place chooses the rungs, one by one, from those that the coordinate offers.
func (j *job) place(ctx context.Context) (*ladder, error) {
	c, err := j.climber(pilotStream)
	if err != nil {
		return nil, err
	}
	l := &ladder{}
	offered := j.plan.Along.steps()
	pool, offered, err := j.first(ctx, c, l, offered)
	for err == nil && l.stuck == nil && len(l.chances) < len(l.steps) {
		before, runs := c.Events(), 0
		pool, offered, runs, err = j.next(ctx, c, l, offered, pool)
		l.costs = append(l.costs, float64(c.Events()-before)/math.Max(1, float64(runs)))
		j.tell("placing rungs", 0, c.Events())
	}
	j.events.Add(c.Events())
	return l, err
}

// first places the first rung by watching the state.
func (j *job) first(ctx context.Context, c *ssa.Climber, l *ladder, offered []step) (pool []ssa.Perch, left []step, err error) {
	for times := float64(pilotTimes); ; times *= 4 {
		watch := times * j.plan.Relaxation
		seen, err := c.Watch(ctx, ssa.Watch{Rungs: rungs(offered), Time: watch, Burn: burnTimes * j.plan.Relaxation})
		if err != nil {
			return nil, nil, err
		}
		reached := make([]int, len(offered))
		for i := range seen {
			for k := range seen[i].Hits {
				reached[k]++
			}
		}
		wanted := times / crossingTimes
		k := 0
		for k+1 < len(reached) && float64(reached[k+1]) >= wanted {
			k++
		}
		switch {
		case reached[k] >= leastCrossings:
			l.steps, l.flux = append(l.steps, offered[k]), float64(reached[k])/watch
			l.crossing = float64(c.Events()) / float64(reached[k])
			for i := range seen {
				if len(seen[i].Hits) > k {
					pool = append(pool, ssa.Perch{Counts: seen[i].Hits[k], Weight: 1})
				}
			}
			return pool, offered[k+1:], nil
		case times >= mostPilotTimes:
			l.stuck = j.neverLeft(seen, watch)
			return nil, nil, nil
		}
	}
}

const (
	// leastCrossings is how many crossings of the first rung the pilot must see.
	leastCrossings = 20
	mostPilotTimes = 64 * pilotTimes
)

// next places the rung after the last, or finds that the last stage leads home.
func (j *job) next(ctx context.Context, c *ssa.Climber, l *ladder, offered []step, pool []ssa.Perch) (next []ssa.Perch, left []step, runs int, err error) {
	last := l.steps[len(l.steps)-1]
	stage := ssa.Stage{Rungs: rungs(offered), Open: true, Guide: last.Rung}
	var made []ssa.Climb
	for more := pilotRuns; ; more *= 4 {
		climbs, err := c.Climb(ctx, stage, deal(pool, more, c.Draw()))
		if err != nil {
			return nil, nil, 0, err
		}
		made = append(made, climbs...)
		k, share := choose(made, len(offered), j.plan.To)
		home := arrivals(made, j.plan.To)
		switch enough := float64(home) / float64(len(made)); {
		case enough >= aim || home >= leastCrossings && k < 0:
			l.chances = append(l.chances, enough)
			return nil, nil, len(made), nil
		case k >= 0 && share*float64(len(made)) >= leastCrossings:
			l.chances, l.steps = append(l.chances, share), append(l.steps, offered[k])
			return met(made, k), offered[k+1:], len(made), nil
		case len(made) >= mostPilotRuns:
			l.stuck = j.neverAdvances(l, made, last.share)
			return nil, nil, len(made), nil
		}
	}
}

// choose gives the farthest rung of those offered that at least a share aim of the
// runs has met, or else the nearest one; −1 where none has met any.
func choose(made []ssa.Climb, offered, to int) (k int, share float64) {
	reached := make([]int, offered)
	for i := range made {
		n := len(made[i].Hits)
		for k := range reached[:n] {
			reached[k]++
		}
	}
	k = -1
	for i := range reached {
		if s := float64(reached[i]) / float64(len(made)); s > 0 && (k < 0 || s >= aim) {
			k, share = i, s
		}
	}
	return k, share
}

func arrivals(made []ssa.Climb, to int) int {
	n := 0
	for i := range made {
		if made[i].Ending == ssa.Arrived && made[i].Core == to {
			n++
		}
	}
	return n
}

// met gives the states at which runs first met rung k.
func met(made []ssa.Climb, k int) (pool []ssa.Perch) {
	for i := range made {
		if len(made[i].Hits) > k {
			pool = append(pool, ssa.Perch{Counts: made[i].Hits[k], Weight: 1})
		}
	}
	return pool
}

func rungs(steps []step) []ssa.Rung {
	out := make([]ssa.Rung, len(steps))
	for k := range steps {
		out[k] = steps[k].Rung
	}
	return out
}

// deal gives runs starts from a pool by systematic resampling: each state is taken as
// often as its weight asks, up or down to the next whole number, by one number u
// uniform in [0, 1) (Kitagawa, J. Comput. Graph. Stat. 5 (1996) 1). All together stand
// for as many runs as the pool.
func deal(pool []ssa.Perch, runs int, u float64) []ssa.Perch {
	total := 0.0
	for i := range pool {
		total += pool[i].Weight
	}
	out := make([]ssa.Perch, 0, runs)
	each, sum := total/float64(runs), 0.0
	for i := range pool {
		sum += pool[i].Weight
		for len(out) < runs && (float64(len(out))+u)*each < sum {
			out = append(out, ssa.Perch{Counts: pool[i].Counts, Weight: each, Family: pool[i].Family})
		}
	}
	for len(out) < runs && len(pool) > 0 { // rounding at the end
		last := pool[len(pool)-1]
		out = append(out, ssa.Perch{Counts: last.Counts, Weight: each, Family: last.Family})
	}
	return out
}

// floors gives the values, in the measure of rung k+1 (of the last rung after it), of
// the points of the rungs before rung k, as far as they fall.
func (l *ladder) floors(k int) []int64 {
	measure := &l.steps[min(k+1, len(l.steps)-1)]
	var out []int64
	last := int64(math.MaxInt64)
	if k+1 < len(l.steps) {
		last = measure.value(l.steps[k].point)
	}
	for i := k - 1; i >= 0; i-- {
		if v := measure.value(l.steps[i].point); v < last {
			out, last = append(out, v), v
		}
	}
	return out
}

// value gives a point's value in the measure of a rung.
func (s *step) value(point []float64) int64 {
	v := 0.0
	for i, w := range s.Weights {
		v += float64(w) * point[i]
	}
	return int64(math.Floor(v))
}
