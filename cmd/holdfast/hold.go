package main

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"strings"

	"github.com/spf13/pflag"

	"holdfast/analysis/hold"
)

const holdAbout = `Tells how long each resting state of the design holds: the mean dwell time of every
ordered pair of states with a 95 % interval, flips per generation, and the chance of
holding for 10, 100 and 1000 generations.

A dwell starts at the state's resting point and ends when the path first enters the
core of another state; recrossings of the ridge between them do not count. Runs go
on until the interval is as narrow as --precision asks or the budget is spent. The
same seed gives the same numbers and the same records, whatever --threads is.`

func holdCommand() command {
	return command{name: "hold", args: "FILE", summary: "how long each state holds, with an interval (the main job)", about: holdAbout, setup: setupHold}
}

func setupHold(f *pflag.FlagSet) work {
	design := designFlags(f)
	var o hold.Options
	var asJSON, quiet bool
	var threads int64
	var memory float64
	f.StringVar(&o.Second, "second", "", "a second `route`, held against the first")
	effortFlags(f, &o, &memory)
	countFlag(f, &threads, "threads", "goroutines (one a processor if not given)")
	f.StringVar(&o.Folder, "out", "", "`folder` to write Arrow tables and manifest.json to")
	f.BoolVar(&asJSON, "json", false, "print one JSON object instead of tables")
	f.BoolVar(&quiet, "quiet", false, "no progress bar")
	return func(ctx context.Context, t terminal, args []string) error {
		path, err := oneFile("hold", args)
		if err != nil {
			return err
		}
		o.Threads, o.Memory = int(threads), bytesOf(memory)
		o.Command = canonical("hold", path, f)
		return runHold(ctx, t, path, design, o, asJSON, quiet)
	}
}

// effortFlags declares how hold times are found, and at what effort.
func effortFlags(f *pflag.FlagSet, o *hold.Options, memory *float64) {
	f.StringVar(&o.Route, "route", hold.Auto, "`route` to the hold times: "+strings.Join(hold.Routes(), ", "))
	positiveFlag(f, memory, "memory", "most GiB that the lattice may take (4 if not given)")
	positiveFlag(f, &o.Precision, "precision", "relative half-width of the 95 % interval to reach (0.1 if not given)")
	countFlag(f, &o.Runs, "runs", "runs of each state, each to its first flip, instead of as many as needed")
	countFlag(f, &o.Events, "events", "most reaction events in all, or steps of Langevin paths\n(6e8 if no limit is given; 6e9 with --route staged)")
	positiveFlag(f, &o.Step, "step", "step of Langevin paths, in the design's unit (0.02 over\nthe fastest rate if not given)")
	f.StringVar(&o.Along, "along", "", "what the progress of staged runs is measured along: `path`\n(of least action, if not given), line or a species")
	positiveFlag(f, &o.Until, "until", "longest time that one run lasts, in the design's unit")
	positiveFlag(f, &o.Interval, "interval", "time for which constants that vary in time are held, in the\ndesign's unit (chosen if not given)")
	f.Uint64Var(&o.Seed, "seed", 1, "`number` that chooses the random numbers")
}

func runHold(ctx context.Context, t terminal, path string, design *designChoice, o hold.Options, asJSON, quiet bool) error {
	network, err := design.load(path)
	if err != nil {
		return err
	}
	bar := newBar(t.err, quiet)
	o.Progress = bar.holdProgress
	if !quiet {
		o.Notice = func(text string) { fmt.Fprintln(t.err, "holdfast:", text) }
	}
	report, err := hold.Run(ctx, network, o)
	bar.close()
	if err != nil {
		return hold.Advise(err, path)
	}
	if asJSON {
		err = writeJSON(t.out, report)
	} else {
		err = writeHold(t.out, report)
	}
	if err != nil {
		return err
	}
	if o.Folder != "" {
		fmt.Fprintln(t.err, "records are in", o.Folder)
	}
	if report.Interrupted {
		return errors.New("stopped before it was done; the numbers above are from what had been seen by then")
	}
	return nil
}

func writeJSON(w io.Writer, report any) error {
	e := json.NewEncoder(w)
	e.SetIndent("", "  ")
	e.SetEscapeHTML(false)
	return e.Encode(report)
}

func writeHold(w io.Writer, r *hold.Report) error {
	fmt.Fprintf(w, "%s: copies %s, time in %s%s, seed %d\n", r.Design, number(r.Copies), r.TimeUnit, generationText(r), r.Seed)
	fmt.Fprintf(w, "route: %s\n\nStates: %s\n", r.Route, r.List)
	if err := stateTable(r).write(w); err != nil {
		return err
	}
	fmt.Fprintf(w, "\nHold times: [95 %% interval], or ± error bound\n")
	if err := dwellTable(r).write(w); err != nil {
		return err
	}
	if t := holdsTable(r); len(t.rows) > 1 {
		fmt.Fprintf(w, "\nChance of holding: [95 %% interval], or [bounds] where they differ in the digits shown\n")
		if err := t.write(w); err != nil {
			return err
		}
	}
	writeVerdicts(w, r)
	writeLattice(w, r)
	writeVariation(w, r)
	writeLangevin(w, r)
	writeStaged(w, r)
	writeAction(w, r)
	fmt.Fprintf(w, "\n%s in %s s on %d threads\n", workText(r.Work), number(r.Work.Seconds), r.Work.Threads)
	writeWarnings(w, r.Warnings)
	_, err := fmt.Fprintln(w, "These are a model's estimates; a strain must be tested ('holdfast help').")
	return err
}

func writeVerdicts(w io.Writer, r *hold.Report) {
	if len(r.Verdicts) == 0 {
		return
	}
	fmt.Fprintf(w, "\nTwo routes\n")
	t := &table{}
	t.add("from", "to", "routes", "ratio", "verdict")
	for _, v := range r.Verdicts {
		t.add(v.From, v.To, v.Routes[0]+" / "+v.Routes[1], value(v.Ratio), v.Text)
	}
	_ = t.write(w) // the caller's next write tells
}

func writeLattice(w io.Writer, r *hold.Report) {
	l := r.Lattice
	if l == nil {
		return
	}
	fmt.Fprintf(w, "\nLattice: %d states in %s, truncation error at most %s of each mean, relaxation time %s %s\n",
		l.States, l.Box, value(l.Truncation), value(l.Relaxation), r.TimeUnit)
	for _, e := range l.Escape {
		fmt.Fprintf(w, "  escape rate of the quasi-stationary law of %s: %s per %s\n", e.State, value(e.Rate), r.TimeUnit)
	}
}

func generationText(r *hold.Report) string { return generationWords(r.Generation, r.TimeUnit) }

func generationWords(g hold.Value, unit string) string {
	if g > 0 {
		return fmt.Sprintf(", generation %s %s", value(g), unit)
	}
	return ""
}

// stateTable has a column for each state, whatever the number of species.
func stateTable(r *hold.Report) *table {
	t := &table{}
	names, kinds := []string{"amount (molecules)"}, []string{""}
	for _, s := range r.States {
		names, kinds = append(names, s.Name), append(kinds, s.Kind)
	}
	t.add(names...)
	t.add(kinds...)
	for _, species := range r.Species {
		row := []string{species}
		for _, s := range r.States {
			row = append(row, fmt.Sprintf("%s (%s)", value(s.Amounts[species]), value(s.Molecules[species])))
		}
		t.add(row...)
	}
	return t
}

func dwellTable(r *hold.Report) *table {
	t := &table{}
	generations := float64(r.Generation) > 0
	head := []string{"from", "to", "mean dwell, " + r.TimeUnit}
	if generations {
		head = append(head, "generations", "flips per generation")
	}
	t.add(append(head, "flips", "route")...)
	for _, d := range r.Dwells {
		row := []string{d.From, d.To, estimate(d, d.Logs, d.Mean, d.Low, d.High)}
		if generations {
			row = append(row, estimate(d, d.LogGenerations, d.Generations, d.GenerationsLow, d.GenerationsHigh), frequency(d))
		}
		t.add(append(row, flips(d), d.Route)...)
	}
	return t
}

func holdsTable(r *hold.Report) *table {
	t := &table{}
	for _, d := range r.Dwells {
		head, row := []string{"from", "to"}, []string{d.From, d.To}
		for _, h := range d.Holds {
			head = append(head, number(h.Generations)+" generations")
			row = append(row, chanceInterval(h))
		}
		if len(d.Holds) == 0 {
			continue
		}
		if len(t.rows) == 0 {
			t.add(head...)
		}
		t.add(row...)
	}
	return t
}

// estimate writes a mean with its limits, or the note that stands for it.
func estimate(d hold.DwellReport, logs *hold.Logs, mean, low, high hold.Value) string {
	switch {
	case logs != nil:
		return powers(logs)
	case d.Never:
		return d.Note
	case d.Flips == 0 && d.Sampled:
		return "above " + number(float64(low))
	}
	return ranged(d, mean, low, high)
}

// frequency writes the flips in a generation.
func frequency(d hold.DwellReport) string {
	if d.LogPerGeneration != nil {
		return powers(d.LogPerGeneration)
	}
	return ranged(d, d.PerGeneration, d.PerGenerationLow, d.PerGenerationHigh)
}

// ranged writes a value with its limits, or, if it is not sampled, with the bound of
// its error.
func ranged(d hold.DwellReport, v, low, high hold.Value) string {
	if d.Sampled || d.Never {
		return interval(v, low, high)
	}
	return fmt.Sprintf("%s ± %s", digits(float64(v), 7), digits(float64(d.Bound*v), 1))
}

// flips writes the flips that were seen, where the route sees any.
func flips(d hold.DwellReport) string {
	if !d.Sampled {
		return "–"
	}
	return value(d.Flips)
}

func interval(v, low, high hold.Value) string {
	return fmt.Sprintf("%s [%s, %s]", number(float64(v)), number(float64(low)), number(float64(high)))
}

func chanceInterval(h hold.HoldChance) string {
	c, low, high := chance(h.Chance, h.Loss[0]), chance(h.Low, h.Loss[1]), chance(h.High, h.Loss[2])
	if low == c && high == c {
		return c // the limits agree in every digit shown
	}
	return fmt.Sprintf("%s [%s, %s]", c, low, high)
}
