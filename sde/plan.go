package sde

import (
	"errors"
	"fmt"
	"math"

	"holdfast/model"
)

// A Plan says which runs to make. It is only read, and may be shared.
type Plan struct {
	// System is the equation to run; it must not be nil. Chemical makes that of a
	// network.
	System System
	// Start holds the coordinates at time 0; nil: the network's own starting counts,
	// for a System that Chemical made.
	Start []float64
	// Cores are the regions that end a run on entering them, in the order that
	// Outcome.Core counts. A path is in a core if its coordinates over Cell, each
	// rounded to the nearest whole number (halves away from zero), are. It is looked
	// at at the end of each step. Where cores overlap, the first one counts.
	Cores []model.Core
	// From is the index of the core that the runs start in, which does not end
	// them; −1: none.
	From int
	// Cell is the width in coordinates of one unit of the cores' counts; 0: 1, a
	// molecule.
	Cell float64

	// Runs is the number of runs; 0 gives an empty result. Run i is replicate
	// FirstReplicate + i, so shards of a large job start at different replicates.
	Runs           int
	FirstReplicate uint64
	// Seed, Point and Group (below 2²¹) with the replicate (below 2⁴⁰) give each
	// run its own random numbers, other ones than those of an exact run of the same
	// name. Group is the index of the state that the runs start in.
	Seed, Point, Group uint64

	// Step is the largest step, in the system's time unit; 0: that of StepFor at
	// Start and the cores' centres. A step above that of LargestStep there is refused. The
	// step taken is the largest one not above Step that divides Until.
	Step float64
	// Until is the horizon in the system's time unit; 0: none.
	Until float64
	// MaxSteps ends a run after that many steps; 0: no limit. A plan without Until,
	// MaxSteps or a core to enter goes on until it is cancelled.
	MaxSteps int64
	// Limit is the largest magnitude of any coordinate; a path that goes beyond it
	// has run away. 0: ten million, or 16 times the largest starting coordinate if
	// that is more.
	Limit float64

	// Times are the times at which Sample is called, in the system's unit, in
	// ascending order, and not beyond Until if that is set.
	Times []float64
	// Sample is given the coordinates of run (0 ≤ run < Runs) at the end of the last
	// step not later than Times[k]. It is called once for each time before the end
	// of the run, in order. Different runs may call it at once from different
	// goroutines. It must not keep x.
	Sample func(run, k int, t float64, x []float64)

	// Interval is the time, in the system's unit, for which constants of a network that
	// vary in time are held at a value, to the nearest number of steps, at least one; 0: a
	// twentieth of the shortest memory, over the square of the spread if that is above 1.
	// Constants with a spread but no memory keep, through each run, a value of its own.
	// The step is chosen at the medians. None for a System that Chemical did not make.
	Interval float64

	// Threads is the number of goroutines; 0: GOMAXPROCS. Lanes is the number of
	// runs that one goroutine advances in lockstep; 0: chosen by the engine. Neither
	// changes any outcome.
	Threads, Lanes int
	// Progress, if not nil, is called now and then, never twice at once, with the
	// runs done and the steps of all runs so far.
	Progress func(done int, steps int64)

	// stream tells the random numbers of runs for different purposes apart.
	stream uint64
	// steps is the number of steps to Until; 0: none.
	steps int64
}

const (
	defaultLimit = 10_000_000
	// mostSteps is the largest number of steps to Until.
	mostSteps = 1 << 53
	// longest is the longest time.
	longest = 0x1p800
	// mostLanes keeps the registers of a program within reach.
	mostLanes = 4096
)

// normal gives the plan with its defaults filled in, or says what is wrong.
func (p Plan) normal() (Plan, error) {
	if p.System == nil {
		return p, errors.New("plan has no system")
	}
	if err := checkSystem(p.System); err != nil {
		return p, err
	}
	if c, ok := p.System.(*chemical); ok && p.Start == nil {
		p.Start = c.start()
	}
	if p.Cell == 0 {
		p.Cell = 1
	}
	if p.Limit == 0 {
		p.Limit = defaultLimit
		for _, x := range p.Start {
			if most := 16 * math.Abs(x); most > p.Limit {
				p.Limit = most
			}
		}
	}
	if err := errors.Join(p.checkNumbers(), p.checkVariation(), p.checkStart(), p.checkCores(), p.checkTimes()); err != nil {
		return p, err
	}
	return p.withStep()
}

func (p *Plan) checkStart() error {
	n := p.System.Dimension()
	if len(p.Start) != n {
		return fmt.Errorf("start has %d coordinates; the system has %d", len(p.Start), n)
	}
	low, high := p.System.Bounds()
	for i, x := range p.Start {
		l := max(boundAt(low, i, math.Inf(-1)), -p.Limit)
		h := min(boundAt(high, i, math.Inf(1)), p.Limit)
		if !(x >= l && x <= h) {
			return fmt.Errorf("start coordinate %d is %v; it must be from %v to %v", i, x, l, h)
		}
	}
	return nil
}

func (p *Plan) checkCores() error {
	if p.From < -1 || p.From >= len(p.Cores) {
		return fmt.Errorf("from is core %d; there are %d cores", p.From, len(p.Cores))
	}
	n := p.System.Dimension()
	for i, c := range p.Cores {
		if len(c.Low) != n || len(c.High) != n {
			return fmt.Errorf("core %d (%s) bounds %d and %d coordinates of %d", i, c.State, len(c.Low), len(c.High), n)
		}
		if c.Center != nil && len(c.Center) != n {
			return fmt.Errorf("core %d (%s) has a centre of %d numbers for %d coordinates", i, c.State, len(c.Center), n)
		}
		if c.Shape != nil && (len(c.Shape) != n*n || c.Center == nil) {
			return fmt.Errorf("core %d (%s) has a shape of %d numbers and a centre of %d for %d coordinates", i, c.State, len(c.Shape), len(c.Center), n)
		}
	}
	return nil
}

func (p *Plan) checkNumbers() error {
	switch {
	case p.Runs < 0:
		return fmt.Errorf("runs is %d; it must not be negative", p.Runs)
	case p.FirstReplicate >= 1<<40 || uint64(p.Runs) > 1<<40-p.FirstReplicate:
		return fmt.Errorf("replicates %d and %d more; they must be below 2⁴⁰", p.FirstReplicate, p.Runs)
	case p.Group >= 1<<21:
		return fmt.Errorf("group is %d; it must be below 2²¹", p.Group)
	case !(p.Until >= 0) || p.Until > longest:
		return fmt.Errorf("until is %v; it must be from 0 to 2⁸⁰⁰ (0: no horizon)", p.Until)
	case !(p.Step >= 0) || p.Step > longest:
		return fmt.Errorf("step is %v; it must be from 0 to 2⁸⁰⁰ (0: chosen)", p.Step)
	case p.MaxSteps < 0:
		return fmt.Errorf("max steps is %d; it must not be negative (0: no limit)", p.MaxSteps)
	case !(p.Limit > 0) || p.Limit > mostSteps:
		return fmt.Errorf("limit is %v; it must be above 0 and up to 2⁵³ (0: the default)", p.Limit)
	case !(p.Cell > 0) || math.IsInf(p.Cell, 0):
		return fmt.Errorf("cell is %v; it must be above 0 and finite (0: 1)", p.Cell)
	case p.Limit/p.Cell > 1<<62:
		return fmt.Errorf("cell is %v; the limit %v must not be more than 2⁶² cells", p.Cell, p.Limit)
	case p.Threads < 0 || p.Lanes < 0 || p.Lanes > mostLanes:
		return fmt.Errorf("threads and lanes are %d and %d; they must not be negative (0: chosen), and lanes at most %d", p.Threads, p.Lanes, mostLanes)
	}
	return nil
}

func (p *Plan) checkTimes() error {
	last := 0.0
	for k, t := range p.Times {
		if !(t >= last) || t > longest {
			return fmt.Errorf("times[%d] is %v; times must be from 0 to 2⁸⁰⁰, and ascend", k, t)
		}
		last = t
	}
	if p.Until > 0 && last > p.Until {
		return fmt.Errorf("the last of the times is %v, beyond the horizon %v", last, p.Until)
	}
	if len(p.Times) > 0 && p.Sample == nil {
		return errors.New("plan has times but no sample function")
	}
	return nil
}
