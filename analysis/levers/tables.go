package levers

import (
	"math"

	"holdfast/analysis/hold"
	"holdfast/analysis/records"
)

// write puts the tables of the report into the folder.
func (j *job) write() error {
	o := &j.options.Hold
	if o.Folder == "" {
		return nil
	}
	folder, err := records.Create(o.Folder, hold.Provenance(j.network, o.Seed, o.Command))
	if err != nil {
		return err
	}
	defer folder.Abandon()
	if err := hold.WriteStates(folder, j.survey); err != nil {
		return err
	}
	if err := j.writeLevers(folder); err != nil {
		return err
	}
	outcome := records.Outcome{Warnings: j.report.Warnings, CutShort: j.report.Interrupted}
	if outcome.CutShort {
		outcome.Reason = "interrupted"
	}
	return folder.Finish(outcome)
}

// leverTable is the table levers: a row for each hold time, constant and route.
type leverTable struct {
	*records.Table
	from, to, constant, route, note         records.TextColumn
	perUnit                                 records.FlagColumn
	value, slope, low, high                 records.FloatColumn
	belowAt, belowPercent, aboveAt, aboveBy records.FloatColumn
	belowKind, aboveKind                    records.TextColumn
	belowState, aboveState                  records.TextColumn
}

func newLeverTable() *leverTable {
	t := &leverTable{Table: records.NewTable("levers")}
	optional := func(name, unit, note string) records.FloatColumn {
		c := t.AddFloat(name, unit, note)
		t.Optional()
		return c
	}
	t.from = t.AddText("from", "state that is held")
	t.to = t.AddText("to", "state that is entered; any: whichever it is; absorbed: an absorbing state that is none of the states")
	t.constant = t.AddText("constant", "constant that is turned, or copies")
	t.value = t.AddFloat("value", "", "its value today")
	t.route = t.AddText("route", "how the slope was found")
	t.slope = optional("slope", "1", "d ln(hold time)/d ln(constant): per cent change of the hold time for one per cent more of the constant")
	t.low = optional("low", "1", "lower end of its error bound or 95 % interval")
	t.high = optional("high", "1", "upper end")
	t.perUnit = t.AddFlag("per_unit", "the value is 0, and the slope d ln(hold time)/d constant")
	t.belowAt = optional("loss_below", "", "largest value below today's at which a stable state is lost; null where there is none down to a tenth")
	t.belowPercent = optional("loss_below_percent", "percent", "the way there from today's value, negative")
	t.belowKind = t.AddText("loss_below_type", "what happens there: fold, pitchfork, …")
	t.belowState = t.AddText("loss_below_state", "state that is lost there")
	t.aboveAt = optional("loss_above", "", "smallest value above today's at which a stable state is lost; null where there is none up to ten times")
	t.aboveBy = optional("loss_above_percent", "percent", "the way there from today's value")
	t.aboveKind = t.AddText("loss_above_type", "what happens there")
	t.aboveState = t.AddText("loss_above_state", "state that is lost there")
	t.note = t.AddText("note", "what the numbers cannot say")
	return t
}

func (j *job) writeLevers(folder *records.Folder) error {
	t := newLeverTable()
	w, err := folder.Table(t.Table)
	if err != nil {
		return err
	}
	for i := range j.report.Blocks {
		b := &j.report.Blocks[i]
		for k := range b.Levers {
			for _, s := range b.Levers[k].Slopes {
				t.set(w, b, &b.Levers[k], s)
				if err := w.Next(); err != nil {
					return err
				}
			}
		}
	}
	return w.Close()
}

func (t *leverTable) set(w *records.Writer, b *Block, l *Lever, s Slope) {
	w.Text(t.from, b.From)
	w.Text(t.to, b.To)
	w.Text(t.constant, l.Name)
	w.Float(t.value, float64(l.Value))
	w.Text(t.route, s.Route)
	w.Float(t.slope, finite(s.Value))
	w.Float(t.low, finite(s.Low))
	w.Float(t.high, finite(s.High))
	w.Flag(t.perUnit, l.PerUnit)
	setLoss(w, l.Below, t.belowAt, t.belowPercent, t.belowKind, t.belowState)
	setLoss(w, l.Above, t.aboveAt, t.aboveBy, t.aboveKind, t.aboveState)
	w.Text(t.note, l.Note)
}

func setLoss(w *records.Writer, l *Loss, at, percent records.FloatColumn, kind, state records.TextColumn) {
	if l == nil {
		nan := hold.Value(math.NaN())
		l = &Loss{At: nan, Percent: nan}
	}
	w.Float(at, float64(l.At))
	w.Float(percent, float64(l.Percent))
	w.Text(kind, l.Kind)
	w.Text(state, l.State)
}

// finite gives v, and NaN, which is null in a table, for an infinity.
func finite(v hold.Value) float64 {
	if math.IsInf(float64(v), 0) {
		return math.NaN()
	}
	return float64(v)
}
