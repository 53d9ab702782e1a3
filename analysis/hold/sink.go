package hold

import (
	"fmt"
	"math"
	"slices"

	"holdfast/analysis/lattice"
	"holdfast/analysis/records"
	"holdfast/deterministic"
	"holdfast/internal/version"
	"holdfast/model"
	"holdfast/sde"
	"holdfast/ssa"
)

// Provenance says what the records of a job on network were made from.
func Provenance(network *model.Network, seed uint64, command string) records.Provenance {
	return records.Provenance{
		Title: network.Title, Design: network.Text, Seed: seed, Version: version.Number, Command: command,
		TimeUnit: network.TimeUnit, Generation: network.Generation, Copies: network.Copies,
	}
}

// StateRecords are the rows of the table states for a survey.
func StateRecords(survey *deterministic.Map) []records.State {
	states := make([]records.State, len(survey.States))
	for i := range survey.States {
		s := &survey.States[i]
		states[i] = records.State{
			Name: s.Name, Type: s.Kind.String(), Absorbing: s.Absorbing,
			Amounts: s.Amounts, Molecules: s.Molecules, Deviation: deviations(s), Eigenvalue: leading(s),
		}
	}
	return states
}

// WriteStates writes the table states of a survey.
func WriteStates(folder *records.Folder, survey *deterministic.Map) error {
	return records.WriteStates(folder, speciesNames(survey.Network), StateRecords(survey))
}

// A sink writes the records of a job. A nil sink takes everything and keeps nothing.
type sink struct {
	folder  *records.Folder
	dwells  *records.Dwells
	endings map[string]int64
}

// endings lists the ways in which a recorded run can end, by any engine.
func endings() []string {
	var names []string
	for e := ssa.Flipped; e <= ssa.BadRate; e++ {
		names = append(names, e.String())
	}
	for e := sde.Flipped; e <= sde.NotFinite; e++ {
		if !slices.Contains(names, e.String()) {
			names = append(names, e.String())
		}
	}
	return names
}

// sampled lists the routes whose dwells are recorded.
func sampled() []string { return []string{Runs, Langevin} }

func (j *job) openSink() error {
	if j.options.Folder == "" {
		return nil
	}
	folder, err := records.Create(j.options.Folder, Provenance(j.network, j.options.Seed, j.options.Command))
	if err != nil {
		return err
	}
	j.sink = &sink{folder: folder, endings: map[string]int64{}}
	if err := WriteStates(folder, j.survey); err != nil {
		return err
	}
	j.sink.dwells, err = records.NewDwells(folder, j.stateNames(), sampled(), endings())
	return err
}

// record keeps one dwell.
func (j *job) record(r *stateRuns, p *path, to int) error {
	if j.sink == nil || r.silent {
		return nil
	}
	j.sink.endings[p.ending]++
	return j.sink.dwells.Append(records.Dwell{
		From: r.state, To: to, Route: slices.Index(sampled(), r.route), Ending: slices.Index(endings(), p.ending),
		Replicate: p.replicate, Time: p.time, Events: p.work,
	})
}

// closeSink writes the rates and puts everything in place.
func (j *job) closeSink() error {
	if j.sink == nil {
		return nil
	}
	if err := records.WriteRates(j.sink.folder, j.stateNames(), j.rates); err != nil {
		return err
	}
	if err := j.recordStages(); err != nil {
		return err
	}
	o := records.Outcome{
		Endings: j.sink.endings, Events: j.report.Work.Events, Steps: j.report.Work.Steps, Warnings: j.report.Warnings, CutShort: j.report.Interrupted,
	}
	if o.CutShort {
		o.Reason = "interrupted"
	}
	return j.sink.folder.Finish(o)
}

// abandon drops what has not been put in place.
func (s *sink) abandon() {
	if s != nil {
		s.folder.Abandon()
	}
}

func (j *job) stateNames() []string {
	var names []string
	for _, s := range j.survey.Stable() {
		names = append(names, s.Name)
	}
	return names
}

func deviations(s *deterministic.State) []float64 {
	if s.Covariance == nil {
		return nil
	}
	out := make([]float64, len(s.Molecules))
	for i := range out {
		out[i] = s.SD(i)
	}
	return out
}

func leading(s *deterministic.State) complex128 {
	if len(s.Eigenvalues) == 0 {
		return 0
	}
	return s.Eigenvalues[0]
}

// recordLattice writes the tables committor and weights: a row for each lattice
// state, with the counts of the species and a column for each resting state.
func (j *job) recordLattice(s *lattice.Solution) error {
	if j.sink == nil {
		return nil
	}
	committor := j.latticeTable("committor", s.Names, "1", "probability that the core of %s is the first to be entered; paths that leave the box are left out, so values near its edge are rougher than the mean dwells")
	err := committor.write(j.sink.folder, s, func(a, i int) float64 { return s.Committor[a][i] })
	if err != nil {
		return err
	}
	weights := j.latticeTable("weights", append([]string{stationary}, s.Names...), "1", "probability under the law of %s: stationary, or quasi-stationary of the state")
	return weights.write(j.sink.folder, s, func(a, i int) float64 {
		switch {
		case a > 0 && s.Quasi[a-1] != nil:
			return s.Quasi[a-1][i]
		case a == 0 && s.Stationary != nil:
			return s.Stationary[i]
		}
		return math.NaN()
	})
}

// stationary names the column of the stationary law beside those of the states.
const stationary = "stationary"

// A latticeTable is a table of numbers on the lattice.
type latticeTable struct {
	*records.Table
	counts []records.IntColumn
	values []records.FloatColumn
}

func (j *job) latticeTable(name string, columns []string, unit, note string) *latticeTable {
	t := &latticeTable{Table: records.NewTable(name)}
	for _, s := range speciesNames(j.network) {
		t.counts = append(t.counts, t.AddInt("count_"+s, "molecules", "count of "+s))
	}
	for _, c := range columns {
		t.values = append(t.values, t.AddFloat("of_"+c, unit, fmt.Sprintf(note, c)))
		t.Optional()
	}
	return t
}

func (t *latticeTable) write(folder *records.Folder, s *lattice.Solution, value func(column, state int) float64) error {
	w, err := folder.Table(t.Table)
	if err != nil {
		return err
	}
	for i := range s.States {
		for k, c := range t.counts {
			w.Int(c, int64(s.Point(i)[k]))
		}
		for a, c := range t.values {
			w.Float(c, value(a, i))
		}
		if err := w.Next(); err != nil {
			return err
		}
	}
	return w.Close()
}
