package batch

import (
	"context"
	"errors"
	"runtime"
	"sync"
	"time"
)

// A worker makes the points of a shard that are not there yet.
type worker struct {
	Job
	store    *store
	progress Progress
	todo     []int // indices of points
	begun    time.Time
	made     int
}

// run makes them and keeps each. Points are made by several goroutines and written by
// one, which takes all that have gathered while it wrote: so no goroutine waits for the
// disk.
func (w *worker) run(ctx context.Context) (Progress, error) {
	if err := w.survey(ctx); err != nil {
		return w.progress, err
	}
	w.tell()
	w.begun = time.Now()
	ctx, cancel := context.WithCancelCause(ctx)
	defer cancel(nil)
	done := make(chan *answer, 64)
	go w.compute(ctx, cancel, done)
	for a := range done {
		answers := gather(a, done)
		if context.Cause(ctx) != nil && !errors.Is(context.Cause(ctx), context.Canceled) {
			continue // the disk takes no more; what comes now is made again
		}
		if err := w.store.put(answers); err != nil {
			cancel(err)
			continue
		}
		w.count(answers)
	}
	return w.progress, context.Cause(ctx)
}

// gather takes what waits on the channel besides the first.
func gather(first *answer, more <-chan *answer) []*answer {
	out := []*answer{first}
	for {
		select {
		case a, ok := <-more:
			if !ok {
				return out
			}
			out = append(out, a)
		default:
			return out
		}
	}
}

// survey looks which points are there.
func (w *worker) survey(ctx context.Context) error {
	for i := range w.Points.Len() {
		number := int64(i) + 1
		if !w.Shard.Has(number) {
			continue
		}
		if ctx.Err() != nil {
			return context.Cause(ctx)
		}
		w.progress.Points++
		a, err := w.store.get(number)
		switch {
		case errors.Is(err, errDamaged):
			w.progress.Damaged++
			w.todo = append(w.todo, i)
		case err != nil:
			return err
		case a == nil:
			w.todo = append(w.todo, i)
		default:
			w.add(a)
		}
	}
	w.todo = spread(w.todo)
	return nil
}

func (w *worker) add(a *answer) {
	w.progress.Done++
	if a.Status == Failed {
		w.progress.Failed++
	}
}

// spread puts the points into an order in which those made so far are a fair sample of
// all, so that the time left can be told from them: steps of about the golden section.
func spread(todo []int) []int {
	n := len(todo)
	step := max(1, int(0.6180339887*float64(n)))
	for gcd(step, n) > 1 {
		step++
	}
	out := make([]int, n)
	for i := range out {
		out[i] = todo[i*step%n]
	}
	return out
}

func gcd(a, b int) int {
	for b != 0 {
		a, b = b, a%b
	}
	return a
}

// compute makes the points on several goroutines and closes done.
func (w *worker) compute(ctx context.Context, cancel context.CancelCauseFunc, done chan<- *answer) {
	threads := w.Threads
	if threads == 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	var wait sync.WaitGroup
	var lock sync.Mutex
	next := 0
	for range min(threads, len(w.todo)) {
		wait.Go(func() {
			for ctx.Err() == nil {
				lock.Lock()
				k := next
				next++
				lock.Unlock()
				if k >= len(w.todo) {
					return
				}
				o := w.Hold
				o.Threads, o.Folder, o.Progress, o.Notice = max(1, threads/len(w.todo)), "", nil, nil
				a, err := compute(ctx, w.Points, w.Size, o, w.Points.At(w.todo[k]))
				if err != nil {
					cancel(err)
					return
				}
				done <- a
			}
		})
	}
	wait.Wait()
	close(done)
}

// count takes note of points that were kept.
func (w *worker) count(answers []*answer) {
	for _, a := range answers {
		w.add(a)
	}
	w.made += len(answers)
	if left := len(w.todo) - w.made; left >= 0 {
		pace := time.Since(w.begun).Seconds() / float64(w.made)
		w.progress.Left = time.Duration(pace * float64(left) * float64(time.Second))
	}
	w.tell()
}

func (w *worker) tell() {
	if w.Progress != nil {
		w.Progress(w.progress)
	}
}
