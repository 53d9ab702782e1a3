package ssa

import (
	"math"

	"holdfast/internal/stream"
)

// climbLanes is the number of runs of a stage that are advanced in turn, so that
// the latencies of one are spent on the others. The random numbers are dealt out in
// turn too, so that it settles the outcomes.
const climbLanes = 8

// A Climber makes staged runs on a ladder, for one goroutine.
//
// Only which reaction fires next is drawn; the time that a state lasts is taken at
// its mean. That changes neither which states a path meets nor, once the start is
// forgotten, how often they are met in a unit of time, and makes less noise.
type Climber struct {
	*system
	props   []propensity
	tables  *sheets // nil: none
	touched [][]int // groups that a firing of each reaction may change
	bursty  []bool  // by place
	random  stream.Stream
	sizes   stream.Stream
	units   stream.Units
	used    int
	lanes   [climbLanes]climb
	active  int
	events  int64
	course  *course
}

// These bits of a replicate tell the streams of staged runs from those of others.
const (
	stagedStream = 1 << 38
	// Streams is the number of different streams that Climber.Reset knows.
	Streams = 1 << 38
)

// NewClimber prepares staged runs on a ladder; an error says what is wrong with it.
// Reset gives it its random numbers.
func NewClimber(l Ladder) (*Climber, error) {
	s, err := l.system()
	if err != nil {
		return nil, err
	}
	c := &Climber{system: s, tables: newSheets(s)}
	for r := range s.Network.Reactions {
		c.props = append(c.props, newPropensity(s.Network, r))
	}
	c.setTouched()
	c.setBursty()
	for i := range c.lanes {
		c.lanes[i].counts = make([]int64, len(s.Start))
		c.lanes[i].own = make([]cell, len(s.groups))
		c.lanes[i].ends = make([]float64, len(s.groups))
	}
	return c, nil
}

// setTouched finds the groups that each reaction may change.
func (c *Climber) setTouched() {
	group := make([]int, len(c.Network.Reactions))
	for g := range c.groups {
		for _, r := range c.groups[g].reactions {
			group[r] = g
		}
	}
	for r := range c.Network.Reactions {
		var groups []int
		seen := make(map[int]bool)
		for _, d := range c.dependents.of(r) {
			if g := group[d]; !seen[g] {
				seen[g] = true
				groups = append(groups, g)
			}
		}
		c.touched = append(c.touched, groups)
	}
}

// setBursty marks the places of reactions with random products.
func (c *Climber) setBursty() {
	c.bursty = make([]bool, len(c.groups)*groupWidth)
	for g := range c.groups {
		for j, r := range c.groups[g].reactions {
			c.bursty[g*groupWidth+j] = len(c.bursts.of(r)) > 0
		}
	}
}

// Reset gives the climber the random numbers of one repeat, below Streams, of a
// group below 2²². What it does from then on depends on them, on its ladder and on
// what it is asked to do only.
func (c *Climber) Reset(seed, point, group, repeat uint64) {
	replicate := group<<40 | 1<<39 | repeat
	c.random = stream.New(seed, point, replicate|stagedStream)
	c.sizes = stream.New(seed, point, replicate|stagedStream|burstStream)
	c.used = len(c.units)
}

// Events gives the number of reaction firings so far.
func (c *Climber) Events() int64 { return c.events }

// unit gives the next uniform number.
func (c *Climber) unit() float64 {
	if c.used == len(c.units) {
		c.random.FillUnits(&c.units)
		c.used = 0
	}
	c.used++
	return c.units[c.used-1]
}

// A climb is a run under way.
type climb struct {
	at   [maxSheets]uint32 // with tables
	own  []cell            // without
	loft bool              // the run is beyond the tables
	// counts are up to date only where care is taken, but for runs without tables.
	counts []int64
	value  int64 // weights·counts of the rung that is next
	// quiet is the span of values, both ends excluded, in which a run goes on
	// without care.
	low, high   int64
	rung        *track
	adds        []int64 // the rung's
	next        int     // index of the rung that is next
	floor       int     // index of the floor that is next
	number      int     // index of the run
	out         bool    // the core has been left since the last excursion began
	timed       bool
	time, until float64   // where timed
	ends        []float64 // scratch of runs without tables
	result      Climb
}

// A track is a rung worked out for a ladder.
type track struct {
	*Rung
	pair   [4]int64 // see rushPair
	adds   []int64  // what a firing adds to the value, but for bursts, by place
	core   int64    // no state of the core From has a value above
	others [][2]int64
	floors []int64
	last   bool // there is no rung to reach any more
}

// newTrack prepares a rung.
func (s *system) newTrack(r *Rung, floors []int64, last bool) *track {
	t := &track{Rung: r, adds: make([]int64, len(s.groups)*groupWidth), floors: floors, last: last}
	for g := range s.groups {
		for j, reaction := range s.groups[g].reactions {
			for _, c := range s.changes.of(reaction) {
				t.adds[g*groupWidth+j] += r.Weights[c.species] * c.by
			}
		}
	}
	for r, p := range pairPlaces {
		if p < len(t.adds) {
			t.pair[r] = t.adds[p]
		}
	}
	_, t.core = span(&s.Cores[s.From], r.Weights)
	for i := range s.targets {
		low, high := span(s.targets[i].core, r.Weights)
		t.others = append(t.others, [2]int64{low, high})
	}
	return t
}

// calm sets the span of values around the present one in which nothing can happen.
func (t *track) calm(l *climb) {
	l.low, l.high = math.MinInt64, math.MaxInt64
	if !t.last {
		l.high = t.Level
	}
	if l.out {
		l.low = t.core
	}
	if l.floor < len(t.floors) {
		l.low = max(l.low, t.floors[l.floor])
	}
	for _, o := range t.others {
		switch {
		case l.value < o[0]:
			l.high = min(l.high, o[0])
		case l.value > o[1]:
			l.low = max(l.low, o[1])
		default:
			l.low, l.high = l.value, l.value // care at every event
			return
		}
	}
}

// Draw gives a uniform number in [0, 1) of the climber's own, for dealing out starts.
func (c *Climber) Draw() float64 { return c.unit() }
