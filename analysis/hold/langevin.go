package hold

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"holdfast/deterministic"
	"holdfast/sde"
)

const (
	stepWork = "steps"
	// halfReplicate is the first replicate of the paths at half the step.
	halfReplicate = 1 << 38
	// fullShare of a state's steps goes into the paths that count; as many paths at
	// half the step take twice as many.
	fullShare = 1. / 3
	// leastMolecules is the count below which the Langevin equation is not to be trusted.
	leastMolecules = 10
)

// A LangevinReport tells how Langevin paths were made and what their step does.
type LangevinReport struct {
	Step Value `json:"step"` // of the paths that count, in TimeUnit
	// Largest is the largest step with which no mode at a resting state overshoots.
	Largest Value `json:"largest_step"`
	// States has a row for each state that was left.
	States []StepReport `json:"states"`
}

// A StepReport is what halving the step does to the mean dwell of one state.
type StepReport struct {
	State string `json:"state"`
	Paths int    `json:"paths"` // at each of the two steps
	// Mean dwell with the step and with half of it, each from paths of its own.
	Mean Value `json:"mean"`
	Half Value `json:"mean_at_half_step"`
	// Change is what halving moves the mean by, relative to it, and Sampling the
	// standard error of that. NaN where one of the two saw no flip.
	Change   Value `json:"change"`
	Sampling Value `json:"sampling_error"`
	// Lost counts the paths, at both steps, that were stopped because their state was
	// not finite or ran away, and that no average holds.
	Lost int `json:"lost"`
}

// A langevin makes Langevin paths of a job's network.
type langevin struct {
	*job
	system        sde.System
	step, largest float64
}

// byLangevin estimates the hold time of every state in turn by Langevin paths, and
// again with half the step.
func (j *job) byLangevin(ctx context.Context) error {
	l, err := j.newLangevin()
	if err != nil {
		return err
	}
	j.report.Langevin = &LangevinReport{Step: Value(l.step), Largest: Value(l.largest)}
	l.caution()
	return j.eachState(func(s int, budget int64) (int64, error) { return l.sample(ctx, s, budget) })
}

// newLangevin chooses the step, or refuses the one asked for.
func (j *job) newLangevin() (*langevin, error) {
	l := &langevin{job: j, system: sde.Chemical(j.network)}
	var points [][]float64
	for s, state := range j.survey.Stable() {
		points = append(points, state.Molecules, l.start(s))
	}
	l.largest = sde.LargestStep(l.system, points...)
	l.step = math.Min(sde.StepFor(l.system, points...), l.largest)
	switch asked := j.options.Step; {
	case asked > l.largest:
		allowed := fmt.Sprintf("at most %g %s: beyond that a path overshoots its fastest mode at every step", roundedDown(l.largest), j.network.TimeUnit)
		return nil, &OptionError{"step", asked, allowed}
	case asked > 0:
		l.step = asked
	}
	return l, nil
}

// roundedDown gives the largest number of six digits that is not above x, so that what a
// message allows is allowed.
func roundedDown(x float64) float64 {
	text := strconv.FormatFloat(x, 'e', 5, 64)
	rounded, _ := strconv.ParseFloat(text, 64)
	if rounded <= x {
		return rounded
	}
	_, exponent, _ := strings.Cut(text, "e")
	unit, _ := strconv.ParseFloat("1e"+exponent, 64)
	text = strconv.FormatFloat(rounded-1e-5*unit, 'e', 5, 64)
	rounded, _ = strconv.ParseFloat(text, 64)
	return rounded
}

func (l *langevin) start(s int) []float64 {
	var x []float64
	for _, n := range l.survey.Cores[s].Start {
		x = append(x, float64(n))
	}
	return x
}

// sample makes the paths of one state at both steps and reports on them.
func (l *langevin) sample(ctx context.Context, s int, budget int64) (int64, error) {
	full := &stateRuns{engine: l.engine(l.step), state: s, span: fullShare}
	allowed, err := l.runState(ctx, full, int64(math.Ceil(float64(budget)*fullShare)))
	l.report.Work.Steps += full.spent
	if err != nil {
		return full.spent, err
	}
	half := &stateRuns{engine: l.engine(l.step / 2), state: s, next: halfReplicate, silent: true, base: fullShare, span: 1 - fullShare}
	if !full.interrupted {
		err = l.spendAll(ctx, half, allowed.doubled(), 2*full.spent)
		l.report.Work.Steps += half.spent
	}
	if err != nil {
		return full.spent + half.spent, err
	}
	l.tellLost(full, half)
	if err := l.estimate(full); err != nil {
		return full.spent + half.spent, err
	}
	return full.spent + half.spent, l.compareSteps(full, half)
}

// engine is that of the route langevin, with a step.
func (l *langevin) engine(step float64) engine {
	return engine{route: Langevin, work: stepWork, run: func(ctx context.Context, b batch) (made, error) {
		return l.paths(ctx, b, step)
	}}
}

func (l *langevin) paths(ctx context.Context, b batch, step float64) (made, error) {
	result, err := sde.Run(ctx, sde.Plan{
		System: l.system, Start: l.start(b.state), Cores: l.survey.Cores, From: b.state,
		Runs: b.runs, FirstReplicate: b.first, Seed: l.options.Seed, Point: l.options.Point, Group: uint64(b.state), Step: step,
		Interval: l.interval * step / l.step,
		Until:    l.options.Until, MaxSteps: b.most, Limit: float64(l.mostMolecules()),
		Threads: l.options.Threads, Lanes: l.options.Lanes, Progress: b.progress,
	})
	m := made{work: result.Steps, stops: errors.Is(err, context.Canceled)}
	if err != nil && !m.stops {
		return m, err
	}
	for i := range result.Outcomes {
		o := &result.Outcomes[i]
		m.paths = append(m.paths, path{
			replicate: o.Replicate, fate: langevinFate(o.Ending), core: o.Core, ending: o.Ending.String(),
			time: o.Time, work: o.Steps, err: o.Err(),
		})
	}
	return m, nil
}

func langevinFate(e sde.Ending) fate {
	switch e {
	case sde.Flipped:
		return byFlip
	case sde.Cancelled:
		return byStop
	case sde.RanAway, sde.NotFinite:
		return byFault
	}
	return byLimit
}

// compareSteps reports what halving the step does to the mean dwell of a state.
func (l *langevin) compareSteps(full, half *stateRuns) error {
	row := StepReport{State: l.survey.Stable()[full.state].Name, Paths: len(full.seen), Lost: full.lost + half.lost}
	row.Mean, row.Half, row.Change, row.Sampling = l.halving(full, half)
	l.report.Langevin.States = append(l.report.Langevin.States, row)
	if c := math.Abs(float64(row.Change)); c > 3*float64(row.Sampling) && c > l.options.Precision/2 {
		l.warn("langevin: %s: halving the step moves the mean by %.2g %%, more than chance: take a smaller step (--step)", row.State, 100*float64(row.Change))
	}
	return nil
}

// tellLost says how many paths were stopped, and why the first one was.
func (l *langevin) tellLost(full, half *stateRuns) {
	lost, problem := full.lost+half.lost, full.problem
	if lost == 0 {
		return
	}
	if problem == nil {
		problem = half.problem
	}
	l.warn("langevin: %s: %d of %d paths were stopped, since their state was not finite or ran away, and are in no average; the first: %v",
		l.survey.Stable()[full.state].Name, lost, lost+len(full.seen)+len(half.seen), problem)
}

// caution says where the approximation is not to be trusted.
func (l *langevin) caution() {
	for _, s := range l.survey.Stable() {
		least := 0
		for i, n := range s.Molecules {
			if n < s.Molecules[least] {
				least = i
			}
		}
		if n := s.Molecules[least]; n < leastMolecules {
			l.warn("langevin: %s rests at %.3g molecules of %s: below %d the approximation is not to be trusted there; hold it against an exact route (--second)",
				s.Name, n, l.network.Species[least].Name, leastMolecules)
		}
	}
	if l.canBeAbsorbed() {
		l.warn("langevin: this design has states that no reaction leads out of, where species have run out; a Langevin path is reflected at 0 " +
			"and never absorbed, so this route cannot see extinction: compare it with an exact one (--second)")
	}
}

// canBeAbsorbed tells whether exact runs may end where no reaction leads out.
func (l *langevin) canBeAbsorbed() bool {
	return len(l.network.Absorbing()) > 0 ||
		slices.ContainsFunc(l.survey.Stable(), func(s deterministic.State) bool { return s.Absorbing })
}
