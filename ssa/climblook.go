package ssa

import (
	"context"
	"errors"
	"fmt"
	"math"
)

// look does what a run is due where its value is not in its quiet span, and tells
// whether it goes on.
func (c *Climber) look(l *climb) bool {
	if !l.loft {
		c.tables.read(&l.at, l.counts)
	}
	if core := c.entered(l.counts); core >= 0 {
		return c.finish(l, Arrived, core)
	}
	inside := (l.out || l.value >= l.rung.Level) && l.value <= l.rung.core && c.Cores[c.From].Contains(l.counts)
	if l.out && inside {
		return c.finish(l, Fell, -1)
	}
	if !inside && !c.meet(l) {
		return c.finish(l, Climbed, -1)
	}
	if !c.keep(l) {
		return c.finish(l, Dropped, -1)
	}
	l.rung.calm(l)
	return true
}

// meet notes the rungs that a lane has come to, and tells whether one is left.
func (c *Climber) meet(l *climb) bool {
	for !l.rung.last && l.value >= l.rung.Level {
		if l.next == 0 && c.course.watching {
			c.depart(l)
		}
		l.result.Hits = append(l.result.Hits, append([]int64(nil), l.counts...))
		l.out = true
		if l.next++; l.next == len(c.course.tracks) {
			return false
		}
		l.aim(c.course.tracks[l.next])
	}
	return true
}

// aim sets the rung that is next.
func (l *climb) aim(t *track) {
	l.rung, l.adds, l.floor = t, t.adds, 0
	l.value = t.At(l.counts)
}

// keep tells whether a lane is kept at the floors that it is at or below.
func (c *Climber) keep(l *climb) bool {
	for l.floor < len(l.rung.floors) && l.value <= l.rung.floors[l.floor] {
		l.floor++
		if c.unit() >= c.course.keep {
			return false
		}
		l.result.Weight /= c.course.keep
	}
	return true
}

// A Watch says how long to watch runs in the state that the ladder leaves. A run
// that enters another core, or in which nothing can happen any more, begins again at
// the core's start.
type Watch struct {
	// Rungs are to be met in order by each excursion out of the core; at least one.
	Rungs []Rung
	// Time is how long to watch, in the network's unit, after Burn, in which the start
	// is forgotten. Walkers runs share the time; each takes the whole of Burn.
	Time, Burn float64
}

// Walkers is the number of runs that share the time of a Watch, and Stretches the
// number of families that the excursions of each of them belong to, by when they begin.
const (
	Walkers   = 4
	Stretches = 8
)

// Watch gives the excursions out of the core that began in the time watched: a Climb
// for each that has met the first rung, with the Hits that it made before it came
// back, and one for each that entered a core without having met it. An excursion
// begins when it meets the first rung; the next one can begin after the run has been in the core again.
func (c *Climber) Watch(ctx context.Context, w Watch) ([]Climb, error) {
	if !(w.Time > 0 && w.Burn >= 0 && w.Time+w.Burn < endOfTime) {
		return nil, fmt.Errorf("time is %v after %v; it must be above 0", w.Time, w.Burn)
	}
	tracks, err := c.tracks(Stage{Rungs: w.Rungs, Open: true})
	if err != nil {
		return nil, err
	}
	if len(w.Rungs) == 0 {
		return nil, errors.New("a watch needs a rung")
	}
	if c.still() {
		return nil, ErrStill
	}
	c.course = &course{tracks: tracks, watching: true, burn: w.Burn}
	c.active = Walkers
	for i := range c.lanes[:Walkers] {
		l := &c.lanes[i]
		l.number, l.time, l.until, l.timed = i, 0, w.Burn+w.Time/Walkers, true
		if !c.restart(l) {
			l.number = -1
		}
	}
	err = c.walk(ctx)
	return c.course.climbs, err
}

// ErrStill is the error of watching a state whose start nothing leads out of.
var ErrStill = errors.New("no event can happen at the core's start")

// still tells whether nothing can happen at the core's start.
func (c *Climber) still() bool {
	total := 0.0
	for r := range c.props {
		total += c.props[r].at(c.Start)
	}
	return total < never
}

// restart puts a watched run at the core's start.
func (c *Climber) restart(l *climb) bool {
	copy(l.counts, c.Start)
	return c.settle(l) && c.rearm(l)
}

// rearm makes a watched run ready for its next excursion.
func (c *Climber) rearm(l *climb) bool {
	l.next, l.out, l.result = 0, false, Climb{Core: -1, Weight: 1, Family: -1}
	l.aim(c.course.tracks[0])
	l.rung.calm(l)
	return true
}

// depart notes when an excursion began.
func (c *Climber) depart(l *climb) {
	if l.time <= c.course.burn {
		l.result.Weight = 0
		return
	}
	share := (l.time - c.course.burn) / (l.until - c.course.burn)
	l.result.Family = l.number*Stretches + int(math.Min(share*Stretches, Stretches-1))
}

// excursion records the excursion of a watched run that has ended, and goes on with
// the run.
func (c *Climber) excursion(l *climb) bool {
	if len(l.result.Hits) == 0 && l.result.Ending == Arrived {
		c.depart(l)
	}
	if l.result.Weight > 0 && (len(l.result.Hits) > 0 || l.result.Ending != Fell) {
		c.course.climbs = append(c.course.climbs, l.result)
	}
	if l.result.Ending == Fell {
		return c.rearm(l)
	}
	return c.restart(l)
}

// expire ends a watched run whose time is over.
func (c *Climber) expire(l *climb) bool {
	if l.result.Weight > 0 && len(l.result.Hits) > 0 {
		c.course.climbs = append(c.course.climbs, l.result)
	}
	l.number = -1
	return false
}
