package survey

import (
	"math"

	"holdfast/analysis/hold"
	"holdfast/analysis/records"
	"holdfast/deterministic/branch"
)

// write puts the tables of the report into the folder.
func (j *job) write() error {
	if j.options.Folder == "" {
		return nil
	}
	folder, err := records.Create(j.options.Folder, hold.Provenance(j.network, 0, j.options.Command))
	if err != nil {
		return err
	}
	defer folder.Abandon()
	for _, write := range []func(*records.Folder) error{j.writeStates, j.writeSeparatrix, j.writeBranches, j.writeFolds, j.writeFoldCurve} {
		if err := write(folder); err != nil {
			return err
		}
	}
	return folder.Finish(records.Outcome{Warnings: j.report.Warnings})
}

func (j *job) writeStates(folder *records.Folder) error {
	if j.survey == nil {
		return nil
	}
	return hold.WriteStates(folder, j.survey)
}

// amountColumns adds a column of amounts for each species.
func (j *job) amountColumns(t *records.Table) []records.FloatColumn {
	var out []records.FloatColumn
	for _, s := range j.report.Species {
		out = append(out, t.AddFloat("amount_"+s, "amount", "amount of "+s))
	}
	return out
}

func setAll(w *records.Writer, columns []records.FloatColumn, v []hold.Value) {
	for i, c := range columns {
		w.Float(c, finite(v[i]))
	}
}

// finite gives v, and NaN, which is null in a table, for an infinity.
func finite(v hold.Value) float64 {
	if math.IsInf(float64(v), 0) {
		return math.NaN()
	}
	return float64(v)
}

// writeSeparatrix writes the curves between basins, a row a point.
func (j *job) writeSeparatrix(folder *records.Folder) error {
	curves := j.report.Separatrices
	if len(curves) == 0 {
		return nil
	}
	var names []string
	for _, c := range curves {
		names = append(names, c.Saddle)
	}
	t := records.NewTable("separatrix")
	saddle := t.AddLabel("saddle", names, "saddle whose stable manifold the curve is")
	point := t.AddInt("point", "", "place on the curve from 0, end to end")
	through := t.AddFlag("at_saddle", "the point is the saddle itself")
	amounts := j.amountColumns(t)
	w, err := folder.Table(t)
	if err != nil {
		return err
	}
	for k, c := range curves {
		for i, p := range c.Points {
			w.Label(saddle, k)
			w.Int(point, int64(i))
			w.Flag(through, i == c.At)
			setAll(w, amounts, p)
			if err := w.Next(); err != nil {
				return err
			}
		}
	}
	return w.Close()
}

// writeFolds writes the special points, a row each.
func (j *job) writeFolds(folder *records.Folder) error {
	d := j.report.Diagram
	if d == nil {
		return nil
	}
	t := records.NewTable("folds")
	kinds := kindNames()
	kind := t.AddLabel("type", kinds, "what happens there")
	knob := t.AddFloat("knob", "", "value of "+d.Knob)
	amounts := j.amountColumns(t)
	states := t.AddText("states", "side of a fold on which its two states exist: above or below it in the knob; empty for other points")
	rate := t.AddFloat("rate_coefficient", "1/"+j.report.TimeUnit, "c of the slow rate c sqrt|knob - fold| near a fold")
	t.Optional()
	frequency := t.AddFloat("frequency", "rad/"+j.report.TimeUnit, "of the oscillation at a Hopf point")
	t.Optional()
	text := t.AddText("text", "more of a kink: the reaction and its law")
	w, err := folder.Table(t)
	if err != nil {
		return err
	}
	for _, s := range d.Specials {
		w.Label(kind, indexOf(kinds, s.Kind))
		w.Float(knob, float64(s.Knob))
		setAll(w, amounts, s.Amounts)
		w.Text(states, s.States)
		w.Float(rate, finite(s.RateCoefficient))
		w.Float(frequency, finite(s.Frequency))
		w.Text(text, s.Text)
		if err := w.Next(); err != nil {
			return err
		}
	}
	return w.Close()
}

// kindNames lists the kinds of marks.
func kindNames() []string {
	var out []string
	for k := branch.Fold; k <= branch.Lost; k++ {
		out = append(out, k.String())
	}
	return out
}

func indexOf(list []string, name string) int {
	for i, s := range list {
		if s == name {
			return i
		}
	}
	return -1
}

// writeFoldCurve writes the fold curves of two knobs, a row a point.
func (j *job) writeFoldCurve(folder *records.Folder) error {
	d := j.report.FoldDiagram
	if d == nil {
		return nil
	}
	t := records.NewTable("fold_curve")
	curve := t.AddInt("curve", "", "number of the curve from 0")
	point := t.AddInt("point", "", "place on the curve from 0, end to end")
	first := t.AddFloat("first_knob", "", "value of "+d.First.Name)
	second := t.AddFloat("second_knob", "", "value of "+d.Second.Name)
	cusp := t.AddFlag("cusp", "two folds meet here")
	amounts := j.amountColumns(t)
	w, err := folder.Table(t)
	if err != nil {
		return err
	}
	for k, c := range d.Curves {
		for i, p := range c.Points {
			w.Int(curve, int64(k))
			w.Int(point, int64(i))
			w.Float(first, float64(p.First))
			w.Float(second, float64(p.Second))
			w.Flag(cusp, p.Cusp)
			setAll(w, amounts, p.Amounts)
			if err := w.Next(); err != nil {
				return err
			}
		}
	}
	return w.Close()
}
