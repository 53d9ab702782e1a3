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

const mapAbout = `Prints the deterministic map: every resting state and saddle found, in amounts and
molecules, with its stability, its eigenvalues, the noise that the linear approximation
predicts, the core that a path must enter to count as having reached it, and the state
that the design's start belongs to.`

func mapCommand() command {
	return command{name: "map", args: "FILE", summary: "resting states, saddles, stability, linear noise, basins", about: mapAbout, setup: setupMap}
}

func setupMap(f *pflag.FlagSet) work {
	design := designFlags(f)
	var folder string
	var asJSON bool
	f.StringVar(&folder, "out", "", "`folder` to write the Arrow table of states and manifest.json to")
	f.BoolVar(&asJSON, "json", false, "print one JSON object instead of tables")
	return func(ctx context.Context, t terminal, args []string) error {
		path, err := oneFile("map", args)
		if err != nil {
			return err
		}
		o := survey.Options{Folder: folder, Command: canonical("map", path, f)}
		return runMap(ctx, t, path, design, o, asJSON)
	}
}

func runMap(ctx context.Context, t terminal, path string, design *designChoice, o survey.Options, asJSON bool) error {
	network, err := design.load(path)
	if err != nil {
		return err
	}
	report, err := survey.Run(ctx, network, o)
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
	fmt.Fprintf(w, "%s: copies %s, time in %s\n\nResting states\n", r.Design, number(r.Copies), r.TimeUnit)
	if err := mapTable(r).write(w); err != nil {
		return err
	}
	fmt.Fprintf(w, "\nEigenvalues, 1/%s\n", r.TimeUnit)
	if err := eigenTable(r).write(w); err != nil {
		return err
	}
	fmt.Fprintf(w, "\nCores, molecules\n")
	if err := coreTable(r).write(w); err != nil {
		return err
	}
	fmt.Fprintf(w, "\nThe design's start leads to: %s\nSearch: %s\n", r.Start, r.Search)
	for i, name := range r.Species {
		fmt.Fprintf(w, "  %s from %s to %s, by %s\n", name, number(float64(r.Box[i].Low)), number(float64(r.Box[i].High)), r.Box[i].Basis)
	}
	writeWarnings(w, r.Warnings)
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
