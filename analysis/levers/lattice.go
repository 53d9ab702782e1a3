package levers

import (
	"context"
	"math"
	"slices"

	"holdfast/analysis/hold"
	"holdfast/analysis/lattice"
	"holdfast/deterministic"
)

// problem states a survey's design for the lattice.
func (j *job) problem(m *deterministic.Map) lattice.Problem {
	p := lattice.Problem{
		Network: m.Network, Cores: m.Cores, MaxMemory: j.options.Hold.Memory, Threads: j.options.Hold.Threads,
		MeansOnly: true, Sensitivities: true,
	}
	if j.options.Hold.Progress != nil {
		p.Progress = func(stage string, share float64) { j.tell("lattice: "+stage, share) }
	}
	for _, s := range m.Stable() {
		p.States = append(p.States, lattice.Noise{Center: s.Molecules, Covariance: s.Covariance})
	}
	return p
}

// byLattice takes the slopes from the lattice.
func (j *job) byLattice(ctx context.Context) error {
	s, err := lattice.Solve(ctx, j.problem(j.survey))
	if err != nil {
		return err
	}
	for a := range s.Names {
		if s.Sensitivity[a] == nil {
			j.neverLeft(a)
		}
		for _, x := range answersOf(s, a) {
			j.addLattice(&x)
		}
	}
	return j.fillGaps(ctx)
}

// An answer is one hold time of a lattice: its mean with a bound on the relative error,
// and the derivatives of its logarithm in the parameters with their errors.
type answer struct {
	from, to    string
	mean, bound float64
	slope, off  []float64
}

// answersOf lists the hold times of one state: the state's mean where a dwell can end in
// several ways, then one for each end. The mean time between ends of one kind is the
// state's mean over the chance of that end, and the slopes follow suit.
func answersOf(s *lattice.Solution, a int) []answer {
	x := s.Sensitivity[a]
	if x == nil {
		return nil
	}
	several := ends(s, a) > 1 || x.Lost != nil
	state := answer{s.Names[a], anyState, s.Mean[a], s.Bound[a], x.Mean, x.MeanError}
	var out []answer
	if several {
		out = append(out, state)
	}
	for b, name := range s.Names {
		switch {
		case x.End[b] == nil:
		case several:
			out = append(out, state.ending(name, s.Pair[a][b], s.PairBound[a][b], x.End[b], x.EndError[b]))
		default:
			state.to = name
			out = append(out, state)
		}
	}
	if x.Lost != nil {
		out = append(out, state.ending(elsewhere, s.Mean[a]/s.Lost[a], s.Bound[a], x.Lost, x.LostError))
	}
	return out
}

// ending is the answer for one end of a state's dwells.
func (x answer) ending(to string, mean, bound float64, end, off []float64) answer {
	out := answer{from: x.from, to: to, mean: mean, bound: bound}
	for k := range end {
		out.slope = append(out.slope, x.slope[k]-end[k])
		out.off = append(out.off, x.off[k]+off[k])
	}
	return out
}

// ends counts the states that a dwell can end in.
func ends(s *lattice.Solution, a int) int {
	count := 0
	for _, p := range s.End[a] {
		if p > 0 {
			count++
		}
	}
	return count
}

// addLattice adds one block.
func (j *job) addLattice(x *answer) {
	b := Block{
		From: x.from, To: x.to, HoldRoute: hold.Lattice, Levers: []Lever{},
		Mean: hold.Value(x.mean), Low: hold.Value(x.mean * (1 - x.bound)), High: hold.Value(x.mean * (1 + x.bound)),
	}
	for k := range j.parameters() {
		l := j.lever(k)
		size := j.size(k)
		slope, off := size*x.slope[k], size*x.off[k]
		l.Slopes = append(l.Slopes, newSlope(Lattice, slope, off))
		if math.IsNaN(slope) && l.PerUnit {
			l.Note = "0 today, and more of it would open ways that are closed: try a small value with --with"
		}
		b.Levers = append(b.Levers, l)
	}
	j.report.Blocks = append(j.report.Blocks, b)
}

// size is what turns a derivative in a parameter into a slope: its value, or 1 where
// that is 0.
func (j *job) size(k int) float64 {
	if _, value := j.parameter(k); value != 0 {
		return value
	}
	return 1
}

// fillGaps takes by differences what the lattice has no derivative for.
func (j *job) fillGaps(ctx context.Context) error {
	for k := range j.parameters() {
		if _, value := j.parameter(k); value == 0 || !j.gap(k) {
			continue
		}
		slopes, note, err := j.difference(ctx, k)
		if err != nil {
			return err
		}
		for i := range j.report.Blocks {
			if b := &j.report.Blocks[i]; b.Note == "" && math.IsNaN(float64(b.Levers[k].Slope().Value)) {
				b.Levers[k].Slopes = nil
				b.Levers[k].take(slopes[i], note)
			}
		}
	}
	return nil
}

// gap tells whether some slope in parameter k is not known.
func (j *job) gap(k int) bool {
	return slices.ContainsFunc(j.report.Blocks, func(b Block) bool {
		return b.Note == "" && math.IsNaN(float64(b.Levers[k].Slope().Value))
	})
}
