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
		p.Progress = func(stage string, share float64) {
			tell(Progress{Stage: "lattice: " + stage, Share: share, Events: j.report.Work.Events})
		}
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
	for a := range s.Escape {
		j.report.Lattice.Escape = append(j.report.Lattice.Escape, StateRate{s.Names[a], Value(s.Escape[a])})
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
	several := targets > 1 || lost
	if several {
		j.addExact(s, from, records.Any, s.Mean[from], false)
	}
	for to := range s.Names {
		if to != from {
			j.addExact(s, from, to, s.Pair[from][to], !several && s.End[from][to] > 0)
		}
	}
	if lost {
		j.addExact(s, from, records.Elsewhere, s.Mean[from]/s.Lost[from], false)
	}
}

// rounding bounds the relative error of the arithmetic: sums and products of
// positive numbers alone. The tests of package lattice hold it to a thousandth of
// this against extended precision.
const rounding = 1e-9

// addExact adds one row; mean is +Inf for a pair that does not occur. The chance of
// holding is that of the state, so it stands with leaving for any other or, where
// there is one only, with that.
func (j *job) addExact(s *lattice.Solution, from, to int, mean float64, only bool) {
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
		if to == records.Any || only {
			row.Holds = j.latticeHolds(s, from, b)
		}
	}
	rate.Hold = j.holdRecords(row.Holds, "constant rate")
	j.rates = append(j.rates, rate)
	j.add(row)
}

// weightRounding bounds the rounding error of a state's persistence; nearer to 1 than
// that it counts as 1.
const weightRounding = 1e-12

// latticeHolds gives the chances of holding. Once the start is forgotten a dwell still
// lasts with the chance persistence·exp(−escape·t). The limits span the bounds on rate
// and persistence, and what may be left of the start, which falls off at the rate at
// which it is forgotten. Chances near 1 are carried by what they lack.
func (j *job) latticeHolds(s *lattice.Solution, from int, bound float64) []HoldChance {
	var out []HoldChance
	c, escape := s.Persistence[from], s.Escape[from]
	if math.Abs(c-1) < weightRounding {
		c = 1
	}
	for _, n := range j.options.Holds {
		t := n * j.network.Generation
		left := math.Abs(c-1)*math.Exp(-s.Forgetting[from]*t) + weightRounding*math.Exp(-escape*t)
		loss := func(rate, more float64) float64 {
			return math.Max(0, math.Min(-math.Expm1(math.Log(c)-rate*t)-more, 1))
		}
		out = append(out, newHoldChance(n, loss(escape, 0), loss(escape*(1+bound), -left), loss(escape*(1-bound), left)))
	}
	return out
}

// newHoldChance gives a chance and its limits from what they lack to 1.
func newHoldChance(generations, loss, most, least float64) HoldChance {
	return HoldChance{
		Generations: generations, Chance: Value(1 - loss), Low: Value(1 - most), High: Value(1 - least),
		Loss: [3]Value{Value(loss), Value(most), Value(least)},
	}
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
