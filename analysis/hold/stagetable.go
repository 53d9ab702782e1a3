package hold

import "holdfast/analysis/records"

// A stageTable is the table stages: a row for each stage of each ordered pair.
type stageTable struct {
	*records.Table
	from, to             records.LabelColumn
	stage, runs, events  records.IntColumn
	share, success, flux records.FloatColumn
	repeats              records.IntColumn
	effective, disagree  records.FloatColumn
	along                records.TextColumn
}

func (j *job) newStageTable() *stageTable {
	t, names := &stageTable{Table: records.NewTable("stages")}, j.stateNames()
	t.from = t.AddLabel("from", names, "state that is left")
	t.to = t.AddLabel("to", names, "state that is flipped to")
	t.along = t.AddText("along", "what progress is measured along")
	t.flux = t.AddFloat("flux", "1/"+j.network.TimeUnit, "rate at which runs that come out of the core meet the first rung")
	t.stage = t.AddInt("stage", "", "number of the stage, from 1")
	t.share = t.AddFloat("share", "1", "how far along its runs begin, from 0 to 1")
	t.success = t.AddFloat("success", "1", "share of its runs that came to the next stage, or, in the last, to the other core")
	t.runs = t.AddInt("runs", "", "runs made in all repeats")
	t.events = t.AddInt("events", "", "reaction events of these runs")
	t.repeats = t.AddInt("repeats", "", "independent repeats of all stages of the pair")
	t.effective = t.AddFloat("effective_flips", "", "independent flips that would tell the rate as well")
	t.disagree = t.AddFloat("disagreement", "1", "variance between the repeats over the one expected of them")
	return t
}

// recordStages writes the table stages, where staged runs were made.
func (j *job) recordStages() error {
	if len(j.report.Staged) == 0 {
		return nil
	}
	t := j.newStageTable()
	w, err := j.sink.folder.Table(t.Table)
	if err != nil {
		return err
	}
	for _, s := range j.report.Staged {
		for k, stage := range s.Stages {
			w.Label(t.from, s.from)
			w.Label(t.to, s.to)
			w.Text(t.along, s.Along)
			w.Float(t.flux, float64(s.Flux))
			w.Int(t.stage, int64(k+1))
			w.Float(t.share, float64(stage.Share))
			w.Float(t.success, float64(stage.Success))
			w.Int(t.runs, stage.Runs)
			w.Int(t.events, stage.Events)
			w.Int(t.repeats, int64(s.Repeats))
			w.Float(t.effective, float64(s.Effective))
			w.Float(t.disagree, float64(s.Disagreement))
			if err := w.Next(); err != nil {
				break // Close gives it again
			}
		}
	}
	return w.Close()
}
