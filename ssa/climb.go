package ssa

import (
	"context"
	"errors"
)

// A Stage is what the runs of one stage have to do: meet Rungs in order.
//
// Runs end on coming back into the core that the ladder leaves, on entering another,
// and, unless Open, on reaching the last rung.
type Stage struct {
	Rungs []Rung
	// Open runs go on after the last rung until they enter a core. An open stage may
	// be without rungs; Guide is then what its floors are measured by.
	Open  bool
	Guide Rung
	// Floors, descending, are values of the first rung, or of Guide if there is none.
	// A run that is at or below the next of them is kept with the probability Keep,
	// above 0, and then stands for 1/Keep runs as many; otherwise it is dropped. No
	// floors: runs are always kept. They serve stages of at most one rung.
	Floors []int64
	Keep   float64
}

// ErrFloors is the error of a stage whose floors cannot be.
var ErrFloors = errors.New("a stage has floors, but keeps nothing below them or has several rungs")

// tracks works out the rungs of a stage, and the guide of an open one.
func (c *Climber) tracks(s Stage) ([]*track, error) {
	if len(s.Floors) > 0 && (!(s.Keep > 0 && s.Keep <= 1) || len(s.Rungs) > 1) {
		return nil, ErrFloors
	}
	rungs := s.Rungs
	if s.Open {
		guide := s.Guide
		if n := len(rungs); n > 0 {
			guide = rungs[n-1]
		}
		rungs = append(rungs[:len(rungs):len(rungs)], guide)
	}
	if err := c.checkRungs(rungs); err != nil {
		return nil, err
	}
	var out []*track
	for k := range rungs {
		t := c.newTrack(&rungs[k], nil, s.Open && k == len(rungs)-1)
		if k == 0 {
			t.floors = s.Floors
		}
		out = append(out, t)
	}
	return out, nil
}

// A course is a stage, or a watch, under way.
type course struct {
	tracks []*track
	keep   float64
	starts []Perch
	taken  int
	climbs []Climb

	watching bool
	burn     float64
	err      error
}

// Climb makes a run of the stage from each of the starts, and tells what became of
// each. It stops with the context's cause if ctx is done before; a rate that is no
// rate and a count that runs away are errors too.
func (c *Climber) Climb(ctx context.Context, s Stage, starts []Perch) ([]Climb, error) {
	tracks, err := c.tracks(s)
	if err != nil {
		return nil, err
	}
	c.course = &course{tracks: tracks, keep: s.Keep, starts: starts, climbs: make([]Climb, len(starts))}
	c.active = min(climbLanes, len(starts))
	for i := range c.lanes[:c.active] {
		c.lanes[i].number = -1 // before board ends early, too: a lane left as it was would run on
	}
	for i := range c.lanes[:c.active] {
		if !c.board(&c.lanes[i]) {
			break
		}
	}
	err = c.walk(ctx)
	return c.course.climbs, err
}

// patience is the number of pauses after which the context is looked at.
const patience = 1024

// walk advances the lanes in turn until none has a run.
func (c *Climber) walk(ctx context.Context) error {
	c.compact()
	pair := c.isPair()
	for i, pauses := 0, 0; c.active > 0 && c.course.err == nil; pauses++ {
		if pauses%patience == 0 && ctx.Err() != nil {
			return context.Cause(ctx)
		}
		why := due
		if i >= c.active {
			i = 0
		}
		if pair && c.tables != nil {
			i, why = c.rushPair(i)
		}
		l := &c.lanes[i]
		goesOn := why == noted && c.look(l) || why == due && c.event(l)
		if goesOn || c.board(l) {
			i++
		} else {
			c.active--
			c.lanes[i], c.lanes[c.active] = c.lanes[c.active], c.lanes[i]
		}
	}
	return c.course.err
}

// compact drops the lanes that have no run.
func (c *Climber) compact() {
	n := 0
	for i := range c.lanes[:c.active] {
		if c.lanes[i].number >= 0 {
			c.lanes[n], c.lanes[i] = c.lanes[i], c.lanes[n]
			n++
		}
	}
	c.active = n
}

// board gives a lane the next run that goes on from its start, if there is one.
func (c *Climber) board(l *climb) bool {
	for l.number = -1; !c.course.watching && c.course.taken < len(c.course.starts) && c.course.err == nil; {
		p := &c.course.starts[c.course.taken]
		l.number = c.course.taken
		c.course.taken++
		l.result = Climb{Core: -1, Weight: p.Weight, Family: p.Family}
		l.timed, l.next, l.out = false, 0, true
		copy(l.counts, p.Counts)
		l.aim(c.course.tracks[0])
		if c.settle(l) && c.look(l) {
			return true
		}
		l.number = -1
	}
	return false
}

// settle puts a lane in its place by its counts.
func (c *Climber) settle(l *climb) bool {
	l.loft = true
	if c.tables != nil {
		at, within := c.tables.place(l.counts)
		if !within {
			return c.widen(l)
		}
		l.at, l.loft = at, false
	}
	if l.loft {
		for g := range c.groups {
			l.own[g].sum(c.groups[g].reactions, c.props, l.counts)
		}
	}
	return true
}

// widen makes the tables hold the counts of a lane, or puts it beyond them.
func (c *Climber) widen(l *climb) bool {
	if c.runaway(l.counts) {
		c.course.err = newRunawayError(append([]int64(nil), l.counts...), l.time)
		l.number = -1
		return false
	}
	for i := range c.lanes[:c.active] {
		if m := &c.lanes[i]; m != l && m.number >= 0 && !m.loft {
			c.tables.read(&m.at, m.counts)
		}
	}
	larger := *c.tables
	larger.sheets = append([]sheet(nil), c.tables.sheets...)
	if !larger.hold(c.system, l.counts) {
		c.tables = nil
	} else {
		c.tables = &larger
	}
	for i := range c.lanes[:c.active] {
		if m := &c.lanes[i]; m != l && m.number >= 0 && !m.loft {
			c.settle(m)
		}
	}
	return c.settle(l)
}

// finish records how a lane's run ended; the lane is then free.
func (c *Climber) finish(l *climb, e ClimbEnding, core int) bool {
	l.result.Ending, l.result.Core = e, core
	if c.course.watching {
		return c.excursion(l)
	}
	c.course.climbs[l.number] = l.result
	l.number = -1
	return false
}
