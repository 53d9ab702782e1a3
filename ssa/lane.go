package ssa

import (
	"math"

	"holdfast/internal/stream"
)

// A lane is a run under way.
type lane struct {
	random stream.Stream
	time   float64
	// next is the time that an event may not pass without note: of the next sample
	// or of the horizon.
	next float64
	left int64 // events until the budget is spent
	run  int   // −1: the lane has no run
	// sample is the index of the next of Plan.Times.
	sample int
	counts []int64
	bursts stream.Stream

	values, sums, ends []float64 // see direct
	classes            *classes  // see sparse
}

// never is a total propensity below which nothing is ever going to happen: the
// mean time to the next event is more than 10²⁸⁹ units of time. It keeps the
// arithmetic of what is above it clear of underflow.
const never = 0x1p-960

// burstStream tells a run's burst sizes from its other random numbers; it is
// above any group and replicate.
const burstStream = 1 << 63

// reset puts a run at its start.
func (s *system) reset(l *lane, run int) {
	replicate := s.Group<<40 | (s.FirstReplicate + uint64(run))
	l.run, l.time, l.sample, l.left = run, 0, 0, s.MaxEvents
	if s.MaxEvents == 0 {
		l.left = math.MaxInt64
	}
	l.random = stream.New(s.Seed, s.Point, replicate)
	l.bursts = stream.New(s.Seed, s.Point, replicate|burstStream)
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

func (s *system) setNext(l *lane) {
	l.next = math.Inf(1)
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

// fire changes counts by one firing of reaction r.
func (s *system) fire(l *lane, r int) {
	for _, c := range s.changes[r] {
		l.counts[c.species] += c.by
	}
	for _, b := range s.bursts[r] {
		l.counts[b.species] += int64(min(l.bursts.Exp()*b.scale, maxCountLimit))
	}
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
