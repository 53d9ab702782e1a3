package hold

import (
	"context"
	"errors"
	"fmt"
	"math"
	"strings"

	"holdfast/analysis/dwell"
	"holdfast/deterministic"
	"holdfast/model"
	"holdfast/ssa"
)

const (
	// block is the most runs that are in memory at once.
	block = 1 << 16
	// pilotReplicate is the first replicate of pilots: no run that counts has it.
	pilotReplicate = 1 << 39
)

// stateRuns are the runs of one state and what was seen in them.
type stateRuns struct {
	state       int
	seen        []dwell.Observation
	events      int64
	made        int // runs that count: the next one's replicate
	interrupted bool
}

// byRuns estimates the hold time of every state in turn by exact runs.
func (j *job) byRuns(ctx context.Context) error {
	states := len(j.survey.Stable())
	left := j.options.Events
	for s, state := range j.survey.Stable() {
		if state.Absorbing {
			j.neverLeft(s)
			continue
		}
		r, err := j.runState(ctx, s, perRun(left, states-s))
		if err != nil {
			return err
		}
		j.report.Work.Events += r.events
		left = remaining(left, r.events)
		if err := j.estimate(r); err != nil {
			return err
		}
	}
	return nil
}

// runState makes the runs of state s, at a cost of at most events (0: no limit).
func (j *job) runState(ctx context.Context, s int, events int64) (*stateRuns, error) {
	r := &stateRuns{state: s}
	allowed, err := j.allow(ctx, r, events)
	if err != nil {
		return r, err
	}
	err = j.spend(ctx, r, allowed)
	for err == nil && allowed.again && !r.interrupted && events-r.events >= spareEvents {
		err = j.spend(ctx, r, longRuns(events-r.events))
	}
	return r, err
}

// spend makes the runs that are allowed, a block at a time.
func (j *job) spend(ctx context.Context, r *stateRuns, allowed allowance) error {
	for done := 0; done < allowed.runs && !r.interrupted; done += block {
		p := j.runPlan(r.state, uint64(r.made), min(block, allowed.runs-done), allowed.events)
		p.Progress = j.progressOf(r, done, allowed)
		if err := j.count(ctx, r, p); err != nil {
			return err
		}
		r.made += p.Runs
	}
	return nil
}

// allow plans the runs of a state, by a pilot where the number is not given.
func (j *job) allow(ctx context.Context, r *stateRuns, events int64) (allowance, error) {
	if j.options.Runs > 0 {
		return allowance{runs: int(j.options.Runs), events: perRun(events, int(j.options.Runs))}, nil
	}
	flips := dwell.FlipsFor(j.options.Precision)
	if events == 0 {
		return allowance{runs: flips}, nil
	}
	pilot := pilotAllowance(events)
	result, err := ssa.Run(ctx, j.runPlan(r.state, pilotReplicate, pilot.runs, pilot.events))
	r.events += result.Events
	if errors.Is(err, context.Canceled) {
		r.interrupted = true
		return allowance{}, nil
	}
	if err != nil {
		return allowance{}, err
	}
	seen := 0
	for i := range result.Outcomes {
		o := &result.Outcomes[i]
		if o.Ending == ssa.BadRate || o.Ending == ssa.RanAway {
			return allowance{}, Explain(j.network, o.Err())
		}
		if o.Ending == ssa.Flipped || o.Ending == ssa.Absorbed {
			seen++
		}
	}
	return plan(flips, events, seen, result.Events), nil
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
	return int64(math.Min(math.Max(100*most, leastRunaway), 1e12))
}

// leastRunaway is the smallest count that is called running away.
const leastRunaway = 100_000

// perRun shares events among runs; 0 stays no limit.
func perRun(events int64, runs int) int64 {
	if events == 0 {
		return 0
	}
	return max(1, events/int64(runs))
}

func (j *job) runPlan(s int, first uint64, runs int, events int64) ssa.Plan {
	return ssa.Plan{
		Network: j.network, Start: j.survey.Cores[s].Start, Cores: j.survey.Cores, From: s,
		Runs: runs, FirstReplicate: first, Seed: j.options.Seed, Group: uint64(s),
		Until: j.options.Until, MaxEvents: events, MaxCount: j.mostMolecules(), Threads: j.options.Threads, Lanes: j.options.Lanes,
	}
}

// count makes the runs of p, takes their dwells into r and records them.
func (j *job) count(ctx context.Context, r *stateRuns, p ssa.Plan) error {
	result, err := ssa.Run(ctx, p)
	r.events += result.Events
	if err != nil && !errors.Is(err, context.Canceled) {
		return Explain(j.network, err)
	}
	for i := range result.Outcomes {
		if err := j.observe(r, &result.Outcomes[i]); err != nil {
			return err
		}
	}
	return nil
}

// observe adds one outcome to what was seen.
func (j *job) observe(r *stateRuns, o *ssa.Outcome) error {
	if o.Ending == ssa.Cancelled {
		r.interrupted = true
		if o.Events == 0 {
			return nil
		}
	} else if err := o.Err(); err != nil {
		return Explain(j.network, err)
	}
	seen := j.observation(o)
	r.seen = append(r.seen, seen)
	return j.record(r.state, o, seen)
}

// observation is what an outcome says about the dwell.
func (j *job) observation(o *ssa.Outcome) dwell.Observation {
	switch o.Ending {
	case ssa.Flipped:
		return dwell.Observation{To: o.Core, Absorbed: j.survey.Stable()[o.Core].Absorbing, Time: o.Time}
	case ssa.Absorbed:
		return dwell.Observation{To: dwell.Elsewhere, Absorbed: true, Time: o.Time}
	}
	return dwell.Observation{To: dwell.Censored, Time: o.Time}
}

// Explain adds to an engine's error, on a network, what to do about it.
func Explain(n *model.Network, err error) error {
	var rate *ssa.RateError
	var away *ssa.RunawayError
	switch {
	case errors.As(err, &rate):
		return fmt.Errorf("reaction %q has the rate %v at %s; a rate must be finite and not below 0: mend its law, with max(0, …) say",
			rate.Name, rate.Value, countsText(n, rate.Counts))
	case errors.As(err, &away):
		return fmt.Errorf("counts run away: %s reached %d molecules at time %.4g %s, far beyond its resting states; is a loss missing, or a production without bound?",
			n.Species[away.Species].Name, away.Counts[away.Species], away.Time, n.TimeUnit)
	}
	return err
}

// Advise adds to an error of a job on the design in file what to try next.
func Advise(err error, file string) error {
	var one *deterministic.OneStateError
	var same *deterministic.IndistinctError
	switch {
	case errors.As(err, &one):
		return fmt.Errorf("%w\n  'holdfast map %s --knob NAME=LOW:HIGH' shows where along a constant a second state is born", err, file)
	case errors.As(err, &same):
		return fmt.Errorf("%w (--copies)", err)
	}
	return err
}

func countsText(n *model.Network, counts []int64) string {
	parts := make([]string, len(counts))
	for i, k := range counts {
		parts[i] = fmt.Sprintf("%s = %d", n.Species[i].Name, k)
	}
	return strings.Join(parts, ", ")
}
