package hold

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"

	"holdfast/analysis/records"
)

// errNoAdvance tells that staged runs did not get to some state.
var errNoAdvance = errors.New("its runs did not get on to some state")

// takeFirst takes the best route, or, where one fails and the choice is auto's, the
// next, and gives its name.
func (j *job) takeFirst(ctx context.Context) (string, error) {
	c := &chooser{job: j}
	list, err := c.first(ctx)
	if err != nil {
		return "", err
	}
	begun := j.mark()
	partial, name, problem := begun, "", error(nil)
	for len(list) > 0 {
		now := list[0]
		list = list[1:]
		err := j.attempt(ctx, &now)
		if err == nil || ctx.Err() != nil || isOption(err) {
			return now.route, err
		}
		if errors.Is(err, errNoAdvance) {
			partial, name = j.mark(), now.route
		}
		if problem == nil {
			problem = err
		}
		j.reset(begun)
		if len(list) == 0 && !c.weighed {
			if list, err = c.weigh(ctx); err != nil {
				return "", errors.Join(problem, err)
			}
			list = slices.DeleteFunc(list, func(o candidate) bool { return o.route == now.route })
		}
		if len(list) > 0 {
			j.warn("%s failed: %v; going on with %s", now.route, err, list[0].route)
		}
	}
	if name != "" {
		j.reset(partial)
		return name, nil
	}
	return "", problem
}

func isOption(err error) bool {
	var option *OptionError
	return errors.As(err, &option)
}

// attempt takes a candidate, after saying how long it is likely to take.
func (j *job) attempt(ctx context.Context, c *candidate) error {
	j.report.Route = c.route + ": " + c.words()
	if c.seconds > noticeable && j.options.Notice != nil {
		j.options.Notice(fmt.Sprintf("route %s, likely to take about %.2g s on one core", c.route, c.seconds))
	}
	if err := j.checkVaried(c.route); err != nil {
		return err
	}
	rows := len(j.report.Dwells)
	if err := j.take(ctx, c.route); err != nil {
		return err
	}
	if j.options.Route == Auto && c.route == Staged && slices.ContainsFunc(j.report.Dwells[rows:], stuck) && !j.report.Interrupted {
		return errNoAdvance
	}
	return nil
}

// stuck tells that a row has a limit only.
func stuck(d DwellReport) bool {
	return d.Route == Staged && d.Note != "" && math.IsNaN(float64(d.Mean))
}

// A progressed is how far a report has come.
type progressed struct {
	report Report
	rates  []records.Rate
}

// mark keeps the report as it is.
func (j *job) mark() progressed {
	j.report.Dwells, j.rates = slices.Clip(j.report.Dwells), slices.Clip(j.rates)
	j.report.Staged = slices.Clip(j.report.Staged)
	return progressed{*j.report, j.rates}
}

// reset takes the report back to what it was, but for the work done and the warnings.
func (j *job) reset(p progressed) {
	work, warnings := j.report.Work, j.report.Warnings
	*j.report, j.rates = p.report, p.rates
	j.report.Work, j.report.Warnings = work, warnings
}

// say reports a stage of the job.
func (j *job) say(stage string, share float64) {
	if j.options.Progress != nil {
		j.options.Progress(Progress{Stage: stage, Share: share, Events: j.report.Work.Events})
	}
}
