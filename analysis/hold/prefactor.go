package hold

import (
	"cmp"
	"context"
	"errors"
	"fmt"
	"math"
	"slices"

	"holdfast/analysis/lattice"
	"holdfast/analysis/records"
	"holdfast/deterministic"
	"holdfast/model"
)

// kindred is the factor within which exponents share their numbers of copies.
const kindred = 30

// rarities are the largest Ω S that a prefactor is looked for at: the rarer flips are,
// the less there is left to carry on. The last one whose lattice takes no longer than
// prefactorSeconds is taken.
func rarities() []float64 { return []float64{4, 5, 7, 10, 14, 20, 28, 40} }

// fractions of the largest copies at which the mean times are found.
func fractions() []float64 { return []float64{0.5, 0.7, 1} }

// prefactorSeconds is the longest that one lattice may take, by its estimate;
// patientSeconds that of the last resort.
const (
	prefactorSeconds = 0.5
	patientSeconds   = 20
	// prefactorTruncation is the relative error that its box may cause.
	prefactorTruncation = 1e-6
)

// A solved is the lattice's answer at a number of copies.
type solved struct {
	solution *lattice.Solution
	names    []string
}

// findPrefactors finds the prefactors of all ways, those of like exponents at the same
// numbers of copies, and carries them on to the design's.
func (j *job) findPrefactors(ctx context.Context, ways []*way) error {
	ways = slices.Clone(ways)
	slices.SortStableFunc(ways, func(a, b *way) int { return cmp.Compare(a.pair.S, b.pair.S) })
	for begin := 0; begin < len(ways); {
		end := begin
		for end < len(ways) && ways[end].pair.S <= kindred*ways[begin].pair.S {
			end++
		}
		if err := j.latticePrefactors(ctx, ways[begin:end]); err != nil {
			return err
		}
		begin = end
	}
	for _, w := range ways {
		log, half := w.prefactor.At(j.network.Copies)
		w.log = log + j.network.Copies*w.pair.S
		w.half = half + prefactorTruncation + j.network.Copies*(w.pair.Error+1e-12*w.pair.S)
	}
	return nil
}

// latticePrefactors takes the mean times of some ways from the lattice at three
// numbers of copies.
func (j *job) latticePrefactors(ctx context.Context, ways []*way) error {
	most, err := j.reach(ctx, ways[0].pair.S)
	if err != nil {
		return err
	}
	for k, share := range fractions() {
		copies := j.wholeTotals(most * share)
		j.tell(fmt.Sprintf("action: lattice at %.4g copies", copies), float64(k)/3)
		s, err := j.solveAt(ctx, copies)
		if err != nil {
			return fmt.Errorf("the prefactor's lattice at %.4g copies: %w", copies, err)
		}
		for _, w := range ways {
			log := s.logTime(w)
			if math.IsInf(log, 0) || math.IsNaN(log) {
				return fmt.Errorf("the lattice at %.4g copies sees no flip from %s to %s, which least action finds: take --route runs or lattice", copies, w.pair.From, w.pair.To)
			}
			w.prefactor.Add(copies, log, w.pair.S)
			w.source = Lattice
		}
	}
	return nil
}

// reach gives the largest number of copies whose lattice is cheap enough.
func (j *job) reach(ctx context.Context, s float64) (float64, error) {
	found := 0.0
	var last error
	for _, rarity := range rarities() {
		copies := j.wholeTotals(rarity / s)
		e, err := j.estimateAt(ctx, copies)
		switch {
		case ctx.Err() != nil:
			return 0, ctx.Err()
		case err != nil:
			last = err
		case e.Seconds <= prefactorSeconds:
			found = copies
			continue
		case found == 0 && e.Seconds <= patientSeconds:
			return copies, nil
		default:
			last = fmt.Errorf("the lattice of %d states would take about %.0f s", e.States, e.Seconds)
		}
		var same *deterministic.IndistinctError
		if found > 0 || !errors.As(last, &same) {
			break // with more copies it would only be larger
		}
	}
	if found > 0 {
		return found, nil
	}
	return 0, j.outOfReach(last)
}

// estimateAt tells what the lattice takes at a number of copies.
func (j *job) estimateAt(ctx context.Context, copies float64) (lattice.Estimate, error) {
	p, _, err := j.problemAt(ctx, copies)
	if err != nil {
		return lattice.Estimate{}, err
	}
	return p.Estimate(ctx)
}

// outOfReach says why the lattice cannot give the prefactor.
func (j *job) outOfReach(err error) error {
	var same *deterministic.IndistinctError
	if errors.As(err, &same) {
		return fmt.Errorf("the prefactor is found at fewer copies, where flips are seen, but there %s and %s have the same whole molecules: take --route runs or lattice", same.First, same.Second)
	}
	return fmt.Errorf("the exponents are known, but not the prefactor, which the lattice gives at fewer copies: %s; take --route staged, or runs at copies where flips are seen", why(err))
}

// problemAt states the design at other copies for the lattice.
func (j *job) problemAt(ctx context.Context, copies float64) (lattice.Problem, []string, error) {
	n, err := j.network.Rebind(copies, nil)
	if err != nil {
		return lattice.Problem{}, nil, err
	}
	n.Declared = nil // in molecules: they mean something else at other copies
	survey, err := deterministic.Survey(ctx, n, deterministic.Options{Seeds: amountsOf(j.survey)})
	if err != nil {
		return lattice.Problem{}, nil, err
	}
	at := &job{network: n, survey: survey, options: j.options}
	p := at.problem()
	p.MeansOnly, p.Truncation = true, prefactorTruncation
	return p, at.stateNames(), nil
}

func amountsOf(survey *deterministic.Map) [][]float64 {
	var out [][]float64
	for _, s := range survey.States {
		if s.Kind != deterministic.Declared {
			out = append(out, s.Amounts)
		}
	}
	return out
}

// solveAt solves the lattice at a number of copies.
func (j *job) solveAt(ctx context.Context, copies float64) (*solved, error) {
	p, names, err := j.problemAt(ctx, copies)
	if err != nil {
		return nil, err
	}
	s, err := lattice.Solve(ctx, p)
	if err != nil {
		return nil, err
	}
	return &solved{s, names}, nil
}

// logTime is the logarithm of the mean time of a way.
func (s *solved) logTime(w *way) float64 {
	from := indexOf(s.names, w.pair.From)
	if from < 0 {
		return math.NaN()
	}
	if w.to == records.Elsewhere {
		return math.Log(s.solution.Mean[from] / s.solution.Lost[from])
	}
	to := indexOf(s.names, w.pair.To)
	if to < 0 {
		return math.NaN()
	}
	return math.Log(s.solution.Pair[from][to])
}

// wholeTotals gives the number of copies nearest to the one wanted at which the
// design's conserved totals are the same amounts in whole molecules.
func (j *job) wholeTotals(copies float64) float64 {
	if len(j.survey.Totals) == 0 {
		return rounded(copies)
	}
	base := math.Max(1, math.Round(copies))
	for step := range int(base/2) + 1 {
		for _, c := range []float64{base + float64(step), base - float64(step)} {
			if c >= 1 && sameTotals(j.network, j.survey.Totals, c) {
				return c
			}
		}
	}
	return rounded(copies)
}

// rounded makes a number of copies whole, where it is not small.
func rounded(copies float64) float64 {
	if copies >= 20 {
		return math.Round(copies)
	}
	return math.Round(copies*100) / 100
}

// sameTotals tells whether whole molecules at so many copies have the totals of the
// design, in amounts.
func sameTotals(n *model.Network, totals []model.Total, copies float64) bool {
	for _, t := range totals {
		sum, size := 0.0, 0.0
		for i, w := range t.Weights {
			unit := copies
			if n.Species[i].Fixed {
				unit = 1
			}
			sum += float64(w) * math.Round(n.Species[i].Start*unit)
			size += math.Abs(float64(w)) * n.Species[i].Start * unit
		}
		if math.Abs(sum-float64(t.Value)*copies/n.Copies) > 1e-9*(1+size) && !fixedOnly(n, t) {
			return false
		}
	}
	return true
}

// fixedOnly tells that a total is of species of fixed count alone.
func fixedOnly(n *model.Network, t model.Total) bool {
	for i, w := range t.Weights {
		if w != 0 && !n.Species[i].Fixed {
			return false
		}
	}
	return true
}
