package staged

import (
	"errors"
	"fmt"
	"runtime"

	"holdfast/model"
)

// A Plan says which flip to count, and how well. It is only read.
type Plan struct {
	// Network is the network to run; it must not be nil.
	Network *model.Network
	// Cores are those of all states; From is the index of the state that is left, To
	// of the one that is flipped to. Entering the core of any other ends a dwell too.
	Cores    []model.Core
	From, To int
	// Along is the progress from From to To.
	Along Coordinate
	// Relaxation is the time in which a run forgets where in From it began, in the
	// network's unit: one over the slowest rate of return. It must be above 0.
	Relaxation float64

	// Precision is the relative half-width asked of the 95 % interval; 0: 0.1.
	Precision float64
	// Events is the most reaction events; 0: no limit. The pilots count.
	Events int64
	// Seed, Point and Group (below 2²²) choose the random numbers; Group is told apart
	// for each From and To by the caller.
	Seed, Point, Group uint64
	// MaxCount is the largest count of any species; see ssa.Plan.
	MaxCount int64
	// Threads is the number of goroutines; 0: GOMAXPROCS. It changes no outcome.
	Threads int
	// Progress, if not nil, is told now and then what is being done, the share of it
	// that is done and the events so far; never twice at once.
	Progress func(stage string, share float64, events int64)
}

const defaultPrecision = 0.1

// normal gives the plan with its defaults filled in, or says what is wrong.
func (p Plan) normal() (Plan, error) {
	if p.Network == nil {
		return p, errors.New("plan has no network")
	}
	if p.Precision == 0 {
		p.Precision = defaultPrecision
	}
	if p.Threads == 0 {
		p.Threads = runtime.GOMAXPROCS(0)
	}
	return p, errors.Join(p.checkStates(), p.checkNumbers(), p.checkCoordinate())
}

func (p *Plan) checkStates() error {
	if p.From < 0 || p.From >= len(p.Cores) || p.To < 0 || p.To >= len(p.Cores) || p.From == p.To {
		return fmt.Errorf("from and to are cores %d and %d; they must be two of the %d cores", p.From, p.To, len(p.Cores))
	}
	return nil
}

func (p *Plan) checkNumbers() error {
	switch {
	case !(p.Relaxation > 0 && p.Relaxation < 1e300):
		return fmt.Errorf("relaxation time is %v; it must be above 0", p.Relaxation)
	case !(p.Precision >= 0.001 && p.Precision < 1):
		return fmt.Errorf("precision is %v; it must be from 0.001 to below 1", p.Precision)
	case p.Events < 0 || p.Threads < 0:
		return fmt.Errorf("events and threads are %d and %d; they must not be negative", p.Events, p.Threads)
	case p.Group >= 1<<22:
		return fmt.Errorf("group is %d; it must be below 2²²", p.Group)
	}
	return nil
}

func (p *Plan) checkCoordinate() error {
	c := &p.Along
	if len(c.Points) < 2 || len(c.Normals) != len(c.Points) {
		return fmt.Errorf("coordinate has %d points and %d directions; it must have as many of both, two at least", len(c.Points), len(c.Normals))
	}
	for k := range c.Points {
		if unit(c.Normals[k]) == nil {
			return fmt.Errorf("coordinate has no direction at point %d", k)
		}
		if len(c.Points[k]) != len(p.Network.Species) || len(c.Normals[k]) != len(p.Network.Species) {
			return fmt.Errorf("coordinate's point %d has %d counts and %d directions; the network has %d species", k, len(c.Points[k]), len(c.Normals[k]), len(p.Network.Species))
		}
	}
	return nil
}
