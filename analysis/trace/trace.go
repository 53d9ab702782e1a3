// Package trace makes sample paths of a design: exact runs seen at evenly spaced
// times, each with the state that it was last found in.
package trace

import (
	"context"
	"fmt"
	"math"

	"holdfast/deterministic"
	"holdfast/model"
	"holdfast/ssa"
)

const (
	defaultSamples = 1000
	// mostSamples bounds the rows of one run.
	mostSamples = 1 << 30
	// blockNumbers is the most counts that are in memory at once, but for a single run.
	blockNumbers = 1 << 22
	blockRuns    = 64
)

// Options say which paths to make.
type Options struct {
	// Runs is the number of paths; 0: 1.
	Runs int64
	// Until is how long each lasts, in the design's unit; 0: 20 generations, or,
	// without a generation, 200 of the longest correlation time of the states.
	Until float64
	// Every is the time between samples, in the design's unit; 0: a thousandth of Until.
	Every float64
	// From names the state that the paths start in; empty: the design's own start.
	From string
	// Seed chooses the random numbers. Threads is the number of goroutines; 0: one a
	// processor; it changes nothing else.
	Seed    uint64
	Threads int
}

// A Row is one sample of one path.
type Row struct {
	Run    int
	Time   float64
	Counts []int64 // molecules, one per species; valid until the next row
	// State is the index of the state whose core the path was last found in, at
	// this sample or an earlier one; −1 before the first.
	State int
}

// Paths are the paths of a plan, ready to be made.
type Paths struct {
	Network *model.Network
	Survey  *deterministic.Map
	Until   float64
	Every   float64
	Runs    int
	// Events is the number of reaction firings, once made.
	Events int64

	options Options
	start   []int64
	times   []float64
}

// New plans paths through the network that survey describes. Errors state the
// option that is out of its range.
func New(network *model.Network, survey *deterministic.Map, o Options) (*Paths, error) {
	p := &Paths{Network: network, Survey: survey, Until: o.Until, Every: o.Every, Runs: int(max(o.Runs, 1)), options: o}
	if p.Until == 0 {
		p.Until = p.defaultUntil()
	}
	if p.Every == 0 {
		p.Every = p.Until / defaultSamples
	}
	switch {
	case !(p.Until > 0) || math.IsInf(p.Until, 0):
		return nil, fmt.Errorf("until is %v; it must be a finite time above 0", p.Until)
	case !(p.Every > 0) || p.Every > p.Until:
		return nil, fmt.Errorf("every is %v; it must be above 0 and at most until (%v)", p.Every, p.Until)
	case p.Until/p.Every > mostSamples:
		return nil, fmt.Errorf("%.3g samples a run are more than can be kept; sample less often", p.Until/p.Every)
	case o.Runs < 0 || o.Runs > 1<<31:
		return nil, fmt.Errorf("runs is %d; it must be from 1 to 2³¹", o.Runs)
	}
	p.times = make([]float64, int(math.Floor(p.Until/p.Every*(1+1e-12)))+1)
	for k := range p.times {
		p.times[k] = math.Min(float64(k)*p.Every, p.Until)
	}
	return p, p.setStart(o.From)
}

// defaultUntil is 20 generations, or 200 of the longest correlation time.
func (p *Paths) defaultUntil() float64 {
	if p.Network.Generation > 0 {
		return 20 * p.Network.Generation
	}
	longest := 0.0
	for _, s := range p.Survey.Stable() {
		longest = math.Max(longest, s.CorrelationTime())
	}
	return 200 * longest
}

func (p *Paths) setStart(from string) error {
	if from == "" {
		p.start = p.Network.StartCounts()
		return nil
	}
	names := ""
	for i, s := range p.Survey.Stable() {
		if s.Name == from {
			p.start = p.Survey.Cores[i].Start
			return nil
		}
		names += " " + s.Name
	}
	return fmt.Errorf("there is no state %q; the states are%s", from, names)
}

// Make makes the paths and gives every sample to row, run by run and in order of
// time; an error of row stops it. If ctx is done first, the error is its cause,
// and the rows given so far are whole runs.
func (p *Paths) Make(ctx context.Context, row func(Row) error) error {
	species := len(p.start)
	size := min(max(blockNumbers/(species*len(p.times)), 1), blockRuns)
	b := block{paths: p, counts: make([]int64, min(size, p.Runs)*len(p.times)*species), reached: make([]int, size)}
	for first := 0; first < p.Runs; first += size {
		if err := b.make(ctx, first, min(size, p.Runs-first)); err != nil {
			return err
		}
		if err := b.give(first, min(size, p.Runs-first), row); err != nil {
			return err
		}
	}
	return nil
}

// A block is some runs held in memory: counts by run, time and species, and how
// many samples each run reached.
type block struct {
	paths   *Paths
	counts  []int64
	reached []int
}

func (b *block) make(ctx context.Context, first, runs int) error {
	p := b.paths
	clear(b.reached)
	species := len(p.start)
	result, err := ssa.Run(ctx, ssa.Plan{
		Network: p.Network, Start: p.start, From: -1, Runs: runs, FirstReplicate: uint64(first), Seed: p.options.Seed,
		Group: traceGroup, Until: p.Until, Times: p.times, Threads: p.options.Threads,
		Sample: func(run, k int, _ float64, counts []int64) {
			copy(b.counts[(run*len(p.times)+k)*species:], counts)
			b.reached[run] = k + 1
		},
	})
	if err != nil {
		return err
	}
	p.Events += result.Events
	for i := range result.Outcomes {
		if err := result.Outcomes[i].Err(); err != nil {
			return err
		}
	}
	return nil
}

// traceGroup keeps the random numbers of paths apart from those of hold's runs.
const traceGroup = 1 << 21

func (b *block) give(first, runs int, row func(Row) error) error {
	p := b.paths
	species := len(p.start)
	for r := range runs {
		state := -1
		for k := range b.reached[r] {
			at := (r*len(p.times) + k) * species
			counts := b.counts[at : at+species]
			state = p.label(state, counts)
			if err := row(Row{first + r, p.times[k], counts, state}); err != nil {
				return err
			}
		}
	}
	return nil
}

// label gives the state whose core holds counts, or else the last one.
func (p *Paths) label(last int, counts []int64) int {
	for i := range p.Survey.Cores {
		if p.Survey.Cores[i].Contains(counts) {
			return i
		}
	}
	return last
}
