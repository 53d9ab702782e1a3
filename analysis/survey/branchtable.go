package survey

import (
	"math"

	"holdfast/analysis/records"
)

// branchTable is the table branches: a row a point.
type branchTable struct {
	*records.Table
	branch, point, unstable                      records.IntColumn
	knob, slow, correlation, eigenReal, eigenImg records.FloatColumn
	mark                                         records.LabelColumn
	stable                                       records.FlagColumn
	amounts, deviations                          []records.FloatColumn
	marks                                        []string
}

func (j *job) newBranchTable() *branchTable {
	rate := "1/" + j.report.TimeUnit
	t := &branchTable{Table: records.NewTable("branches"), marks: kindNames()}
	t.branch = t.AddInt("branch", "", "number of the branch from 0")
	t.point = t.AddInt("point", "", "place on the branch from 0, end to end")
	t.mark = t.AddLabel("mark", t.marks, "what the point is, where it is special or an end")
	t.Optional()
	t.knob = t.AddFloat("knob", "", "value of "+j.report.Diagram.Knob)
	t.amounts = j.amountColumns(t.Table)
	t.stable = t.AddFlag("stable", "the state attracts from every side")
	t.unstable = t.AddInt("unstable_directions", "", "directions in which it repels")
	t.eigenReal = t.AddFloat("eigenvalue_real", rate, "real part of the eigenvalue with the largest one")
	t.Optional()
	t.eigenImg = t.AddFloat("eigenvalue_imaginary", rate, "its imaginary part")
	t.Optional()
	t.slow = t.AddFloat("slow_rate", rate, "slowest rate of return")
	t.Optional()
	t.correlation = t.AddFloat("correlation_time", j.report.TimeUnit, "of the fluctuations about a stable state; null at a fold")
	t.Optional()
	for _, s := range j.report.Species {
		t.deviations = append(t.deviations, t.AddFloat("sd_"+s, "molecules", "standard deviation of "+s+" by linear noise; null unless stable"))
		t.Optional()
	}
	return t
}

// writeBranches writes the branches of a one-knob diagram.
func (j *job) writeBranches(folder *records.Folder) error {
	if j.report.Diagram == nil {
		return nil
	}
	t := j.newBranchTable()
	w, err := folder.Table(t.Table)
	if err != nil {
		return err
	}
	for k, b := range j.report.Diagram.Branches {
		for i := range b.Points {
			w.Int(t.branch, int64(k))
			w.Int(t.point, int64(i))
			t.set(w, &b.Points[i])
			if err := w.Next(); err != nil {
				return err
			}
		}
	}
	return w.Close()
}

func (t *branchTable) set(w *records.Writer, p *Point) {
	leading := [2]float64{math.NaN(), math.NaN()}
	if len(p.Eigenvalues) > 0 {
		leading = p.Eigenvalues[0]
	}
	w.Label(t.mark, indexOf(t.marks, p.Mark))
	w.Float(t.knob, float64(p.Knob))
	setAll(w, t.amounts, p.Amounts)
	w.Flag(t.stable, p.Stable)
	w.Int(t.unstable, int64(p.Unstable))
	w.Float(t.eigenReal, leading[0])
	w.Float(t.eigenImg, leading[1])
	w.Float(t.slow, finite(p.SlowRate))
	w.Float(t.correlation, finite(p.CorrelationTime))
	setAll(w, t.deviations, p.Deviation)
}
