package hold

import "fmt"

// progressOf tells the job's progress while state s has its runs from done on made.
func (j *job) progressOf(s, done, runs int) func(int, int64) {
	if j.options.Progress == nil {
		return nil
	}
	states := len(j.survey.Stable())
	stage := fmt.Sprintf("runs of state %s", j.survey.Stable()[s].Name)
	before := j.report.Work.Events
	return func(finished int, events int64) {
		share := (float64(s) + float64(done+finished)/float64(runs)) / float64(states)
		j.options.Progress(Progress{stage, share, before + events})
	}
}
