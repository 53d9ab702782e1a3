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
	stage := fmt.Sprintf("runs of state %s", j.survey.Stable()[r.state].Name)
	spent := r.events
	before := j.report.Work.Events + spent
	return func(finished int, events int64) {
		share := float64(done+finished) / float64(allowed.runs)
		if allowed.expect > 0 {
			share = math.Min(math.Max(share, float64(events)/float64(allowed.expect)), 0.999)
		}
		j.options.Progress(Progress{stage, (float64(r.state) + share) / float64(states), before + events})
	}
}
