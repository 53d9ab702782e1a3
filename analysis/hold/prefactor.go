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
	// goneTruncation is that where a rare end of dwells is asked for.
	goneTruncation = 1e-13
)

// findPrefactors finds the prefactors of all ways, those of like exponents at the same
// numbers of copies, and carries them on to the design's.
func (j *job) findPrefactors(ctx context.Context, ways []*way) error {
	ways = slices.Clone(ways)
	slices.SortStableFunc(ways, func(a, b *way) int {
		if a.gone() != b.gone() {
			return cmp.Compare(a.to, b.to)
		}
		return cmp.Compare(a.pair.S, b.pair.S)
	})
	for begin := 0; begin < len(ways); {
		end := begin
		for end < len(ways) && alike(ways[begin], ways[end]) {
			end++
		}
		err := j.latticePrefactors(ctx, ways[begin:end])
		var out *reachError
		if errors.As(err, &out) && !out.indistinct {
			err = j.stagedPrefactors(ctx, ways[begin:end])
		}
		if err != nil {
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

// gone tells that the way ends where species are gone.
func (w *way) gone() bool { return w.to == records.Elsewhere }

// alike tells whether two ways share their numbers of copies; a's exponent is smaller.
func alike(a, b *way) bool { return a.gone() == b.gone() && b.pair.S <= kindred*a.pair.S }

// mostRarity is the largest rarity for a way: the lattice's box, drawn for the mean
// dwells, need not reach to where species are gone if hardly any dwell ends there.
func (w *way) mostRarity() float64 {
	if w.gone() {
		return 14
	}
	return math.Inf(1)
}

// latticePrefactors takes the mean times of some ways from the lattice at three
// numbers of copies.
func (j *job) latticePrefactors(ctx context.Context, ways []*way) error {
	most, err := j.reach(ctx, ways[0])
	if err != nil {
		return err
	}
	for k, share := range fractions() {
		copies := j.wholeTotals(most * share)
		j.tell(fmt.Sprintf("action: lattice at %.4g copies", copies), float64(k)/3)
		s, err := j.solveAt(ctx, copies, ways[0].gone())
		if err != nil {
			return fmt.Errorf("the prefactor's lattice at %.4g copies: %w", copies, err)
		}
		for _, w := range ways {
			log := w.logTime(s)
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
func (j *job) reach(ctx context.Context, w *way) (float64, error) {
	found := 0.0
	var last error
	for _, rarity := range rarities() {
		if rarity > w.mostRarity() {
			break
		}
		copies := j.wholeTotals(rarity / w.pair.S)
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
	p, err := j.problemAt(ctx, copies)
	if err != nil {
		return lattice.Estimate{}, err
	}
	return p.Estimate(ctx)
}

// A reachError tells that the lattice cannot give a prefactor.
type reachError struct {
	problem    string
	indistinct bool // at fewer copies two states are one
}

func (e *reachError) Error() string { return e.problem }

// outOfReach says why the lattice cannot give the prefactor.
func (j *job) outOfReach(err error) error {
	var same *deterministic.IndistinctError
	if errors.As(err, &same) {
		return &reachError{fmt.Sprintf("the prefactor is found at fewer copies, where flips are seen, but there %s and %s have the same whole molecules: take --route runs or lattice", same.First, same.Second), true}
	}
	return &reachError{"the lattice cannot give the prefactor: " + why(err), false}
}

// at gives a job of the same design at other copies, with a report of its own.
func (j *job) at(ctx context.Context, copies float64) (*job, error) {
	n, err := j.network.Rebind(copies, nil)
	if err != nil {
		return nil, err
	}
	n.Declared = nil // in molecules: they mean something else at other copies
	survey, err := deterministic.Survey(ctx, n, deterministic.Options{Seeds: amountsOf(j.survey)})
	if err != nil {
		return nil, err
	}
	at := &job{network: n, survey: survey, options: j.options, report: &Report{}}
	if !slices.Equal(at.stateNames(), j.stateNames()) {
		return nil, fmt.Errorf("at %.4g copies there are other states: %v", copies, at.stateNames())
	}
	return at, nil
}

// problemAt states the design at other copies for the lattice.
func (j *job) problemAt(ctx context.Context, copies float64) (lattice.Problem, error) {
	at, err := j.at(ctx, copies)
	if err != nil {
		return lattice.Problem{}, err
	}
	p := at.problem()
	p.MeansOnly, p.Truncation = true, prefactorTruncation
	return p, nil
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
func (j *job) solveAt(ctx context.Context, copies float64, gone bool) (*lattice.Solution, error) {
	p, err := j.problemAt(ctx, copies)
	if err != nil {
		return nil, err
	}
	if gone {
		p.Truncation = goneTruncation
	}
	return lattice.Solve(ctx, p)
}

// logTime is the logarithm of the mean time of a way.
func (w *way) logTime(s *lattice.Solution) float64 {
	if w.gone() {
		return math.Log(s.Mean[w.from] / s.Lost[w.from])
	}
	return math.Log(s.Pair[w.from][w.to])
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
