package sde

import (
	"context"
	"runtime"
	"sync"
	"sync/atomic"
	"time"

	"holdfast/model"
)

// A job is the work of one Run: a queue of runs and their outcomes.
type job struct {
	Plan
	targets  []target
	varies   *vary // the constants; nil: none does
	outcomes []Outcome
	queue    atomic.Int64 // runs taken
	stopped  atomic.Bool
	done     atomic.Int64 // runs finished
	taken    atomic.Int64 // steps so far

	telling sync.Mutex
	told    time.Time
}

// Run makes the plan's runs. An error without outcomes means that the plan is not
// usable, a *StepError that its step is too large; if the context is done before
// the runs are, the outcomes so far come with the context's cause. How each run
// ended is told by its Outcome, and is no error of Run.
func Run(ctx context.Context, p Plan) (Result, error) {
	p, err := p.normal()
	if err != nil {
		return Result{}, err
	}
	j := newJob(p)
	release := context.AfterFunc(ctx, func() { j.stopped.Store(true) })
	defer release()
	if ctx.Err() != nil {
		j.stopped.Store(true)
	}
	j.work()
	return j.result(ctx)
}

// newJob lays out outcomes that say that no run has begun.
func newJob(p Plan) *job {
	j := &job{Plan: p, targets: newTargets(&p), varies: newVary(&p), outcomes: make([]Outcome, p.Runs)}
	n := len(p.Start)
	states := make([]float64, p.Runs*n)
	for i := range j.outcomes {
		x := states[i*n : (i+1)*n : (i+1)*n]
		copy(x, p.Start)
		j.outcomes[i] = Outcome{Replicate: p.FirstReplicate + uint64(i), Ending: Cancelled, Core: -1, State: x}
	}
	return j
}

// defaultLanes are enough to hide what a loop over them costs to begin, and few
// enough for their numbers to stay in the fastest cache.
const defaultLanes = 32

// work spreads the runs over goroutines.
func (j *job) work() {
	threads := j.Threads
	if threads == 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	threads = min(threads, j.Runs)
	lanes := j.Lanes
	if lanes == 0 {
		lanes = defaultLanes
	}
	var group sync.WaitGroup
	for range threads {
		lanes := min(lanes, (j.Runs+threads-1)/threads)
		group.Go(func() { newWorker(j, lanes).work() })
	}
	group.Wait()
}

// take gives the next run, or −1 where none is left or none is wanted.
func (j *job) take() int {
	if j.stopped.Load() {
		return -1
	}
	if n := j.queue.Add(1); n <= int64(j.Runs) {
		return int(n - 1)
	}
	return -1
}

// result sums up, with the context's cause if a run was cancelled.
func (j *job) result(ctx context.Context) (Result, error) {
	r := Result{Outcomes: j.outcomes, Step: j.Step}
	var err error
	for i := range r.Outcomes {
		o := &r.Outcomes[i]
		r.Steps += o.Steps
		switch o.Ending {
		case Cancelled:
			err = context.Cause(ctx)
		case NotFinite, RanAway:
			r.Lost++
		}
	}
	if j.Progress != nil {
		j.Progress(int(j.done.Load()), r.Steps)
	}
	return r, err
}

// tellEvery is the least time between two calls of Plan.Progress.
const tellEvery = 50 * time.Millisecond

// tell reports progress if it is time to.
func (j *job) tell() {
	if j.Progress == nil || !j.telling.TryLock() {
		return
	}
	defer j.telling.Unlock()
	if now := time.Now(); now.Sub(j.told) >= tellEvery {
		j.told = now
		j.Progress(int(j.done.Load()), j.taken.Load())
	}
}

// A target is a core that ends a run.
type target struct {
	index int
	core  *model.Core
	// key is the coordinate most likely to tell that a path is not in the core,
	// which lies from low to high.
	key       int
	low, high float64
}

// newTargets lists the cores other than From.
func newTargets(p *Plan) []target {
	var out []target
	for i := range p.Cores {
		if i == p.From {
			continue
		}
		c := &p.Cores[i]
		t := target{index: i, core: c}
		for s := range c.Low {
			if p.From >= 0 && gap(c, &p.Cores[p.From], s) > gap(c, &p.Cores[p.From], t.key) {
				t.key = s
			}
		}
		t.low, t.high = (float64(c.Low[t.key])-0.5)*p.Cell, (float64(c.High[t.key])+0.5)*p.Cell
		out = append(out, t)
	}
	return out
}

// gap is the distance between two cores' ranges of a coordinate; negative where
// they overlap.
func gap(a, b *model.Core, s int) float64 {
	return max(float64(a.Low[s])-float64(b.High[s]), float64(b.Low[s])-float64(a.High[s]))
}
