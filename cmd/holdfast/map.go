package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"math"

	"github.com/spf13/pflag"

	"holdfast/analysis/hold"
	"holdfast/analysis/survey"
)

const mapAbout = `Prints the deterministic map: every resting state and saddle, in amounts and
molecules, with its stability, its eigenvalues, the noise that the linear approximation
predicts, and the core that a path must enter to count as having reached it; whether the
list of states is proved complete (tried up to six free amounts); the state that the
design's start belongs to, and each basin's share of the box of amounts.

--knob b=0.2:0.8 turns b over that range: for each stable state, the window in which it
exists, what ends it on either side, how far today's setting is from there, and the
linear noise on the way, which is a guide only while the deviation is small against the
way to the saddle. A knob is a constant, a product of constants (a*b, each scaled
alike), copies, or a conserved total (total, in molecules; total1, total2 where there are
several). Given twice, --knob traces the curve of folds in the two. --out has all points
of it in Arrow tables, --json in one object.

Shares are cut out by the separatrix where two amounts are free; elsewhere they are
sampled, with 200 flows (2000 where one amount is free), and their error says so.

The exit status is 1 where there is one stable state only. With --knob it is 0 then: the
diagram shows where the switch is born, and the map says that it is none today.`

func mapCommand() command {
	return command{name: "map", args: "FILE", summary: "resting states, proved complete; windows, folds, basins, linear noise", about: mapAbout, setup: setupMap}
}

func setupMap(f *pflag.FlagSet) work {
	design := designFlags(f)
	var o survey.Options
	var asJSON bool
	f.Var(knobs{&o.Knobs}, "knob", "turn a constant, a product a*b, copies or a total over a range;\ngive it twice for the fold curve of two")
	f.StringVar(&o.Folder, "out", "", "`folder` to write the Arrow tables and manifest.json to: states,\nseparatrix, branches and folds, or fold_curve")
	f.BoolVar(&asJSON, "json", false, "print one JSON object instead of tables")
	return func(ctx context.Context, t terminal, args []string) error {
		path, err := oneFile("map", args)
		if err != nil {
			return err
		}
		o.Command = canonical("map", path, f)
		return runMap(ctx, t, path, design, o, asJSON)
	}
}

func runMap(ctx context.Context, t terminal, path string, design *designChoice, o survey.Options, asJSON bool) error {
	network, err := design.load(path)
	if err != nil {
		return err
	}
	report, err := survey.Run(ctx, network, o)
	var knob *survey.KnobError
	if errors.As(err, &knob) {
		return misusef("map: --knob: %v", knob)
	}
	if report == nil {
		return err
	}
	write := func(w io.Writer) error { return writeMap(w, report) }
	if asJSON {
		write = func(w io.Writer) error { return writeJSON(w, report) }
	}
	return errors.Join(write(t.out), err)
}

func writeMap(w io.Writer, r *survey.Report) error {
	fmt.Fprintf(w, "%s: copies %s, time in %s\n", r.Design, number(r.Copies), r.TimeUnit)
	parts := []func(io.Writer, *survey.Report) error{writeStates, writeBasins, writeDiagram, writeFoldDiagram}
	for _, write := range parts {
		if err := write(w, r); err != nil {
			return err
		}
	}
	if len(r.Warnings) > 0 {
		fmt.Fprintln(w)
	}
	writeWarnings(w, r.Warnings)
	return nil
}

// writeStates prints the states, where there are any.
func writeStates(w io.Writer, r *survey.Report) error {
	if len(r.States) == 0 {
		return nil
	}
	fmt.Fprintf(w, "\nResting states: %s\n", r.List.Text)
	if err := mapTable(r).write(w); err != nil {
		return err
	}
	fmt.Fprintf(w, "\nEigenvalues, 1/%s\n", r.TimeUnit)
	if err := eigenTable(r).write(w); err != nil {
		return err
	}
	fmt.Fprintf(w, "\nCores, molecules: an ellipsoid of linear noise within these counts, or, where declared, these counts\n")
	if err := coreTable(r).write(w); err != nil {
		return err
	}
	fmt.Fprintf(w, "\nSearch: %s\n", r.Search)
	for i, name := range r.Species {
		fmt.Fprintf(w, "  %s from %s to %s, by %s\n", name, value(r.Box[i].Low), value(r.Box[i].High), r.Box[i].Basis)
	}
	return nil
}

// writeBasins prints the shares of the basins and the curves between them.
func writeBasins(w io.Writer, r *survey.Report) error {
	if r.Start != "" {
		fmt.Fprintf(w, "\nThe design's start leads to: %s\n", r.Start)
	}
	if r.Basins == nil {
		return nil
	}
	fmt.Fprintf(w, "Basins' shares of the box from 0 to those upper ends, %s:\n", r.Basins.Method)
	t := &table{}
	for _, s := range r.Basins.Shares {
		t.add(s.State, percent(s.Share), "± "+digits(float64(s.Error), 1)+" %")
	}
	if r.Basins.Unlabelled > 0 {
		t.add("none", percent(r.Basins.Unlabelled))
	}
	if err := t.write(w); err != nil {
		return err
	}
	for _, s := range r.Separatrices {
		fmt.Fprintf(w, "Separatrix through %s: %d points, from the %s to the %s\n", s.Saddle, len(s.Points), s.Ends[0], s.Ends[1])
	}
	return nil
}

func mapTable(r *survey.Report) *table {
	t := &table{}
	t.add("state", "type", "species", "amount", "molecules", "sd", "CV", "Fano")
	for _, s := range r.States {
		name, kind := s.Name, s.Kind
		if s.Absorbing {
			kind += ", absorbing"
		}
		for i, species := range r.Species {
			t.add(name, kind, species, value(s.Amounts[i]), value(s.Molecules[i]), value(s.Deviation[i]), value(s.CV[i]), value(s.Fano[i]))
			name, kind = "", ""
		}
	}
	return t
}

func value(v hold.Value) string { return number(float64(v)) }

func eigenTable(r *survey.Report) *table {
	t := &table{}
	t.add("state", "correlation time, "+r.TimeUnit, "eigenvalues")
	for _, s := range r.States {
		row := []string{s.Name, value(s.CorrelationTime)}
		for _, e := range s.Eigenvalues {
			row = append(row, eigenvalue(e))
		}
		t.add(row...)
	}
	return t
}

func eigenvalue(e [2]float64) string {
	switch {
	case e[1] == 0:
		return number(e[0])
	case e[1] < 0:
		return number(e[0]) + "−" + number(-e[1]) + "i"
	}
	return number(e[0]) + "+" + number(e[1]) + "i"
}

func coreTable(r *survey.Report) *table {
	t := &table{}
	t.add("state", "species", "from", "to", "a dwell starts at")
	for _, s := range r.States {
		if s.Core == nil {
			continue
		}
		name := s.Name
		for i, species := range r.Species {
			t.add(name, species, fmt.Sprint(s.Core.Low[i]), bound(s.Core.High[i]), fmt.Sprint(s.Core.Start[i]))
			name = ""
		}
	}
	return t
}

// bound writes an upper bound of a core, which may be open.
func bound(high int64) string {
	if high == math.MaxInt64 {
		return "no limit"
	}
	return fmt.Sprint(high)
}
