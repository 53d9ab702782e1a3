package hold

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"holdfast/analysis/dwell"
	"holdfast/analysis/records"
	"holdfast/model"
)

// holdGenerations are the numbers of generations that chances of holding are
// given for where Options.Holds names none.
func holdGenerations() []float64 { return []float64{10, 100, 1000} }

// anyState stands in reports for leaving a state by whichever way; absorbed for
// an absorbing state that is none of the resting states.
const (
	anyState = "any"
	absorbed = "absorbed"
)

// estimate turns the dwells seen in one state into rows of the report.
func (j *job) estimate(r *stateRuns) error {
	from := j.survey.Stable()[r.state].Name
	if r.interrupted {
		j.report.Interrupted = true
		j.warn("%s: stopped before its runs were done; the numbers are from the %d runs begun by then", r.label(from), len(r.seen))
	}
	summary, err := j.summarise(r)
	if errors.Is(err, dwell.ErrNoExposure) {
		j.warn("%s: nothing was seen of it", r.label(from))
		return nil
	}
	if err != nil {
		return err
	}
	j.tellStuck(r)
	j.tellTail(r)
	for _, w := range summary.Warnings {
		j.warn("%s: %s", r.label(from), w)
	}
	several := len(summary.To) > 1
	if several {
		j.addRow(r.route, from, &summary, summary.Any)
	}
	for _, e := range summary.To {
		if several {
			e.Hold = nil // the chance of holding is that of the state, not of a pair
		}
		j.addRow(r.route, from, &summary, e)
	}
	j.checkPrecision(from, r, summary.Any)
	return nil
}

// label names the state in warnings; those on an approximation say so.
func (r *stateRuns) label(state string) string {
	if r.route == Langevin {
		return r.route + ": " + state
	}
	return state
}

// summarise does the statistics of the dwells seen in one state.
func (j *job) summarise(r *stateRuns) (dwell.Summary, error) {
	return dwell.Summarise(r.seen, len(j.survey.Stable()), dwell.Options{
		From: r.state, Generation: j.network.Generation, Holds: j.options.Holds, Mixed: j.varies(),
	})
}

func (j *job) addRow(route, from string, summary *dwell.Summary, e dwell.Estimate) {
	row := DwellReport{
		From: from, To: j.targetName(e.To), Route: route, Sampled: true,
		StandardError: Value(e.StandardError), Mean: Value(e.Mean), Low: Value(e.Low), High: Value(e.High), Flips: Value(e.Flips), Exposure: Value(e.Exposure),
		PerGeneration: Value(e.PerGeneration.Value), PerGenerationLow: Value(e.PerGeneration.Low), PerGenerationHigh: Value(e.PerGeneration.High),
	}
	if e.Flips == 0 {
		row.Mean, row.Note = Value(math.NaN()), "no flip seen: a lower limit only"
	}
	for _, h := range e.Hold {
		row.Holds = append(row.Holds, newHoldChance(h.Generations, 1-h.Value, 1-h.Low, 1-h.High))
		last := &row.Holds[len(row.Holds)-1]
		last.Chance, last.Low, last.High = Value(h.Value), Value(h.Low), Value(h.High)
	}
	j.add(row)
	j.rates = append(j.rates, j.rateOf(route, summary, e))
}

// add puts a row into the report, with the same times in generations.
func (j *job) add(row DwellReport) {
	g := Value(j.network.Generation)
	if g == 0 {
		g = Value(math.NaN())
	}
	row.Generations, row.GenerationsLow, row.GenerationsHigh = row.Mean/g, row.Low/g, row.High/g
	j.report.Dwells = append(j.report.Dwells, row)
}

// neverLeft reports an absorbing state.
func (j *job) neverLeft(s int) {
	if slices.ContainsFunc(j.rates, func(r records.Rate) bool { return r.From == s && r.Route == absorbing }) {
		return // said already by the first route
	}
	from, inf, nan := j.survey.Stable()[s].Name, Value(math.Inf(1)), Value(math.NaN())
	for t, to := range j.survey.Stable() {
		if t == s {
			continue
		}
		row := DwellReport{From: from, To: to.Name, Route: absorbing, Mean: inf, Low: inf, High: inf, Flips: nan, Exposure: nan, Never: true, Note: "never returns"}
		if j.network.Generation > 0 {
			for _, g := range j.options.Holds {
				row.Holds = append(row.Holds, newHoldChance(g, 0, 0, 0))
			}
		} else {
			row.PerGeneration, row.PerGenerationLow, row.PerGenerationHigh = nan, nan, nan
		}
		j.add(row)
		j.rates = append(j.rates, j.neverRate(s, t, row))
	}
	j.warn("%s is absorbing: no reaction leads out of it, so a cell that has fallen into it never returns by itself", from)
}

func (j *job) targetName(to int) string {
	switch to {
	case dwell.Any:
		return anyState
	case dwell.Elsewhere:
		return absorbed
	}
	return j.survey.Stable()[to].Name
}

// checkPrecision warns where the interval is wider than asked.
func (j *job) checkPrecision(from string, r *stateRuns, e dwell.Estimate) {
	if j.options.Runs > 0 || j.options.Until > 0 || r.interrupted || e.Flips == 0 {
		return
	}
	if half := math.Max(e.High/e.Mean-1, 1-e.Low/e.Mean); half > j.options.Precision*(1+1e-9) {
		j.warn("%s: the interval reaches %.2g %% from the mean, wider than the %.2g %% asked; more %s (--events) narrow it",
			r.label(from), 100*half, 100*j.options.Precision, r.work)
	}
}

func (j *job) warn(format string, a ...any) {
	j.report.Warnings = append(j.report.Warnings, fmt.Sprintf(format, a...))
}

func speciesNames(n *model.Network) []string {
	names := make([]string, len(n.Species))
	for i, s := range n.Species {
		names[i] = s.Name
	}
	return names
}
