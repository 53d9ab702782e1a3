package main

import (
	"context"
	"errors"
	"fmt"

	"github.com/spf13/pflag"

	"holdfast/analysis/trace"
)

const traceAbout = `Makes sample paths: exact runs from the design's start (or from a state), seen at
evenly spaced times. A sketch of the first path's readout is printed; --out writes
every sample of every path to the Arrow table 'paths', in constant memory.`

func traceCommand() command {
	return command{name: "trace", args: "FILE", summary: "sample paths, sketched here or written to Arrow", about: traceAbout, setup: setupTrace}
}

func setupTrace(f *pflag.FlagSet) work {
	design := designFlags(f)
	var o trace.Options
	var threads int64
	var folder string
	countFlag(f, &o.Runs, "runs", "paths (1 if not given)")
	positiveFlag(f, &o.Until, "until", "how long each lasts, in the design's unit (20 generations if not given)")
	positiveFlag(f, &o.Every, "every", "time between samples (a thousandth of --until if not given)")
	f.StringVar(&o.From, "from", "", "`state` to start in, instead of the design's start")
	f.Uint64Var(&o.Seed, "seed", 1, "`number` that chooses the random numbers")
	countFlag(f, &threads, "threads", "goroutines (one a processor if not given)")
	f.StringVar(&folder, "out", "", "`folder` to write the Arrow table and manifest.json to")
	return func(ctx context.Context, t terminal, args []string) error {
		path, err := oneFile("trace", args)
		if err != nil {
			return err
		}
		o.Threads = int(threads)
		return runTrace(ctx, t, path, design, o, trace.Output{Folder: folder, Command: canonical("trace", path, f)})
	}
}

func runTrace(ctx context.Context, t terminal, path string, design *designChoice, o trace.Options, out trace.Output) error {
	network, err := design.load(path)
	if err != nil {
		return err
	}
	s, err := trace.Run(ctx, network, o, out)
	if err != nil {
		return err
	}
	if err := s.Sketch.Write(t.out, network.Species[network.Readout].Name, network.TimeUnit); err != nil {
		return err
	}
	fmt.Fprintf(t.out, "\n%d path(s) of %s %s, a sample every %s %s, seed %d; the first is sketched\n",
		s.Paths.Runs, number(s.Paths.Until), network.TimeUnit, number(s.Paths.Every), network.TimeUnit, o.Seed)
	writeWarnings(t.out, s.Warnings)
	if out.Folder != "" {
		fmt.Fprintln(t.err, "records are in", out.Folder)
	}
	if s.Interrupted {
		return errors.New("stopped before it was done; what is here was made by then")
	}
	return nil
}
