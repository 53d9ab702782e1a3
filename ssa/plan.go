package ssa

import (
	"errors"
	"fmt"
	"slices"

	"holdfast/model"
)

// A Plan says which runs to make. It is only read, and may be shared.
type Plan struct {
	// Network is the network to run; it must not be nil.
	Network *model.Network
	// Start holds the counts at time 0, one per species; nil: the network's own
	// starting counts.
	Start []int64
	// Cores are the regions that end a run on entering them, in the order that
	// Outcome.Core counts. Where cores overlap, the first one counts.
	Cores []model.Core
	// From is the index of the core that the runs start in, which does not end
	// them; −1: none.
	From int

	// Runs is the number of runs; 0 gives an empty result. Run i is replicate
	// FirstReplicate + i, so shards of a large job start at different replicates.
	Runs           int
	FirstReplicate uint64
	// Seed, Point and Group (below 2²²) with the replicate (below 2⁴⁰) give each
	// run its own random numbers. Group is the index of the state that the runs
	// start in.
	Seed, Point, Group uint64

	// Until is the horizon in the network's time unit; 0: none.
	Until float64
	// MaxEvents ends a run after that many events; 0: no limit. A plan without
	// Until, MaxEvents or a core to enter goes on until it is cancelled, unless
	// its runs are absorbed.
	MaxEvents int64
	// MaxCount is the largest count of any species; a run that goes above it has
	// run away. 0: ten million, or 16 times the largest starting count if that is more.
	MaxCount int64

	// Times are the times at which Sample is called, in the network's unit, in
	// ascending order, and not beyond Until if that is set.
	Times []float64
	// Sample is given the counts at Times[k] of run (0 ≤ run < Runs): those left by
	// the last event not later than Times[k]. It is called once for each time up to
	// the end of the run, in order; a run that is absorbed stays as it is for all
	// times left. Different runs may call it at once from different goroutines. It
	// must not keep counts.
	Sample func(run, k int, t float64, counts []int64)

	// Interval is the time, in the network's unit, for which constants of the network
	// that vary in time are held at a value; 0: variation.DefaultInterval. Constants
	// with a spread but no memory keep, through each run, a value of its own. Their
	// random numbers come from a stream of each run's own. No interval without a
	// constant that varies in time.
	Interval float64

	// Threads is the number of goroutines; 0: GOMAXPROCS. Lanes is the number of
	// runs that one goroutine advances in turn; 0: chosen by the engine. Neither
	// changes any outcome.
	Threads, Lanes int
	// Method chooses the algorithm. Each is exact, but the same seed gives
	// different runs in different methods.
	Method Method
	// Progress, if not nil, is called now and then, never twice at once, with the
	// runs done and the events of all runs so far.
	Progress func(done int, events int64)
}

// A Method is an exact algorithm.
type Method uint8

const (
	// Auto takes Dense for small networks and Sparse for large ones.
	Auto Method = iota
	// Dense is the direct method (Gillespie, J. Phys. Chem. 81 (1977) 2340); its
	// cost per event grows with the number of reactions.
	Dense
	// Sparse is composition–rejection (Slepoy, Thompson, Plimpton, J. Chem. Phys.
	// 128 (2008) 205101); its cost per event does not.
	Sparse
)

// String gives the method's name.
func (m Method) String() string {
	switch m {
	case Auto:
		return "auto"
	case Dense:
		return "dense"
	case Sparse:
		return "sparse"
	}
	return fmt.Sprintf("method %d", uint8(m))
}

// defaultMaxCount is far above the three million or so protein molecules of a
// small bacterial cell (common practice).
const defaultMaxCount = 10_000_000

// maxCountLimit keeps every count exact as a float64.
const maxCountLimit = 1 << 53

// normal gives the plan with its defaults filled in, or says what is wrong.
func (p Plan) normal() (Plan, error) {
	if p.Network == nil {
		return p, errors.New("plan has no network")
	}
	if p.Start == nil {
		p.Start = p.Network.StartCounts()
	}
	if p.MaxCount == 0 {
		p.MaxCount = defaultMaxCount
		if len(p.Start) > 0 {
			p.MaxCount = max(p.MaxCount, 16*slices.Max(p.Start))
		}
	}
	return p, errors.Join(p.checkStart(), p.checkCores(), p.checkNumbers(), p.checkTimes())
}

func (p *Plan) checkStart() error {
	if len(p.Start) != len(p.Network.Species) {
		return fmt.Errorf("start has %d counts; the network has %d species", len(p.Start), len(p.Network.Species))
	}
	for i, n := range p.Start {
		if n < 0 || n > p.MaxCount {
			return fmt.Errorf("start count of %s is %d; it must be from 0 to %d", p.Network.Species[i].Name, n, p.MaxCount)
		}
	}
	return nil
}

func (p *Plan) checkCores() error {
	if p.From < -1 || p.From >= len(p.Cores) {
		return fmt.Errorf("from is core %d; there are %d cores", p.From, len(p.Cores))
	}
	s := len(p.Network.Species)
	for i, c := range p.Cores {
		if len(c.Low) != s || len(c.High) != s {
			return fmt.Errorf("core %d (%s) bounds %d and %d species of %d", i, c.State, len(c.Low), len(c.High), s)
		}
		if c.Shape != nil && (len(c.Shape) != s*s || len(c.Center) != s) {
			return fmt.Errorf("core %d (%s) has a shape of %d numbers and a centre of %d for %d species", i, c.State, len(c.Shape), len(c.Center), s)
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
	case p.Group >= 1<<22:
		return fmt.Errorf("group is %d; it must be below 2²²", p.Group)
	case !(p.Until >= 0) || p.Until > endOfTime:
		return fmt.Errorf("until is %v; it must be from 0 to 2⁸⁰⁰ (0: no horizon)", p.Until)
	case !(p.Interval >= 0) || p.Interval > endOfTime:
		return fmt.Errorf("interval is %v; it must be from 0 to 2⁸⁰⁰ (0: chosen)", p.Interval)
	case p.MaxEvents < 0:
		return fmt.Errorf("max events is %d; it must not be negative (0: no limit)", p.MaxEvents)
	case p.MaxCount < 0 || p.MaxCount > maxCountLimit:
		return fmt.Errorf("max count is %d; it must be from 1 to 2⁵³ (0: the default)", p.MaxCount)
	case p.Threads < 0 || p.Lanes < 0:
		return fmt.Errorf("threads and lanes are %d and %d; they must not be negative (0: chosen)", p.Threads, p.Lanes)
	case p.Method > Sparse:
		return fmt.Errorf("method is %d; there are auto, dense and sparse", p.Method)
	}
	return nil
}

func (p *Plan) checkTimes() error {
	last := 0.0
	for k, t := range p.Times {
		if !(t >= last) || t > endOfTime {
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
