package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"math"
	"strings"

	"github.com/spf13/pflag"

	"holdfast/analysis/hold"
	"holdfast/analysis/levers"
)

const leversAbout = `Tells which constant to change first: for each constant, and for copies, the per cent
change of each state's hold time for one per cent more of it, largest first, with its
error; and how far it can be turned before a state is lost in a fold.

+ is longer, − is shorter: −12 at a constant says that 1 % more of it makes the hold time
12 % shorter, and 1 % less of it 12 % longer. It is the slope of the hold time's logarithm
in that of the constant, so it is good for small changes; for larger ones set them with
--with and ask again.

The slopes come from the master equation on its lattice, for all constants at once. Beside
them stand those by action: the part that grows with copies, from the path of least
action, and the prefactor's part from lattices at fewer copies. They serve by themselves
where the lattice takes too long. Where neither serves, two hold jobs are made for each
constant, one with it turned up and one down (--route differences; --hold-route, --precision
and --events are those of each job). All but those by action are taken between the cores of
today, held in molecules.`

func leversCommand() command {
	return command{name: "levers", args: "FILE", summary: "which constant to change first: per cent of hold time for each per cent", about: leversAbout, setup: setupLevers}
}

func setupLevers(f *pflag.FlagSet) work {
	design := designFlags(f)
	var o levers.Options
	var asJSON, quiet bool
	var threads int64
	var memory, step float64
	f.StringVar(&o.Route, "route", levers.Auto, "`route` to the slopes: "+strings.Join(levers.Routes(), ", "))
	f.StringVar(&o.Hold.Route, "hold-route", hold.Auto, "`route` of the hold jobs of differences")
	positiveFlag(f, &step, "step", "per cent by which differences turn a constant up and down\n(10 if not given; less where a fold is near)")
	positiveFlag(f, &memory, "memory", "most GiB that the lattice may take (4 if not given)")
	positiveFlag(f, &o.Hold.Precision, "precision", "relative half-width of each hold time's 95 % interval, for\ndifferences (0.1 if not given)")
	countFlag(f, &o.Hold.Events, "events", "most reaction events of each hold job, for differences\n(6e8 if not given)")
	f.Uint64Var(&o.Hold.Seed, "seed", 1, "`number` that chooses the random numbers")
	countFlag(f, &threads, "threads", "goroutines (one a processor if not given)")
	f.StringVar(&o.Hold.Folder, "out", "", "`folder` to write the Arrow tables levers and states and\nmanifest.json to")
	f.BoolVar(&asJSON, "json", false, "print one JSON object instead of tables")
	f.BoolVar(&quiet, "quiet", false, "no progress bar")
	return func(ctx context.Context, t terminal, args []string) error {
		path, err := oneFile("levers", args)
		if err != nil {
			return err
		}
		o.Step = logOfPercent(step)
		o.Hold.Threads, o.Hold.Memory = int(threads), bytesOf(memory)
		o.Hold.Command = canonical("levers", path, f)
		return runLevers(ctx, t, path, design, o, asJSON, quiet)
	}
}

// logOfPercent gives the logarithm of the factor that so many per cent more is.
func logOfPercent(percent float64) float64 { return math.Log1p(percent / 100) }

func runLevers(ctx context.Context, t terminal, path string, design *designChoice, o levers.Options, asJSON, quiet bool) error {
	network, err := design.load(path)
	if err != nil {
		return err
	}
	bar := newBar(t.err, quiet)
	o.Hold.Progress = bar.holdProgress
	report, err := levers.Run(ctx, network, o)
	bar.close()
	if errors.Is(err, context.Canceled) {
		return errors.New("stopped before any slope was known")
	}
	if err != nil {
		return hold.Advise(err, path)
	}
	if asJSON {
		err = writeJSON(t.out, report)
	} else {
		err = writeLevers(t.out, report)
	}
	if err != nil {
		return err
	}
	if o.Hold.Folder != "" {
		fmt.Fprintln(t.err, "records are in", o.Hold.Folder)
	}
	if report.Interrupted {
		return errors.New("stopped before it was done; what is known by then stands above")
	}
	return nil
}

func writeLevers(w io.Writer, r *levers.Report) error {
	fmt.Fprintf(w, "%s: copies %s, time in %s\nroute: %s\n", r.Design, number(r.Copies), r.TimeUnit, r.Route)
	if r.Action != "" {
		fmt.Fprintf(w, "by action: %s\n", r.Action)
	}
	fmt.Fprintf(w, "\nPer cent change of each hold time for +1 %% of a constant: + longer, − shorter. Last, how far it\ncan be turned, down and up, before a state is lost.\n")
	for i := range r.Blocks {
		if err := writeBlock(w, r, &r.Blocks[i]); err != nil {
			return err
		}
	}
	if r.Together != "" {
		fmt.Fprintf(w, "\n%s\n", r.Together)
	}
	fmt.Fprintf(w, "\nfound in %s s\n", number(r.Seconds))
	writeWarnings(w, r.Warnings)
	_, err := fmt.Fprintln(w, "These are a model's estimates; a strain must be tested ('holdfast help').")
	return err
}

func writeBlock(w io.Writer, r *levers.Report, b *levers.Block) error {
	if b.Note != "" {
		_, err := fmt.Fprintf(w, "\n%s: %s\n", b.From, b.Note)
		return err
	}
	fmt.Fprintf(w, "\n%s → %s: %s\n", b.From, b.To, meanText(r, b))
	routes := b.Routes()
	head := []string{"constant", "today"}
	for _, route := range routes {
		head = append(head, "% for +1 %, by "+route)
	}
	t := &table{}
	if len(routes) > 1 {
		head = append(head, "")
	}
	t.add(append(head, "lost below", "lost above", "")...)
	for i := range b.Levers {
		l := &b.Levers[i]
		row := []string{l.Name, value(l.Value)}
		for _, route := range routes {
			row = append(row, slopeText(l.By(route)))
		}
		if len(routes) > 1 {
			row = append(row, l.Agreement)
		}
		t.add(append(row, lossText(l.Below), lossText(l.Above), l.Note)...)
	}
	if err := t.write(w); err != nil || b.First == "" {
		return err
	}
	_, err := fmt.Fprintf(w, "  %s\n", b.First)
	return err
}

// meanText writes today's hold time.
func meanText(r *levers.Report, b *levers.Block) string {
	text := value(b.Mean)
	switch {
	case text == "–":
		return "'holdfast hold' tells how long"
	case (b.High-b.Low)/b.Mean >= 1e-3:
		text += fmt.Sprintf(" [%s, %s]", value(b.Low), value(b.High))
	}
	return fmt.Sprintf("holds %s %s today (%s)", text, r.TimeUnit, b.HoldRoute)
}

// slopeText writes a slope with its sign and its error; ≈ where no error is known, as of
// the leading order alone.
func slopeText(s levers.Slope) string {
	v, half := float64(s.Value), float64(s.High-s.Low)/2
	switch {
	case math.IsNaN(v):
		return "–"
	case v == 0 && half == 0:
		return "0"
	case math.IsNaN(half):
		return "≈ " + withSign(v, 3)
	case half < 0.02*math.Abs(v):
		return withSign(v, 4) + " ± " + digits(half, 1)
	}
	return fmt.Sprintf("%s [%s, %s]", withSign(v, 3), withSign(float64(s.Low), 3), withSign(float64(s.High), 3))
}

// lossText says how far away a state is lost, and which.
func lossText(l *levers.Loss) string {
	if l == nil {
		return "–"
	}
	return fmt.Sprintf("%s %% (%s, %s)", withSign(float64(l.Percent), 3), l.State, l.Kind)
}
