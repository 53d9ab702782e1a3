package hold

import (
	"context"
	"errors"
	"math"

	"holdfast/ssa"
)

// exact is the engine of the route runs, with constants that vary in time held for an
// interval.
func (j *job) exact(interval float64) engine {
	return engine{route: Runs, work: "events", run: func(ctx context.Context, b batch) (made, error) {
		return j.exactRuns(ctx, b, interval)
	}}
}

// exactRuns makes exact runs. One that goes wrong is an error of the design: all stop.
func (j *job) exactRuns(ctx context.Context, b batch, interval float64) (made, error) {
	p := j.runPlan(b.state, b.first, b.runs, b.most)
	p.Progress, p.Interval = b.progress, interval
	result, err := ssa.Run(ctx, p)
	m := made{work: result.Events, stops: errors.Is(err, context.Canceled)}
	if err != nil && !m.stops {
		return m, Explain(j.network, err)
	}
	for i := range result.Outcomes {
		o := &result.Outcomes[i]
		if o.Ending == ssa.RanAway || o.Ending == ssa.BadRate {
			return m, Explain(j.network, o.Err())
		}
		m.paths = append(m.paths, path{
			replicate: o.Replicate, fate: exactFate(o.Ending), core: o.Core, ending: o.Ending.String(),
			time: o.Time, work: o.Events,
		})
	}
	return m, nil
}

func exactFate(e ssa.Ending) fate {
	switch e {
	case ssa.Flipped:
		return byFlip
	case ssa.Absorbed:
		return byAbsorption
	case ssa.Cancelled:
		return byStop
	}
	return byLimit
}

func (j *job) runPlan(s int, first uint64, runs int, events int64) ssa.Plan {
	return ssa.Plan{
		Network: j.network, Start: j.survey.Cores[s].Start, Cores: j.survey.Cores, From: s,
		Runs: runs, FirstReplicate: first, Seed: j.options.Seed, Point: j.options.Point, Group: uint64(s),
		Until: j.options.Until, MaxEvents: events, MaxCount: j.mostMolecules(), Threads: j.options.Threads, Lanes: j.options.Lanes,
	}
}

// mostMolecules is the count at which a run has run away: far above the box of all
// resting states and the start.
func (j *job) mostMolecules() int64 {
	most := 0.0
	for i, high := range j.survey.High {
		most = math.Max(most, high*j.network.Unit(i))
	}
	for _, n := range j.network.StartCounts() {
		most = math.Max(most, float64(n))
	}
	return int64(math.Min(math.Max(100*most, leastRunaway), mostRunaway))
}

const (
	// leastRunaway is the smallest count that is called running away.
	leastRunaway = 100_000
	// mostRunaway is the largest: beyond it a count is no longer exact as a float64.
	mostRunaway = 1 << 53
)
