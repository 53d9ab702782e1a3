package sde

import (
	"math"
	"slices"

	"holdfast/internal/stream"
	"holdfast/internal/variation"
)

// A lane is a run under way. Its coordinates are in its worker's table.
type lane struct {
	random stream.Stream
	run    int   // −1: the lane has no run
	origin int64 // the worker's clock at the run's start
	due    int64 // the clock at which a sample, the horizon or the budget is due
	sample int   // index of the next of Plan.Times
	turn   int64 // the clock at which the constants' next interval begins
	cell   *variation.Cell
}

// A worker advances the runs of one goroutine, several in lockstep.
type worker struct {
	*job
	stepper stepper
	lanes   []lane
	x       table // coordinates
	before  table // those before the last step
	z       table // the normal numbers of a block: step by step, direction by direction
	block   int   // steps in a block, a multiple of four
	clock   int64 // steps of every lane
	flagged bool  // a lane needs a look
	inputs  []inputRow

	directions int
	normals    []float64 // room for those of four lanes in a block
	counts     []int64

	finished, counted int64 // steps of finished runs; steps told to the job
}

// A stepper is the scheme for one system.
type stepper interface {
	// step advances the first lanes of the worker's table by a step, with one row of
	// normal numbers for each direction. It tells whether some coordinate is beyond the
	// limit or no number.
	step(z table, lanes int) (over bool)
}

// A table has rows, each of room numbers, one a lane.
type table struct {
	cells []float64
	room  int
}

func newTable(rows, room int) table { return table{make([]float64, rows*room), room} }

// row gives the first n lanes of row i.
func (t table) row(i, n int) []float64 { return t.cells[i*t.room : i*t.room+n] }

// rows gives the table of rows from first to before end.
func (t table) rows(first, end int) table { return table{t.cells[first*t.room : end*t.room], t.room} }

// blockNumbers is about the normal numbers of a lane in a block.
const blockNumbers = 64

// padding is what the number of lanes that are computed is a multiple of.
const padding = 4

func newWorker(j *job, lanes int) *worker {
	room := (lanes + padding - 1) / padding * padding
	directions := len(j.System.Directions())
	w := &worker{job: j, lanes: make([]lane, lanes), before: newTable(len(j.Start), room), directions: directions, counts: make([]int64, len(j.Start))}
	w.block = max(4, min(64, blockNumbers/directions)/4*4)
	w.z, w.normals = newTable(w.block*directions, room), make([]float64, padding*w.block*directions)
	w.stepper = newStepper(w, room)
	for i := range room {
		w.place(i)
	}
	return w
}

// newStepper gives the scheme that fits the system, and the worker its table.
func newStepper(w *worker, room int) stepper {
	if c, ok := w.System.(*chemical); ok {
		return newKinetic(w, c, room)
	}
	w.x = newTable(len(w.Start), room)
	return newGeneral(w)
}

// work makes runs until there are none left or the job is stopped.
func (w *worker) work() {
	for i := range w.lanes {
		w.begin(i)
	}
	for w.compact(); len(w.lanes) > 0; w.compact() {
		if w.stopped.Load() {
			w.cancel()
			return
		}
		w.advance()
		w.count()
		w.tell()
	}
}

// compact drops the lanes that have no run.
func (w *worker) compact() {
	n := 0
	for i := range w.lanes {
		if w.lanes[i].run < 0 {
			continue
		}
		if i != n {
			w.lanes[n] = w.lanes[i]
			for s := range w.Start {
				w.x.cells[s*w.x.room+n] = w.x.cells[s*w.x.room+i]
			}
			for _, r := range w.inputs {
				r.lanes[n] = r.lanes[i]
			}
		}
		n++
	}
	w.lanes = w.lanes[:n]
	for i := n; i < w.width(); i++ {
		w.place(i)
	}
}

// width is the number of lanes that are computed: those with runs, and padding.
func (w *worker) width() int { return (len(w.lanes) + padding - 1) / padding * padding }

// place puts a lane's coordinates at the start.
func (w *worker) place(i int) {
	for s, v := range w.Start {
		w.x.cells[s*w.x.room+i] = v
	}
}

// advance gives each lane a block of steps. It records runs that end, and goes on
// with those that begin then.
func (w *worker) advance() {
	w.drawAll()
	start := w.clock
	for {
		at := int(w.clock - start)
		if at == w.block {
			return
		}
		w.rush(at, int(min(int64(w.block), w.nextDue()-start)))
		w.settle(int(w.clock - start))
	}
}

// drawAll makes the normal numbers of a block, for four lanes together where there are
// as many.
func (w *worker) drawAll() {
	n := len(w.normals) / padding
	i := 0
	for ; i+padding <= len(w.lanes); i += padding {
		for k := range padding {
			w.lanes[i+k].random.FillNormal(w.normals[k*n : (k+1)*n])
		}
		columns(w.z.cells[i:], w.z.room, w.normals)
	}
	for ; i < len(w.lanes); i++ {
		w.draw(i, 0)
	}
}

// draw makes the normal numbers of a lane for the steps of a block from one on.
func (w *worker) draw(i, step int) {
	first := step * w.directions
	z := w.normals[first : w.block*w.directions]
	w.lanes[i].random.FillNormal(z)
	for k, v := range z {
		w.z.cells[(first+k)*w.z.room+i] = v
	}
}

// nextDue gives the first clock at which something is due.
func (w *worker) nextDue() int64 {
	due := int64(math.MaxInt64)
	for i := range w.lanes {
		if w.lanes[i].run >= 0 {
			due = min(due, w.lanes[i].due)
		}
	}
	return due
}

// rush takes the steps of a block from one on, up to end or to the first after
// which a lane needs a look.
func (w *worker) rush(step, end int) {
	directions, width := w.directions, w.width()
	for w.flagged = false; step < end && !w.flagged; step++ {
		copy(w.before.cells, w.x.cells)
		w.flagged = w.stepper.step(w.z.rows(step*directions, (step+1)*directions), width)
		for k := range w.targets {
			t := &w.targets[k]
			w.flagged = w.flagged || withinLanes(w.x.row(t.key, width), t.low, t.high)
		}
		w.clock++
	}
}

// settle looks after the lanes before a step of a block: it gives out what is due,
// and puts another run where one has ended.
func (w *worker) settle(step int) {
	for i := range w.lanes {
		l := &w.lanes[i]
		if l.run < 0 || !w.flagged && l.due > w.clock || w.goesOn(i) {
			continue
		}
		w.begin(i)
		if l.run >= 0 {
			w.draw(i, step)
		}
	}
}

// begin gives a lane the next run, if there is one left.
func (w *worker) begin(i int) {
	l := &w.lanes[i]
	for {
		l.run = w.take()
		w.place(i)
		if l.run < 0 {
			return
		}
		l.random = stream.New(w.Seed, w.Point, w.replicate(l.run))
		l.origin, l.sample = w.clock, 0
		w.vary(i)
		w.setDue(l)
		if w.goesOn(i) {
			return
		}
	}
}

// These bits of a replicate tell the streams of this package from those of exact
// runs, and those of runs with half the step.
const (
	langevinStream = 1 << 61
	halfStream     = 1 << 62
)

// replicate tells the random numbers of a run from those of any other.
func (w *worker) replicate(run int) uint64 {
	return w.stream | langevinStream | w.Group<<40 | (w.FirstReplicate + uint64(run))
}

// goesOn gives out what is due, and tells whether a lane's run goes on; if not, it
// is recorded.
func (w *worker) goesOn(i int) bool {
	l := &w.lanes[i]
	switch w.standing(i) {
	case NotFinite:
		w.clock--
		w.record(i, NotFinite, -1)
		w.clock++
		return false
	case RanAway:
		w.record(i, RanAway, -1)
		return false
	}
	if core := w.entered(i); core >= 0 {
		w.record(i, Flipped, core)
		return false
	}
	return l.due > w.clock || w.pass(i)
}

// standing gives NotFinite or RanAway where a lane's coordinates are so, and
// Horizon where they are not.
func (w *worker) standing(i int) Ending {
	e := Horizon
	for s := range w.Start {
		switch x := math.Abs(w.x.cells[s*w.x.room+i]); {
		case !(x <= math.MaxFloat64):
			return NotFinite
		case x > w.Limit:
			e = RanAway
		}
	}
	return e
}

// entered gives the index of the first target that holds a lane, or −1.
func (w *worker) entered(i int) int {
	if len(w.targets) == 0 {
		return -1
	}
	for s := range w.counts {
		w.counts[s] = int64(math.Round(w.x.cells[s*w.x.room+i] / w.Cell))
	}
	for k := range w.targets {
		if w.targets[k].core.Contains(w.counts) {
			return w.targets[k].index
		}
	}
	return -1
}

// pass gives out the samples that are due, and tells whether the run goes on.
func (w *worker) pass(i int) bool {
	l := &w.lanes[i]
	for l.sample < len(w.Times) && w.stepOf(w.Times[l.sample]) <= w.clock-l.origin {
		w.Sample(l.run, l.sample, w.Times[l.sample], w.state(w.normals[:0], w.x, i))
		l.sample++
	}
	w.turnOver(i)
	w.setDue(l)
	switch steps := w.clock - l.origin; {
	case w.steps > 0 && steps >= w.steps:
		w.record(i, Horizon, -1)
	case w.MaxSteps > 0 && steps >= w.MaxSteps:
		w.record(i, StepBudget, -1)
	default:
		return true
	}
	return false
}

// setDue works out when a lane next needs a look.
func (w *worker) setDue(l *lane) {
	steps := int64(math.MaxInt64 - 1)
	if w.steps > 0 {
		steps = w.steps
	}
	if w.MaxSteps > 0 {
		steps = min(steps, w.MaxSteps)
	}
	if l.sample < len(w.Times) {
		steps = min(steps, w.stepOf(w.Times[l.sample]))
	}
	l.due = math.MaxInt64
	if steps < math.MaxInt64-l.origin {
		l.due = l.origin + steps
	}
	l.due = min(l.due, l.turn)
}

// state appends a lane's coordinates to dst.
func (w *worker) state(dst []float64, t table, i int) []float64 {
	for s := range w.Start {
		dst = append(dst, t.cells[s*t.room+i])
	}
	return dst
}

// record writes down how a lane's run ended.
func (w *worker) record(i int, e Ending, core int) {
	l := &w.lanes[i]
	o := &w.outcomes[l.run]
	o.Ending, o.Core, o.Steps = e, core, w.clock-l.origin
	o.Time = w.timeOf(o.Steps)
	x := w.x
	if e == NotFinite {
		x = w.before
	}
	w.state(o.State[:0], x, i)
	if e == NotFinite {
		o.bad = w.reason(i, o)
	}
	w.finished += o.Steps
	w.done.Add(1)
}

// reason says why a lane's run has no finite next step.
func (w *worker) reason(i int, o *Outcome) *NotFiniteError {
	e := &NotFiniteError{Reaction: -1, Coordinate: -1, State: o.State, Time: o.Time}
	if c, ok := w.System.(*chemical); ok {
		if r, a, found := c.badRate(o.State, w.valuesOf(i)); found {
			e.Reaction, e.Name, e.Value = r, c.net.Reactions[r].Name, a
			return e
		}
	}
	e.Coordinate = slices.IndexFunc(w.state(nil, w.x, i), func(x float64) bool { return !(math.Abs(x) <= math.MaxFloat64) })
	e.Value = w.x.cells[e.Coordinate*w.x.room+i]
	return e
}

// count tells the job of the steps since it was last told.
func (w *worker) count() {
	total := w.finished
	for i := range w.lanes {
		if w.lanes[i].run >= 0 {
			total += w.clock - w.lanes[i].origin
		}
	}
	w.taken.Add(total - w.counted)
	w.counted = total
}

// cancel ends all runs under way.
func (w *worker) cancel() {
	for i := range w.lanes {
		w.record(i, Cancelled, -1)
	}
}
