package staged

import (
	"context"
	"errors"
	"fmt"
	"sync"
	"sync/atomic"
	"time"

	"holdfast/ssa"
)

const (
	leastRepeats = 10
	// pilotRepeats are made to plan the others by.
	pilotRepeats = 12
	// Streams of the pilots; repeat i has stream i.
	pilotStream       = 1 << 37
	pilotRepeatStream = 1 << 36
	// manyRepeats are so many that they tell their own spread: where the pilot asks for more, these
	// are made first, and as many more as they ask for.
	manyRepeats = 64
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
	first := l.design(inflation)
	pilot, err := j.repeats(ctx, first, pilotRepeats, pilotRepeatStream, "pilot")
	if err != nil {
		return nil, err
	}
	d, n, ending := j.design(first, pilot)
	many := n > manyRepeats
	stage := fmt.Sprintf("repeats, about %.2g events", float64(n)*d.events())
	if many {
		n = manyRepeats
	}
	made, err := j.repeats(ctx, d, n, 0, stage)
	for more := many; err == nil && more; more = len(made) > n && ending == Reached {
		n = len(made)
		made, ending, err = j.goOn(ctx, d, made)
	}
	if ctx.Err() != nil && len(made) >= 2 {
		ending, err = Cancelled, nil
	}
	if err != nil {
		return nil, err
	}
	r := estimate(d, made)
	r.Ending, r.Events = ending, j.events.Load()
	if r.Rate == 0 {
		return r, &StuckError{From: j.name(p.From), To: j.name(p.To), Share: d.steps[len(d.steps)-1].share, Runs: n * d.runs[len(d.runs)-1]}
	}
	return r, nil
}

// slack asks for a few more repeats than the spread does, so that one look is mostly enough.
const slack = 1.05

// goOn makes as many more repeats as those made say that the precision takes. The mean of
// many repeats and their spread know little of each other, so that the one is not biased
// by looking at the other; few repeats are never made more.
func (j *job) goOn(ctx context.Context, d *design, made []*repeat) ([]*repeat, Ending, error) {
	r := estimate(d, made)
	if r.Rate == 0 || r.High <= r.Rate*(1+j.plan.Precision) {
		return made, Reached, nil
	}
	n := len(made)
	between := float64(n) * r.StandardError * r.StandardError / (r.Rate * r.Rate)
	more, ending := j.afford(d, max(1, repeatsFor(slack*between, j.plan.Precision)-n), 0)
	added, err := j.repeats(ctx, d, more, uint64(n), "more repeats")
	return append(made, added...), ending, err
}

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
