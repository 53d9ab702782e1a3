package hold

import (
	"fmt"
	"math"
)

// progressOf tells the job's progress while the runs of a state from done on are made.
func (j *job) progressOf(r *stateRuns, done int, allowed allowance) func(int, int64) {
	if j.options.Progress == nil {
		return nil
	}
	states := len(j.survey.Stable())
	stage := fmt.Sprintf("%s of state %s", r.route, j.survey.Stable()[r.state].Name)
	before := *j.total(r) + r.spent
	return func(finished int, work int64) {
		share := float64(done+finished) / float64(allowed.runs)
		if allowed.expect > 0 {
			share = math.Min(math.Max(share, float64(work)/float64(allowed.expect)), 0.999)
		}
		j.options.Progress(Progress{Stage: stage, Share: (float64(r.state) + r.base + r.span*share) / float64(states), Events: before + work, Unit: r.work})
	}
}

// total gives what the report counts the work of r in.
func (j *job) total(r *stateRuns) *int64 {
	if r.work == stepWork {
		return &j.report.Work.Steps
	}
	return &j.report.Work.Events
}
