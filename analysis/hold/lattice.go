package hold

import (
	"context"
	"math"

	"holdfast/analysis/lattice"
	"holdfast/analysis/records"
)

// problem states the design for the lattice.
func (j *job) problem() lattice.Problem {
	p := lattice.Problem{
		Network: j.network, Cores: j.survey.Cores, MaxMemory: j.options.Memory, Threads: j.options.Threads,
	}
	for _, s := range j.survey.Stable() {
		p.States = append(p.States, lattice.Noise{Center: s.Molecules, Covariance: s.Covariance})
	}
	return p
}

// byLattice takes the hold times from the master equation.
func (j *job) byLattice(ctx context.Context) error {
	p := j.problem()
	if tell := j.options.Progress; tell != nil {
		p.Progress = func(stage string, share float64) { tell(Progress{"lattice: " + stage, share, j.report.Work.Events}) }
	}
	s, err := lattice.Solve(ctx, p)
	if err != nil {
		if ctx.Err() != nil {
			j.report.Interrupted = true
			j.warn("the lattice was not solved to its end: nothing is known of the hold times by it")
			return nil
		}
		return err
	}
	for from := range j.survey.Stable() {
		j.addLattice(s, from)
	}
	j.report.Lattice = &LatticeReport{
		States: s.States, Box: s.Box.String(), Truncation: Value(s.Truncation), Relaxation: Value(s.Relaxation),
		Seconds: s.Seconds, Bytes: s.Bytes,
	}
	for a := range s.Weight {
		j.report.Lattice.Weights = append(j.report.Lattice.Weights, Value(s.Weight[a]))
	}
	return j.recordLattice(s)
}

// addLattice adds the rows of one state.
func (j *job) addLattice(s *lattice.Solution, from int) {
	if s.Never[from] {
		j.neverLeft(from)
		return
	}
	targets := 0
	for to := range s.Names {
		if s.End[from][to] > 0 {
			targets++
		}
	}
	lost := s.Lost[from] > 0
	if targets > 1 || lost {
		j.addExact(s, from, records.Any, s.Mean[from])
	}
	for to := range s.Names {
		if to != from {
			j.addExact(s, from, to, s.Pair[from][to])
		}
	}
	if lost {
		j.addExact(s, from, records.Elsewhere, s.Mean[from]/s.Lost[from])
	}
}

// rounding bounds the relative error of the arithmetic: sums and products of
// positive numbers alone. The tests of package lattice hold it to a thousandth of
// this against extended precision.
const rounding = 1e-9

// addExact adds one row; mean is +Inf for a pair that does not occur.
func (j *job) addExact(s *lattice.Solution, from, to int, mean float64) {
	b := s.Bound[from]
	if to >= 0 {
		b = s.PairBound[from][to]
	}
	b += rounding
	row := DwellReport{
		From: s.Names[from], To: j.recordName(to), Route: Lattice, Bound: Value(b), Mean: Value(mean), Low: Value(mean * (1 - b)), High: Value(mean * (1 + b)),
		Flips: Value(math.NaN()), Exposure: Value(math.NaN()), PerGeneration: Value(math.NaN()), PerGenerationLow: Value(math.NaN()), PerGenerationHigh: Value(math.NaN()),
	}
	if math.IsInf(mean, 1) {
		row.Never, row.Note = true, "never goes there"
	}
	rate := records.Rate{
		From: from, To: to, Route: Lattice, Interval: "truncation bound", Never: row.Never, Mean: mean, Low: float64(row.Low), High: float64(row.High),
		StandardError: math.NaN(), Flips: -1, Dwells: -1, Exposure: math.NaN(), PerGeneration: records.Absent(),
	}
	if g := j.network.Generation; g > 0 {
		row.PerGeneration, row.PerGenerationLow, row.PerGenerationHigh = Value(g/mean), Value(g/mean*(1-b)), Value(g/mean*(1+b))
		rate.PerGeneration = records.Range{Value: g / mean, Low: g / mean * (1 - b), High: g / mean * (1 + b)}
		row.Holds = latticeHolds(s, from, g, s.Mean[from]/mean, b)
	}
	for _, h := range row.Holds {
		rate.Hold = append(rate.Hold, records.HoldChance{
			Generations: h.Generations, Range: records.Range{Value: float64(h.Chance), Low: float64(h.Low), High: float64(h.High)}, Source: "constant rate",
		})
	}
	j.rates = append(j.rates, rate)
	j.add(row)
}

// latticeHolds gives the chances of holding; share is that of the flips that count.
// Once the start is forgotten a dwell still lasts with the chance
// persistence·exp(−escape·t). The limits span the bound on the rate and what may be left
// of the start, which falls off at the rate at which it is forgotten.
func latticeHolds(s *lattice.Solution, from int, generation, share, bound float64) []HoldChance {
	var out []HoldChance
	c, escape := s.Persistence[from], s.Escape[from]*share
	for _, n := range holdGenerations() {
		t := n * generation
		left := math.Abs(c-1) * math.Exp(-s.Forgetting[from]*t)
		chance := func(rate, left float64) Value { return Value(math.Max(0, math.Min(c*math.Exp(-rate*t)+left, 1))) }
		out = append(out, HoldChance{n, chance(escape, 0), chance(escape*(1+bound), -left), chance(escape*(1-bound), left)})
	}
	return out
}

func (j *job) recordName(to int) string {
	switch to {
	case records.Any:
		return anyState
	case records.Elsewhere:
		return absorbed
	}
	return j.survey.Stable()[to].Name
}
