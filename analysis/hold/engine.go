package hold

import (
	"context"

	"holdfast/analysis/dwell"
)

// An engine makes the runs of a sampled route. All that is done with them, from the
// pilot to the records, is the same for every engine.
type engine struct {
	route string
	work  string // what a run's work is counted in: events, steps
	run   func(ctx context.Context, b batch) (made, error)
}

// A batch is some runs of one state.
type batch struct {
	state int
	first uint64 // replicate of the first run
	runs  int
	most  int64 // work of one run; 0: no limit
	// progress, if not nil, is told the runs done and their work.
	progress func(done int, work int64)
}

// made is what became of a batch.
type made struct {
	paths []path
	work  int64
	stops bool // the context was done before the runs were
}

// A fate is how a run ended.
type fate uint8

const (
	byFlip       fate = iota
	byAbsorption      // nothing can happen any more
	byLimit
	byStop  // the context was done
	byFault // nothing may be concluded from it
)

// A path is what became of one run.
type path struct {
	replicate uint64
	fate      fate
	core      int    // entered, if by a flip
	ending    string // in words
	time      float64
	work      int64
	err       error // what went wrong, if by a fault
}

// observation is what the path says about the dwell.
func (j *job) observation(p *path) dwell.Observation {
	switch p.fate {
	case byFlip:
		return dwell.Observation{To: p.core, Absorbed: j.survey.Stable()[p.core].Absorbing, Time: p.time}
	case byAbsorption:
		return dwell.Observation{To: dwell.Elsewhere, Absorbed: true, Time: p.time}
	}
	return dwell.Observation{To: dwell.Censored, Time: p.time}
}

// left tells that the path left its state.
func (p *path) left() bool { return p.fate == byFlip || p.fate == byAbsorption }
