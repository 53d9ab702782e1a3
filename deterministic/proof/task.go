package proof

import (
	"context"
	"fmt"
	"slices"
	"sync"

	"holdfast/model"
)

// A task is a proof in progress.
type task struct {
	network *model.Network
	totals  []model.Total
	values  []float64
	bounds  box       // what is searched
	reach   box       // a little more, so that a state on an edge can be enclosed
	most    []float64 // the largest amounts that come into question
	width   float64
	system  *system

	mutex sync.Mutex
	faces map[string]*system
}

// face gives the system with the largest set of the absent species at 0 that would
// stay there; ok is false where there is none.
func (t *task) face(absent []bool) (s *system, ok bool) {
	t.mutex.Lock()
	defer t.mutex.Unlock()
	key := fmt.Sprint(absent)
	if s, ok := t.faces[key]; ok {
		return s, s != nil
	}
	s = t.buildFace(slices.Clone(absent))
	t.faces[key] = s
	return s, s != nil
}

func (t *task) buildFace(absent []bool) *system {
	for slices.Contains(absent, true) {
		left, err := leaving(t.network, absent)
		if err != nil {
			return nil
		}
		if left < 0 {
			s, ok, err := newSystem(t.network, t.totals, t.values, absent, none)
			if !ok || err != nil {
				return nil
			}
			return s
		}
		absent[left] = false
	}
	return nil
}

// batch is the number of boxes that are examined side by side. The states known to
// each are those found in earlier batches, so the outcome does not depend on the
// number of threads.
const batch = 32

// search examines the parts of the box start, which it changes, until none are
// left, or the limit is reached.
func (t *task) search(ctx context.Context, start box, limit, threads int) (out *outcome) {
	out = &outcome{task: t}
	workers := make([]*examiner, threads)
	for i := range workers {
		workers[i] = &examiner{newWorker(t.system), t}
	}
	if workers[0].narrow(start, 1e-3, 1000) {
		return out
	}
	t.most = make([]float64, len(start))
	for i, a := range start {
		t.most[i] = a.Hi
	}
	stack := []box{start}
	for len(stack) > 0 {
		if ctx.Err() != nil {
			out.ending, out.left = Cancelled, stack
			return out
		}
		if out.boxes >= limit {
			out.ending, out.left = OutOfBoxes, stack
			return out
		}
		n := min(batch, len(stack))
		todo := slices.Clone(stack[len(stack)-n:])
		stack = stack[:len(stack)-n]
		out.boxes += n
		for _, r := range examineAll(workers, todo, out) {
			stack = append(stack, out.take(r)...)
		}
	}
	return out
}

// examineAll examines the boxes and gives the reports in the same order.
func examineAll(workers []*examiner, todo []box, so *outcome) []report {
	out, known, heaps := make([]report, len(todo)), so.known, so.heaps
	if len(todo) < 8 || len(workers) == 1 {
		for i, b := range todo {
			out[i] = workers[0].examine(b, known, heaps)
		}
		return out
	}
	var wait sync.WaitGroup
	for k, e := range workers {
		wait.Go(func() {
			for i := k; i < len(todo); i += len(workers) {
				out[i] = e.examine(todo[i], known, heaps)
			}
		})
	}
	wait.Wait()
	return out
}
