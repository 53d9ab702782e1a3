package sizing

import (
	"math"

	"holdfast/analysis/hold"
	"holdfast/analysis/records"
)

// write puts the table of evaluations into the folder.
func (s *searcher) write() error {
	if s.options.Folder == "" {
		return nil
	}
	folder, err := records.Create(s.options.Folder, hold.Provenance(s.network, s.options.Hold.Seed, s.options.Command))
	if err != nil {
		return err
	}
	defer folder.Abandon()
	if err := s.writeEvaluations(folder); err != nil {
		return err
	}
	return folder.Finish(records.Outcome{Warnings: s.report.Warnings})
}

// A sizingTable is the layout of the table sizing: a row for each evaluation and check.
type sizingTable struct {
	*records.Table
	knob                          records.TextColumn
	setting                       records.FloatColumn
	spec, state, route, unit      records.TextColumn
	mean, low, high               records.FloatColumn
	margin, marginLow, marginHigh records.FloatColumn
	verdict                       records.LabelColumn
	vanished, sampled             records.FlagColumn
	note                          records.TextColumn
}

func newSizingTable() *sizingTable {
	t := &sizingTable{Table: records.NewTable("sizing")}
	number := func(name, unit, note string) records.FloatColumn {
		c := t.AddFloat(name, unit, note)
		t.Optional()
		return c
	}
	t.knob = t.AddText("knob", "what was turned")
	t.setting = t.AddFloat("setting", "", "value of the knob")
	t.spec = t.AddText("spec", "specification")
	t.state = t.AddText("state", "state that it was held against")
	t.route = t.AddText("route", "how the numbers were found")
	t.unit = t.AddText("unit", "of found and its limits: generations, the design's unit of time, or chance")
	t.mean = number("found", "", "mean dwell, or chance of holding, as the specification asks, in the unit of the column unit; null where no flip was seen")
	t.low = number("found_low", "", "its lower limit")
	t.high = number("found_high", "", "its upper limit; infinite if there is none")
	t.margin = number("margin", "1", "ln(found/asked), of a chance by the memoryless mean that has it; infinite where the state is never left or not there")
	t.marginLow = number("margin_low", "1", "its lower limit")
	t.marginHigh = number("margin_high", "1", "its upper limit")
	t.sampled = t.AddFlag("sampled", "the limits are a 95 % interval")
	t.verdict = t.AddLabel("verdict", []string{string(Meets), string(Fails), string(Open)}, "whether the specification is met")
	t.vanished = t.AddFlag("vanished", "there is no such state at this setting")
	t.note = t.AddText("note", "why there is none, or why the setting could not be evaluated")
	return t
}

func (s *searcher) writeEvaluations(folder *records.Folder) error {
	t := newSizingTable()
	w, err := folder.Table(t.Table)
	if err != nil {
		return err
	}
	for i := range s.report.Evaluations {
		for k := range s.report.Evaluations[i].Checks {
			if err := t.append(w, s.report, &s.report.Evaluations[i], k); err != nil {
				return err
			}
		}
	}
	return w.Close()
}

func (t *sizingTable) append(w *records.Writer, r *Report, e *Evaluation, check int) error {
	c := &e.Checks[check]
	w.Text(t.knob, r.Knob)
	w.Float(t.setting, e.Setting)
	w.Text(t.spec, r.Specs[c.Spec])
	w.Text(t.state, c.State)
	w.Text(t.route, c.Route)
	w.Text(t.unit, r.Asked[c.Spec].FoundUnit())
	w.Float(t.mean, orNull(float64(c.Found)))
	w.Float(t.low, orNull(float64(c.Low)))
	w.Float(t.high, float64(c.High))
	w.Float(t.margin, c.margin[0])
	w.Float(t.marginLow, c.margin[1])
	w.Float(t.marginHigh, c.margin[2])
	w.Flag(t.sampled, c.Sampled)
	w.Label(t.verdict, map[Verdict]int{Meets: 0, Fails: 1, Open: 2}[c.Verdict])
	w.Flag(t.vanished, e.Vanished != "")
	w.Text(t.note, e.Vanished+e.Failure)
	return w.Next()
}

// orNull gives NaN, which is null in a table, for an infinity.
func orNull(v float64) float64 {
	if math.IsInf(v, 0) {
		return math.NaN()
	}
	return v
}
