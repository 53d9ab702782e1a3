// Package trace makes sample paths of a design: exact runs seen at evenly spaced
// times, each with the state that it was last found in.
package trace

import (
	"context"
	"fmt"
	"math"
	"slices"
	"strings"

	"holdfast/analysis/hold"
	"holdfast/deterministic"
	"holdfast/model"
	"holdfast/ssa"
)

const (
	defaultSamples = 1000
	// mostSamples bounds the rows of one run.
	mostSamples = 1 << 40
	// segment is the most samples of one run that are in memory at once. A longer run
	// is made in segments, each from where the last one ended with random numbers of
	// its own: the process has no memory, so that the law is the same.
	segment = 1 << 18
	// blockNumbers is about the most counts that are in memory at once.
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
	samples int64 // of one run
}

// New plans paths through the network that survey describes. Errors are a
// *hold.OptionError.
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
		return nil, &hold.OptionError{Name: "until", Value: p.Until, Allowed: "a finite time above 0"}
	case !(p.Every > 0) || p.Every > p.Until:
		return nil, &hold.OptionError{Name: "every", Value: p.Every, Allowed: fmt.Sprintf("above 0 and at most until (%v)", p.Until)}
	case p.Until/p.Every > mostSamples:
		return nil, &hold.OptionError{Name: "every", Value: p.Every, Allowed: fmt.Sprintf("longer: %.3g samples a run are more than can be kept", p.Until/p.Every)}
	case o.Runs < 0 || o.Runs > 1<<31:
		return nil, &hold.OptionError{Name: "runs", Value: o.Runs, Allowed: "from 1 to 2³¹"}
	}
	p.samples = int64(math.Floor(p.Until/p.Every*(1+1e-12))) + 1
	if p.samples > segment && len(network.Varying()) > 0 {
		// Segments would each draw constants of their own.
		return nil, &hold.OptionError{Name: "every", Value: p.Every, Allowed: fmt.Sprintf("at least %.6g: where constants vary, a path keeps at most %d samples", p.Until/(segment-1), segment)}
	}
	return p, p.setStart(o.From)
}

// time is that of sample k.
func (p *Paths) time(k int64) float64 { return math.Min(float64(k)*p.Every, p.Until) }

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
	var names strings.Builder
	for i, s := range p.Survey.Stable() {
		if s.Name == from {
			p.start = p.Survey.Cores[i].Start
			return nil
		}
		names.WriteString(" " + s.Name)
	}
	return &hold.OptionError{Name: "from", Value: fmt.Sprintf("%q", from), Allowed: "the name of a state:" + names.String()}
}

// Make makes the paths and gives every sample to row, run by run and in order of
// time; an error of row stops it. If ctx is done first, the error is its cause. The
// rows given by then are whole runs, unless a run is longer than is kept in memory.
func (p *Paths) Make(ctx context.Context, row func(Row) error) error {
	runs := min(max(blockNumbers/(len(p.start)*int(min(p.samples, segment))), 1), blockRuns)
	if p.samples > segment {
		runs = 1
	}
	for first := 0; first < p.Runs; first += runs {
		b := &block{paths: p, first: first, runs: min(runs, p.Runs-first), row: row}
		if err := b.give(ctx); err != nil {
			return err
		}
	}
	return nil
}

// traceGroup keeps the random numbers of paths apart from those of hold's runs.
const traceGroup = 1 << 21

// A block is some runs, of which a segment at a time is in memory: counts by run,
// sample and species.
type block struct {
	paths       *Paths
	first, runs int
	row         func(Row) error
	counts      []int64
	state       []int // last label, by run
}

func (b *block) give(ctx context.Context) error {
	p := b.paths
	start := p.start
	b.state = slices.Repeat([]int{-1}, b.runs)
	for from := int64(0); from < p.samples; from += segment {
		to := min(from+segment, p.samples)
		result, err := ssa.Run(ctx, b.plan(start, from, to))
		if err != nil {
			return err
		}
		p.Events += result.Events
		for i := range result.Outcomes {
			if err := result.Outcomes[i].Err(); err != nil {
				return err
			}
		}
		if err := b.rows(from, to); err != nil {
			return err
		}
		start = result.Outcomes[0].Counts // a block of several runs has one segment
	}
	return nil
}

// plan is that of the samples from, up to but without to.
func (b *block) plan(start []int64, from, to int64) ssa.Plan {
	p := b.paths
	n, species := int(to-from), len(start)
	begun := p.time(from)
	end := p.Until - begun
	if to < p.samples {
		end = p.time(to) - begun
	}
	if end <= 0 { // the last sample alone: 0 would be no horizon
		end = p.Every
	}
	times := make([]float64, n)
	for k := range times {
		times[k] = math.Min(p.time(from+int64(k))-begun, end)
	}
	b.counts = make([]int64, b.runs*n*species)
	return ssa.Plan{
		Network: p.Network, Start: start, From: -1, Runs: b.runs, FirstReplicate: uint64(b.first), Seed: p.options.Seed,
		Point: uint64(from / segment), Group: traceGroup, Until: end, Times: times, Threads: p.options.Threads,
		Sample: func(run, k int, _ float64, counts []int64) { copy(b.counts[(run*n+k)*species:], counts) },
	}
}

// rows gives the samples in memory.
func (b *block) rows(from, to int64) error {
	p := b.paths
	n, species := int(to-from), len(p.start)
	for r := range b.runs {
		for k := range n {
			at := (r*n + k) * species
			counts := b.counts[at : at+species]
			b.state[r] = p.label(b.state[r], counts)
			if err := b.row(Row{b.first + r, p.time(from + int64(k)), counts, b.state[r]}); err != nil {
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
