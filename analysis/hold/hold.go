package hold

import (
	"context"
	"fmt"
	"time"

	"holdfast/analysis/records"
	"holdfast/analysis/survey/resting"
	"holdfast/deterministic"
	"holdfast/model"
)

// A job is one hold job at work.
type job struct {
	network *model.Network
	options Options
	survey  *deterministic.Map
	sink    *sink // nil: nothing is recorded
	// interval is the time for which constants that vary in time are held; 0: none does.
	interval float64
	report   *Report
	rates    []records.Rate // the same rows as the report's, for the records
}

// Run surveys the network, estimates how long each resting state holds, and
// writes the records if a folder is given.
//
// Errors are an *OptionError, those of deterministic.Survey, of the engine (a
// rate that is negative or not finite, counts that run away) and of the records.
// If ctx is done before the job is, the report says what was seen by then and
// has Interrupted set; there is no error then.
func Run(ctx context.Context, network *model.Network, options Options) (*Report, error) {
	begun := time.Now()
	options, err := options.complete()
	if err != nil {
		return nil, err
	}
	if err := options.checkAlong(network); err != nil {
		return nil, err
	}
	list := options.States
	if list == nil {
		if list, err = resting.States(ctx, network); err != nil {
			return nil, err
		}
	}
	j := &job{network: network, options: options, survey: list.Map}
	if err := j.takeCores(); err != nil {
		return nil, err
	}
	j.newReport()
	j.report.List = list.String()
	j.report.Warnings = append(j.report.Warnings, list.Warnings...)
	if err := j.setVariation(); err != nil {
		return nil, err
	}
	if err := j.openSink(); err != nil {
		return nil, err
	}
	defer j.sink.abandon()
	if err := j.takeRoutes(ctx); err != nil {
		return nil, err
	}
	j.report.Rates = j.rates
	j.report.Work.Seconds = time.Since(begun).Seconds()
	return j.report, j.closeSink()
}

// remaining takes what was spent from a budget, of which 0 is no limit; a budget
// that is used up keeps a last event for each state to come.
func remaining(budget, spent int64) int64 {
	if budget == 0 {
		return 0
	}
	return max(budget-spent, 1)
}

// takeCores puts the cores that were given in the place of the survey's.
func (j *job) takeCores() error {
	given := j.options.Cores
	if given == nil {
		return nil
	}
	if have := len(j.survey.Cores); len(given) != have {
		return &OptionError{"cores", len(given), fmt.Sprintf("one for each of the %d stable states", have)}
	}
	j.survey.Cores = given
	return nil
}
