package levers

import (
	"context"
	"math"
	"slices"

	"holdfast/analysis/hold"
	"holdfast/analysis/lattice"
)

// problem states the design for the lattice.
func (j *job) problem() lattice.Problem {
	p := lattice.Problem{
		Network: j.network, Cores: j.survey.Cores, MaxMemory: j.options.Hold.Memory, Threads: j.options.Hold.Threads,
		MeansOnly: true, Sensitivities: true,
	}
	if j.options.Hold.Progress != nil {
		p.Progress = func(stage string, share float64) { j.tell("lattice: "+stage, share) }
	}
	for _, s := range j.survey.Stable() {
		p.States = append(p.States, lattice.Noise{Center: s.Molecules, Covariance: s.Covariance})
	}
	return p
}

// byLattice takes the slopes from the lattice.
func (j *job) byLattice(ctx context.Context) error {
	s, err := lattice.Solve(ctx, j.problem())
	if err != nil {
		return err
	}
	for a := range s.Names {
		j.addState(s, a)
	}
	return j.fillGaps(ctx)
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

// addState adds the blocks of one state.
func (j *job) addState(s *lattice.Solution, a int) {
	x := s.Sensitivity[a]
	if x == nil {
		j.neverLeft(a)
		return
	}
	zero := make([]float64, j.parameters())
	several := ends(s, a) > 1 || x.Lost != nil
	if several {
		j.addLattice(s, a, anyState, s.Mean[a], s.Bound[a], x, zero, zero)
	}
	for b, name := range s.Names {
		switch {
		case x.End[b] == nil:
		case several:
			j.addLattice(s, a, name, s.Pair[a][b], s.PairBound[a][b], x, x.End[b], x.EndError[b])
		default:
			j.addLattice(s, a, name, s.Mean[a], s.Bound[a], x, zero, zero)
		}
	}
	if x.Lost != nil {
		j.addLattice(s, a, elsewhere, s.Mean[a]/s.Lost[a], s.Bound[a], x, x.Lost, x.LostError)
	}
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

// addLattice adds one block: of a hold time mean with a relative error bound, whose
// slope is that of the state's mean less that of the chance of the end.
func (j *job) addLattice(s *lattice.Solution, a int, to string, mean, bound float64, x *lattice.Sensitivity, end, endError []float64) {
	b := Block{
		From: s.Names[a], To: to, HoldRoute: hold.Lattice, Levers: []Lever{},
		Mean: hold.Value(mean), Low: hold.Value(mean * (1 - bound)), High: hold.Value(mean * (1 + bound)),
	}
	for k := range j.parameters() {
		l := j.lever(k)
		size := float64(l.Value)
		if l.PerUnit {
			size = 1
		}
		slope := size * (x.Mean[k] - end[k])
		off := size * (x.MeanError[k] + endError[k])
		l.Slopes = append(l.Slopes, Slope{Lattice, hold.Value(slope), hold.Value(slope - off), hold.Value(slope + off)})
		if math.IsNaN(slope) {
			l.Note = j.unknown(k)
		}
		b.Levers = append(b.Levers, l)
	}
	j.report.Blocks = append(j.report.Blocks, b)
}

// unknown says why the lattice gives no slope.
func (j *job) unknown(k int) string {
	if _, value := j.parameter(k); value == 0 {
		return "0 today, and more of it would open ways that are closed: try a small value with --with"
	}
	return ""
}
