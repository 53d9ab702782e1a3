package ssa

import (
	"context"
	"runtime"
	"sync"
	"sync/atomic"
	"time"
)

// A job is the work of one Run: a queue of runs and their outcomes.
type job struct {
	*system
	kernel   func(*worker) kernel
	outcomes []Outcome
	queue    atomic.Int64 // runs taken
	stopped  atomic.Bool
	done     atomic.Int64 // runs finished
	fired    atomic.Int64 // events so far

	telling sync.Mutex
	told    time.Time
}

// Run makes the plan's runs. An error without outcomes means that the plan is
// not usable; if the context is done before the runs are, the outcomes so far
// come with the context's cause. How each run ended is told by its Outcome, and
// is no error of Run.
func Run(ctx context.Context, p Plan) (Result, error) {
	p, err := p.normal()
	if err != nil {
		return Result{}, err
	}
	j := newJob(newSystem(p))
	release := context.AfterFunc(ctx, func() { j.stopped.Store(true) })
	defer release()
	if ctx.Err() != nil {
		j.stopped.Store(true)
	}
	j.work()
	return j.result(ctx)
}

// newJob lays out outcomes that say that no run has begun.
func newJob(s *system) *job {
	j := &job{system: s, kernel: s.kernelOf(), outcomes: make([]Outcome, s.Runs)}
	n := len(s.Start)
	counts := make([]int64, s.Runs*n)
	for i := range j.outcomes {
		c := counts[i*n : (i+1)*n : (i+1)*n]
		copy(c, s.Start)
		j.outcomes[i] = Outcome{Replicate: s.FirstReplicate + uint64(i), Ending: Cancelled, Core: -1, Counts: c}
	}
	return j
}

// work spreads the runs over goroutines.
func (j *job) work() {
	threads := j.Threads
	if threads == 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	threads = min(threads, j.Runs)
	var group sync.WaitGroup
	for range threads {
		lanes := min(j.lanesOf(), (j.Runs+threads-1)/threads)
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
	r := Result{Outcomes: j.outcomes}
	var err error
	for i := range r.Outcomes {
		r.Events += r.Outcomes[i].Events
		if r.Outcomes[i].Ending == Cancelled {
			err = context.Cause(ctx)
		}
	}
	if j.Progress != nil {
		j.Progress(int(j.done.Load()), r.Events)
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
		j.Progress(int(j.done.Load()), j.fired.Load())
	}
}
