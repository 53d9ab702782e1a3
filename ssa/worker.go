package ssa

import "math"

// A worker advances the runs of one goroutine, several at a time.
type worker struct {
	*job
	kernel kernel
	props  []propensity
	lanes  []lane

	finished, counted int64 // events of finished runs; events told to the job
}

// A kernel is the loop over events of one algorithm.
type kernel interface {
	// enter makes the kernel ready to go on from a lane's counts. It tells whether
	// the run goes on; one that ends where it starts has been recorded.
	enter(l *lane) bool
	// leave brings a lane's counts up to date.
	leave(l *lane)
	// advance gives each lane, all of which have runs, some tens to thousands of
	// events. It records runs that end, and goes on with those that begin then.
	advance(lanes []lane)
}

// turn is the number of events that a kernel gives to one lane before it goes to
// the next.
const turn = 512

func newWorker(j *job, lanes int) *worker {
	w := &worker{job: j, lanes: make([]lane, lanes)}
	for r := range j.Network.Reactions {
		w.props = append(w.props, newPropensity(j.Network, r))
	}
	for i := range w.lanes {
		w.lanes[i].run = -1
		w.lanes[i].counts = make([]int64, len(j.Start))
	}
	w.kernel = j.kernel(w)
	return w
}

// work makes runs until there are none left or the job is stopped.
func (w *worker) work() {
	for i := range w.lanes {
		w.begin(&w.lanes[i])
	}
	for w.compact(); len(w.lanes) > 0; w.compact() {
		if w.stopped.Load() {
			w.cancel()
			return
		}
		w.kernel.advance(w.lanes)
		w.count()
		w.tell()
	}
}

// compact drops the lanes that have no run. It moves none in vain: a lane is large.
func (w *worker) compact() {
	n := 0
	for i := range w.lanes {
		if w.lanes[i].run < 0 {
			continue
		}
		if i != n {
			w.lanes[n], w.lanes[i] = w.lanes[i], w.lanes[n]
		}
		n++
	}
	w.lanes = w.lanes[:n]
}

// begin gives a lane the next run, if there is one left.
func (w *worker) begin(l *lane) {
	for {
		l.run = w.take()
		if l.run < 0 {
			return
		}
		w.reset(l, l.run)
		if w.kernel.enter(l) {
			return
		}
	}
}

// record writes down how a lane's run ended. The lane's counts must be up to date.
func (w *worker) record(l *lane, e Ending, core int, rate *badRate) {
	o := &w.outcomes[l.run]
	o.Ending, o.Core, o.Time, o.Events, o.bad = e, core, l.time, w.events(l), rate
	copy(o.Counts, l.counts)
	w.finished += o.Events
	w.done.Add(1)
}

// count tells the job of the events since it was last told.
func (w *worker) count() {
	total := w.finished
	for i := range w.lanes {
		if w.lanes[i].run >= 0 {
			total += w.events(&w.lanes[i])
		}
	}
	w.fired.Add(total - w.counted)
	w.counted = total
}

// late gives out what is due before time t, the time of the lane's next event,
// and tells whether the run goes on; one that has reached the horizon is recorded.
func (w *worker) late(l *lane, t float64) bool {
	if !w.pass(l, t) {
		return true
	}
	l.time = w.Until
	w.record(l, Horizon, -1, nil)
	return false
}

// goesOn is settle for a lane of which only what the last firing changed need be
// looked at: over tells whether it took a count above the limit.
func (w *worker) goesOn(l *lane, over bool, total float64) bool {
	if !over && total >= never && total <= math.MaxFloat64 && l.left != 0 && w.entered(l.counts) < 0 {
		return true
	}
	return w.settle(l, total)
}

// settle tells whether a run goes on from the lane's counts, whose propensities
// sum to total; if not, it is recorded. A NaN total means that a rate is bad.
func (w *worker) settle(l *lane, total float64) bool {
	if core := w.entered(l.counts); core >= 0 {
		w.record(l, Flipped, core, nil)
		return false
	}
	switch {
	case w.runaway(l.counts):
		w.record(l, RanAway, -1, nil)
	case !(total <= math.MaxFloat64):
		w.record(l, BadRate, -1, w.badRate(l.counts))
	case total < never && !w.wakes(l.counts):
		w.pass(l, math.Inf(1))
		w.record(l, Absorbed, -1, nil)
	case l.left == 0:
		w.record(l, EventBudget, -1, nil)
	default:
		return true
	}
	return false
}

// cancel ends all runs under way.
func (w *worker) cancel() {
	for i := range w.lanes {
		l := &w.lanes[i]
		w.kernel.leave(l)
		w.record(l, Cancelled, -1, nil)
	}
}

// badRate names the rate that makes counts a state no run may be in, or gives
// nil. A sum of propensities that is not finite is laid to the largest one.
func (w *worker) badRate(counts []int64) *badRate {
	worst := badRate{value: -1}
	for _, g := range w.groups {
		for _, r := range g.reactions {
			a := w.props[r].at(counts)
			if bad(a) {
				return w.rate(r, a)
			}
			if a > worst.value {
				worst.reaction, worst.value = r, a
			}
		}
	}
	return w.rate(worst.reaction, worst.value)
}

func (w *worker) rate(r int, a float64) *badRate {
	return &badRate{w.Network.Reactions[r].Name, r, a}
}
