package ssa

import (
	"math"

	"holdfast/internal/stream"
)

// A lane is a run under way. What a rush needs comes first, side by side.
type lane struct {
	at   position // see lookup
	time float64
	// next is the time that an event may not pass without note: of the next sample
	// or of the horizon.
	next float64
	left int64 // events until the budget is spent
	run  int   // −1: the lane has no run

	// draws are those of a block; undrawn is random as it was at step first of the
	// block, when those from there on were made. See blocks.
	draws   stream.Batch
	undrawn stream.Draws
	first   int
	drawn   int

	random stream.Draws  // two numbers an event
	bursts stream.Stream // sizes of bursts
	accept stream.Stream // acceptance in Sparse
	sample int           // index of the next of Plan.Times
	counts []int64

	before [maxRows]float64 // scratch of rushes: sums of all rows before each; that before the first is 0

	scales []float64 // of the bursts whose means vary, by slot

	values, sums, ends []float64 // see direct
	classes            *classes  // see sparse
}

// never is a total propensity below which nothing is ever going to happen: the
// mean time to the next event is more than 10²⁸⁹ units of time. It keeps the
// arithmetic of what is above it clear of underflow.
const never = 0x1p-960

// These bits of a replicate tell a run's further streams from its first; they are
// above any group.
const (
	edgeStream   = 1 << 62
	burstStream  = 2 << 62
	acceptStream = 3 << 62
)

// endOfTime is later than any time a run may reach, and earlier than any event of a
// state with a total propensity below never.
const endOfTime = 0x1p800

// reset puts a run at its start.
func (s *system) reset(l *lane, run int) {
	replicate := s.Group<<40 | (s.FirstReplicate + uint64(run))
	l.run, l.time, l.sample, l.left, l.drawn = run, 0, 0, s.MaxEvents, blockSteps
	if s.MaxEvents == 0 {
		l.left = math.MaxInt64
	}
	l.random.Main = stream.New(s.Seed, s.Point, replicate)
	l.random.Edge = stream.New(s.Seed, s.Point, replicate|edgeStream)
	l.bursts = stream.New(s.Seed, s.Point, replicate|burstStream)
	l.accept = stream.New(s.Seed, s.Point, replicate|acceptStream)
	l.counts = append(l.counts[:0], s.Start...)
	s.setNext(l)
}

// events gives the events of a lane's run so far.
func (s *system) events(l *lane) int64 {
	if s.MaxEvents == 0 {
		return math.MaxInt64 - l.left
	}
	return s.MaxEvents - l.left
}

// draw gives the next of the lane's draws, for kernels that go through them lane by
// lane; drawn tells how many of the block have been used.
func (l *lane) draw() stream.Draw {
	if l.drawn == blockSteps {
		l.random.Fill(&l.draws)
		l.drawn = 0
	}
	l.drawn++
	return stream.Draw{Exp: l.draws.Exp[l.drawn-1], Unit: l.draws.Unit[l.drawn-1]}
}

// redraw makes the draws of a block from a step on.
func (l *lane) redraw(step int) {
	l.undrawn, l.first = l.random, step
	if step == 0 {
		l.random.Fill(&l.draws)
		return
	}
	for i := step; i < blockSteps; i++ {
		d := l.random.Next()
		l.draws.Exp[i], l.draws.Unit[i] = d.Exp, d.Unit
	}
}

// rewind takes back the draws for a step of a block and later ones.
func (l *lane) rewind(step int) {
	l.random, l.drawn = l.undrawn, blockSteps
	for range step - l.first {
		l.random.Next()
	}
}

func (s *system) setNext(l *lane) {
	l.next = endOfTime
	if l.sample < len(s.Times) {
		l.next = s.Times[l.sample]
	} else if s.Until > 0 {
		l.next = s.Until
	}
}

// pass gives out the samples due before time t, the time of the next event, and
// tells whether the horizon is before it too. The lane's counts must be up to date.
func (s *system) pass(l *lane, t float64) (horizon bool) {
	for l.sample < len(s.Times) && s.Times[l.sample] < t {
		s.Sample(l.run, l.sample, s.Times[l.sample], l.counts)
		l.sample++
	}
	s.setNext(l)
	return s.Until > 0 && t > s.Until
}

// fire changes counts by one firing of reaction r, and tells whether a count is
// above the limit for it.
func (s *system) fire(l *lane, r int) (over bool) {
	for _, c := range s.changes.of(r) {
		n := l.counts[c.species] + c.by
		l.counts[c.species] = n
		over = over || n > s.MaxCount
	}
	for _, b := range s.bursts.of(r) {
		scale := b.scale
		if uint32(b.slot) < uint32(len(l.scales)) {
			scale = l.scales[b.slot]
		}
		n := l.counts[b.species] + int64(min(l.bursts.Exp()*scale, maxCountLimit))
		l.counts[b.species] = n
		over = over || n > s.MaxCount
	}
	return over
}

// runaway tells whether a count is above the limit.
func (s *system) runaway(counts []int64) bool {
	for _, n := range counts {
		if n > s.MaxCount {
			return true
		}
	}
	return false
}
