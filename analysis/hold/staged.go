package hold

import (
	"context"
	"errors"
	"fmt"
	"math"

	"gonum.org/v1/gonum/stat/distuv"

	"holdfast/analysis/action"
	"holdfast/analysis/records"
	"holdfast/analysis/staged"
)

// A StagedReport tells how the staged runs of one ordered pair of states went.
type StagedReport struct {
	From string `json:"from"`
	To   string `json:"to"`
	// Along says what progress is measured along.
	Along string `json:"along"`
	// Flux is the rate at which runs that come out of From's core meet the first rung,
	// in 1/TimeUnit.
	Flux   Value         `json:"flux"`
	Stages []StageReport `json:"stages"`
	// Repeats is the number of independent repeats; Effective is how many independent
	// flips would tell the mean as well.
	Repeats   int   `json:"repeats"`
	Effective Value `json:"effective_flips"`
	// Disagreement is the variance between repeats over the one expected of them.
	Disagreement Value `json:"disagreement"`
	Events       int64 `json:"events"`

	from, to int // indices of the states
}

// A StageReport is one stage of staged runs, all repeats together.
type StageReport struct {
	// Share is how far along the coordinate its runs begin, from 0 to 1.
	Share Value `json:"share"`
	// Success is the share of its runs that came to the next stage.
	Success Value `json:"success"`
	Runs    int64 `json:"runs"`
	Events  int64 `json:"events"`
}

// A stagedJob makes staged runs of a job's network.
type stagedJob struct {
	*job
	ways   *action.Routes
	noWays error // why there are no paths of least action
}

// A leaving is the estimate of the rate of one way out of a state.
type leaving struct {
	to     int
	result *staged.Result // nil: the runs did not get there
	stuck  *staged.StuckError
}

// byStaged estimates the hold time of every state in turn by staged runs.
func (j *job) byStaged(ctx context.Context) error {
	r := &stagedJob{job: j}
	if err := r.refuse(); err != nil {
		return err
	}
	return j.eachState(func(s int, budget int64) (int64, error) { return r.sample(ctx, s, budget) })
}

// refuse tells what staged runs cannot serve.
func (r *stagedJob) refuse() error {
	const instead = "left out for staged runs: their stages are as many and as long as the flip asks; --precision and --events say how well and at what cost"
	switch o := r.options; {
	case o.Runs > 0:
		return &OptionError{"runs", o.Runs, instead}
	case o.Until > 0:
		return &OptionError{"until", o.Until, instead}
	}
	return nil
}

// sample makes the staged runs from one state to every other.
func (r *stagedJob) sample(ctx context.Context, s int, budget int64) (spent int64, err error) {
	var ways []leaving
	targets := len(r.survey.Stable()) - 1
	for to := range r.survey.Stable() {
		if to == s || r.report.Interrupted {
			continue
		}
		w, err := r.leave(ctx, s, to, perRun(remaining(budget, spent), targets-len(ways)))
		if err != nil {
			return spent, err
		}
		if w.result != nil {
			spent += w.result.Events
			r.report.Work.Events += w.result.Events
		}
		ways = append(ways, w)
	}
	r.addRows(s, ways)
	return spent, nil
}

// leave makes the staged runs from one state to another.
func (r *stagedJob) leave(ctx context.Context, from, to int, budget int64) (leaving, error) {
	w := leaving{to: to}
	along, err := r.along(ctx, from, to)
	if err == nil {
		w.result, err = staged.Run(ctx, r.plan(from, to, along, budget))
	}
	var stuck *staged.StuckError
	switch {
	case ctx.Err() != nil && err != nil:
		r.report.Interrupted = true
		r.warn("%s: stopped before the staged runs to %s could tell anything", r.name(from), r.name(to))
		return w, nil
	case errors.As(err, &stuck):
		w.stuck = stuck
		return w, nil
	case err != nil:
		return w, Explain(r.network, err)
	}
	r.describe(from, to, along.Name, w.result)
	return w, nil
}

func (r *stagedJob) name(s int) string { return r.survey.Stable()[s].Name }

func (r *stagedJob) plan(from, to int, along staged.Coordinate, budget int64) staged.Plan {
	states := len(r.survey.Stable())
	p := staged.Plan{
		Network: r.network, Cores: r.survey.Cores, From: from, To: to, Along: along, Relaxation: 1 / r.survey.Stable()[from].SlowRate,
		Precision: r.options.Precision, Events: budget, Seed: r.options.Seed, Point: r.options.Point, Group: uint64(from*states + to),
		MaxCount: r.mostMolecules(), Threads: r.options.Threads,
	}
	if tell := r.options.Progress; tell != nil {
		before, done := r.report.Work.Events, float64(from*states+to)/float64(states*states)
		p.Progress = func(stage string, share float64, events int64) {
			name := fmt.Sprintf("staged runs %s → %s: %s", r.name(from), r.name(to), stage)
			tell(Progress{Stage: name, Share: done + share/float64(states*states), Events: before + events})
		}
	}
	return p
}

// describe adds the report of one pair's stages, with what is to be said of them.
func (r *stagedJob) describe(from, to int, along string, s *staged.Result) {
	report := StagedReport{
		From: r.name(from), To: r.name(to), Along: along, Flux: Value(s.Flux), Repeats: len(s.Repeats),
		Effective: Value(s.Effective), Disagreement: Value(s.Disagreement), Events: s.Events, from: from, to: to,
	}
	for _, stage := range s.Stages {
		report.Stages = append(report.Stages, StageReport{Value(stage.Share), Value(stage.Success), stage.Runs, stage.Events})
	}
	r.report.Staged = append(r.report.Staged, report)
	pair := fmt.Sprintf("%s → %s", r.name(from), r.name(to))
	if s.Ending == staged.Cancelled {
		r.report.Interrupted = true
		r.warn("%s: stopped before its staged runs were done; the numbers are from the %d repeats finished by then", pair, len(s.Repeats))
	}
	if s.Missed {
		r.warn("%s: the repeats disagree more than chance (their variance is %.2g times what each expects of itself): there may be a way between the states that this coordinate misses; hold it against another (--along)", pair, s.Disagreement)
	}
	if s.Effective < fewFlips {
		r.warn("%s: as good as %.2g independent flips only: so few know neither the mean nor its interval well; rely on it no further than its order of magnitude, and take another --along or more events", pair, s.Effective)
	}
	if s.Emptied > 0 {
		r.warn("%s: %d of the runs came to a state that no reaction leads out of and that is none of the states: leaving that way is in no rate here; --route runs counts it", pair, s.Emptied)
	}
	if half := s.High/s.Rate - 1; half > r.options.Precision && s.Ending != staged.Cancelled {
		r.warn("%s: the interval reaches %.2g %% from the mean, wider than the %.2g %% asked%s", pair, 100*half, 100*r.options.Precision, advice(s.Ending))
	}
}

// fewFlips is the number of independent flips below which an interval on the logarithm
// stands for little: its own width is then known to no better than a half.
const fewFlips = 10

func advice(e staged.Ending) string {
	if e == staged.Spent {
		return "; more events (--events) narrow it"
	}
	return ", since the repeats spread more than the pilot's; a smaller --precision narrows it"
}

// addRows adds the rows of one state: each way out, and, where there are several, all
// of them together.
func (r *stagedJob) addRows(from int, ways []leaving) {
	seen := 0
	for _, w := range ways {
		if w.result != nil {
			seen++
		}
	}
	if seen > 1 || seen == 1 && len(ways) > 1 {
		r.addLog(together(from, ways))
	}
	for _, w := range ways {
		switch {
		case w.result != nil:
			row := wayRow(from, w)
			row.holds = len(ways) == 1
			r.addLog(row)
		case w.stuck != nil:
			r.addLog(stuckRow(from, w))
			r.warn("%v; %s", w.stuck, r.nextThing(w.stuck))
		}
	}
}

// nextThing says what to try where runs did not get on.
func (r *stagedJob) nextThing(e *staged.StuckError) string {
	switch {
	case e.Elsewhere != "":
		return "if the way between them always leads through it, that is the answer"
	case e.Emptied:
		return "a state that empties is left that way: --route runs counts it"
	}
	return "try another coordinate (--along line, or --along and a species), or --route runs"
}

// stagedInterval says how the interval of staged runs is made.
const stagedInterval = "repeats of staged runs, Student's t on the logarithm"

func wayRow(from int, w leaving) logRow {
	s := w.result
	return logRow{
		from: from, to: w.to, route: Staged, interval: stagedInterval, mean: 1 / s.Rate, low: 1 / s.High, high: 1 / s.Low,
		standardError: s.StandardError / (s.Rate * s.Rate), flips: s.Effective,
	}
}

// stuckRow is the row of a way that was not found: a lower limit at most.
func stuckRow(from int, w leaving) logRow {
	return logRow{
		from: from, to: w.to, route: Staged, interval: "no run came there", note: "no flip seen: a lower limit only",
		mean: math.NaN(), low: 1 / w.stuck.Rate, high: math.Inf(1), standardError: math.NaN(),
	}
}

// together is the row of all ways out of a state: rates add up, and so do their
// variances, with Welch's degrees of freedom (Welch, Biometrika 34 (1947) 28).
func together(from int, ways []leaving) logRow {
	rate, variance, fourth := 0.0, 0.0, 0.0
	for _, w := range ways {
		if s := w.result; s != nil {
			v := s.StandardError * s.StandardError
			rate, variance, fourth = rate+s.Rate, variance+v, fourth+v*v/float64(len(s.Repeats)-1)
		}
	}
	t := distuv.StudentsT{Mu: 0, Sigma: 1, Nu: variance * variance / fourth}.Quantile(0.975)
	reach := math.Exp(t * math.Sqrt(variance) / rate)
	return logRow{
		from: from, to: records.Any, route: Staged, interval: stagedInterval, mean: 1 / rate, low: 1 / (rate * reach), high: reach / rate,
		standardError: math.Sqrt(variance) / (rate * rate), flips: rate * rate / variance, holds: true,
	}
}
