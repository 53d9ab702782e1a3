package hold

import (
	"context"
	"fmt"
	"math"

	"holdfast/analysis/action"
	"holdfast/analysis/dwell"
)

const (
	// eventSeconds is what one event takes on one core of a usual machine.
	eventSeconds = 20e-9
	// weighEvents is what the pilot that weighs the routes may spend on all states.
	weighEvents = 8_000_000
	// stagedWork is the work of staged runs from one state to another: events over those in one
	// relaxation at the saddle's rate, over the exponent of the mean time, times the square
	// of the precision. On the demo latch, at 100 and 200 copies, it is 290 to 360 (measured).
	stagedWork = 320
	// unknownExponent stands for the exponent of a mean time where there is none to be had.
	unknownExponent = 15
	// actionSeconds is what the paths of least action and the lattices at fewer copies take.
	actionSeconds = 5
	// leastRare is the exponent below which least action says nothing of flips.
	leastRare = 3
)

// A weighing is what the routes for flips of any rarity are likely to take, in seconds of
// one core.
type weighing struct {
	*job
	runs, staged float64
	// inReach tells that the budget of exact runs reaches the precision.
	inReach bool
	// pilot and seen are the events of the pilot and the flips seen in it.
	pilot, seen int64
	// exponent is the largest exponent of a mean time; 0: not known, for problem.
	exponent float64
	problem  error
}

// explore makes the pilot and, where flips are not in the reach of runs, finds their
// exponents.
func (j *job) explore(ctx context.Context) (*weighing, error) {
	w := &weighing{job: j, inReach: true}
	for s, state := range j.survey.Stable() {
		if state.Absorbing {
			continue
		}
		if err := w.try(ctx, s); err != nil {
			return nil, err
		}
	}
	budget := float64(j.options.Events) * eventSeconds
	w.inReach = w.inReach && (budget == 0 || w.runs <= budget)
	if w.inReach {
		return w, nil
	}
	return w, w.findExponents(ctx)
}

// try makes the pilot of one state.
func (w *weighing) try(ctx context.Context, s int) error {
	w.say("auto: a pilot of exact runs", 0)
	states := int64(len(w.survey.Stable()))
	m, err := w.exact(0).run(ctx, batch{state: s, first: pilotReplicate, runs: pilotRuns, most: weighEvents / states / pilotRuns})
	w.report.Work.Events += m.work
	if m.stops {
		return context.Cause(ctx)
	}
	if err != nil {
		return err
	}
	seen := int64(0)
	for i := range m.paths {
		if m.paths[i].left() {
			seen++
		}
	}
	w.pilot, w.seen = w.pilot+m.work, w.seen+seen
	if seen == 0 {
		w.inReach = false
		return nil
	}
	w.runs += float64(dwell.FlipsFor(w.options.Precision)) * float64(m.work) / float64(seen) * eventSeconds
	return nil
}

// findExponents finds the exponents of all mean times, and with them what staged runs
// are likely to take.
func (w *weighing) findExponents(ctx context.Context) error {
	w.say("auto: paths of least action", 0.5)
	routes, err := action.Survey(ctx, w.survey, action.Options{Tolerance: pathTolerance})
	if ctx.Err() != nil {
		return context.Cause(ctx)
	}
	w.problem = err
	p := w.options.Precision
	for from, state := range w.survey.Stable() {
		for to := range w.survey.Stable() {
			if from == to || state.Absorbing {
				continue
			}
			exponent := unknownExponent * 1.
			if err == nil {
				if pair := routes.Find(state.Name, w.survey.Stable()[to].Name); pair != nil && pair.S > 0 && !math.IsInf(pair.S, 1) {
					exponent = pair.S * w.network.Copies
					w.exponent = math.Max(w.exponent, exponent)
				}
			}
			w.staged += stagedWork * w.bustle() * state.CorrelationTime() * math.Max(exponent, 1) / (p * p) * eventSeconds
		}
	}
	return nil
}

// bustle is the number of events in a unit of time at the busiest saddle or other
// unstable point (of one species there is no saddle), or, without one, at the busiest state.
func (w *weighing) bustle() float64 {
	most := 0.0
	states := w.survey.States
	if stable := len(w.survey.Stable()); len(states) > stable {
		states = states[stable:]
	}
	for i := range states {
		s := &states[i]
		sum := 0.0
		for r := range w.network.Reactions {
			sum += w.network.Reactions[r].Scale * w.network.Flux(r, s.Amounts)
		}
		most = math.Max(most, sum)
	}
	return most
}

// rare lists the routes for rare flips, the better one first: staged runs where the
// budget reaches the precision with them, or where least action says nothing.
func (w *weighing) rare(beside string) []candidate {
	if w.inReach {
		return nil
	}
	staged := candidate{Staged, w.rarity(), w.staged, beside}
	if w.problem != nil || w.exponent < leastRare {
		return []candidate{staged}
	}
	reason := fmt.Sprintf("paths of least action and a prefactor from fewer copies, as flips are very rare: exponents up to %.3g", w.exponent)
	action := candidate{Action, reason, actionSeconds, fmt.Sprintf("staged runs would take about %.2g s; %s", w.staged, beside)}
	if w.staged > float64(w.options.Events)*eventSeconds && w.options.Events > 0 {
		return []candidate{action, staged}
	}
	return []candidate{staged, action}
}

// rarity says why exact runs will not do.
func (w *weighing) rarity() string {
	if w.seen == 0 {
		return fmt.Sprintf("staged runs, as flips are rare: none in %.2g events of a pilot", float64(w.pilot))
	}
	return fmt.Sprintf("staged runs, as flips are rare: %d in %.2g events of a pilot", w.seen, float64(w.pilot))
}
