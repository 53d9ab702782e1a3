package staged

import (
	"context"
	"errors"
	"math"
	"sync"
	"sync/atomic"
	"time"

	"holdfast/ssa"
)

const (
	leastRepeats = 10
	// pilotRepeats say how many repeats it takes.
	pilotRepeats = 12
	// spread is the relative standard deviation that a repeat is sized for, and
	// inflation what its variance is likely to be over that of independent stages.
	spread    = 0.3
	inflation = 1.5
	// entrance is about the relative variance of what comes of one crossing of the first
	// rung, with that of their number.
	entrance = 2.5
	// spare repeats, over those that the pilot says, make a miss of the precision rare.
	spare = 1.2
	// Streams of the pilots; repeat i has stream i.
	pilotStream       = 1 << 37
	pilotRepeatStream = 1 << 36
)

// A job is one estimate under way.
type job struct {
	plan   Plan
	events atomic.Int64

	telling sync.Mutex
	told    time.Time
}

// Run estimates the rate of one flip. A *StuckError says that the coordinate does not
// lead there; other errors are those of the plan and of the engine. If ctx is done
// before the estimate, what has been finished by then is the result, if two repeats
// are; there is no error then, or else the context's cause.
func Run(ctx context.Context, p Plan) (*Result, error) {
	p, err := p.normal()
	if err != nil {
		return nil, err
	}
	j := &job{plan: p}
	l, err := j.place(ctx)
	if err != nil {
		return nil, err
	}
	if l.stuck != nil {
		return nil, l.stuck
	}
	d := l.design()
	pilot, err := j.repeats(ctx, d, pilotRepeats, pilotRepeatStream, "pilot")
	if err != nil {
		return nil, err
	}
	n, ending := j.number(pilot)
	made, err := j.repeats(ctx, d, n, 0, "repeats")
	if ctx.Err() != nil && len(made) >= 2 {
		ending, err = Cancelled, nil
	}
	if err != nil {
		return nil, err
	}
	r := estimate(d, made)
	r.Ending, r.Events = ending, j.events.Load()
	if r.Rate == 0 {
		return r, &StuckError{From: j.name(p.From), To: j.name(p.To), Share: d.steps[len(d.steps)-1].share, Runs: n * d.runs}
	}
	return r, nil
}

// design sizes the repeats for ladder l. The relative variance of one is about
// entrance/crossings for where runs enter the ladder and rest/runs for how they get
// on, at a cost of events that the pilot has seen; the ratio of the two is the one that is cheapest.
func (l *ladder) design() *design {
	d := &design{ladder: l}
	rest := 0.0
	for _, p := range l.chances {
		rest += inflation * (1 - p) / p
	}
	rest = math.Max(rest, 0.1)
	ratio := math.Sqrt(entrance * float64(len(l.chances)) * l.run / (rest * l.crossing))
	ratio = math.Max(0.05, math.Min(ratio, 1))
	d.runs = int(math.Max(100, math.Ceil((entrance/ratio+rest)/(spread*spread))))
	d.time = math.Max(ratio*float64(d.runs), leastCrossings) / l.flux
	return d
}

// number gives the number of repeats that count.
func (j *job) number(pilot []*repeat) (n int, e Ending) {
	rates, within, variance := 0.0, 0.0, 0.0
	for _, r := range pilot {
		rates += r.rate / float64(len(pilot))
		within += r.within / float64(len(pilot))
	}
	for _, r := range pilot {
		variance += (r.rate - rates) * (r.rate - rates) / float64(len(pilot)-1) / (rates * rates)
	}
	if rates == 0 {
		variance, within = 1, 1
	}
	n = repeatsFor(spare*math.Max(variance, within), j.plan.Precision)
	if j.plan.Events == 0 {
		return n, Reached
	}
	spent := j.events.Load()
	each := int64(0)
	for _, r := range pilot {
		for _, e := range r.events {
			each += e
		}
	}
	each = max(1, each/int64(len(pilot)))
	if most := max(int((j.plan.Events-spent)/each), fewestRepeats); most < n {
		return most, Spent
	}
	return n, Reached
}

// fewestRepeats are made whatever the budget.
const fewestRepeats = 4

// climber gives a climber on the plan's ladder with the random numbers of a stream.
func (j *job) climber(stream uint64) (*ssa.Climber, error) {
	c, err := ssa.NewClimber(ssa.Ladder{Network: j.plan.Network, Cores: j.plan.Cores, From: j.plan.From, MaxCount: j.plan.MaxCount})
	if err != nil {
		return nil, err
	}
	c.Reset(j.plan.Seed, j.plan.Point, j.plan.Group, stream)
	return c, nil
}

// repeats makes n repeats with streams from first on, and gives those that are done.
func (j *job) repeats(ctx context.Context, d *design, n int, first uint64, stage string) ([]*repeat, error) {
	out, failed := make([]*repeat, n), make([]error, n)
	var queue, done atomic.Int64
	var group sync.WaitGroup
	for range min(j.plan.Threads, n) {
		group.Go(func() {
			c, err := j.climber(first)
			for i := queue.Add(1) - 1; err == nil && i < int64(n); i = queue.Add(1) - 1 {
				c.Reset(j.plan.Seed, j.plan.Point, j.plan.Group, first+uint64(i))
				before := c.Events()
				out[i], err = j.repeat(ctx, c, d)
				failed[i] = err
				j.events.Add(c.Events() - before)
				j.tell(stage, float64(done.Add(1))/float64(n), 0)
			}
		})
	}
	group.Wait()
	var made []*repeat
	for _, r := range out {
		if r != nil {
			made = append(made, r)
		}
	}
	return made, errors.Join(failed...)
}

// tellEvery is the least time between two calls of Plan.Progress.
const tellEvery = 50 * time.Millisecond

// tell reports progress if it is time to.
func (j *job) tell(stage string, share float64, more int64) {
	if j.plan.Progress == nil || !j.telling.TryLock() {
		return
	}
	defer j.telling.Unlock()
	if now := time.Now(); now.Sub(j.told) >= tellEvery {
		j.told = now
		j.plan.Progress(stage, share, j.events.Load()+more)
	}
}
