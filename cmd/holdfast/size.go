package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"strconv"

	"github.com/spf13/pflag"

	"holdfast/analysis/hold"
	"holdfast/analysis/sizing"
	"holdfast/model"
)

// A sizeChoice is what the command line asks of a search for a size.
type sizeChoice struct {
	specs []string
	knob  sizing.Knob
}

func sizeFlags(f *pflag.FlagSet) *sizeChoice {
	c := &sizeChoice{}
	f.StringArrayVar(&c.specs, "spec", nil, "`demand` to meet, as in \"high >= 1000 generations\" or \"every holds 200 generations with\n"+
		"chance 0.999\"; may be repeated, and all must hold")
	f.Var(sizeKnob{&c.knob}, "size", "what is turned to meet it, in which range: copies (1:1000000 if not given) or a constant, as in a=0.3:0.6")
	return c
}

// options gives the search on a network.
func (c *sizeChoice) options(n *model.Network, o hold.Options) (sizing.Options, error) {
	out := sizing.Options{Knob: c.knob, Hold: o, Folder: o.Folder, Command: o.Command}
	var err error
	out.Specs, err = sizing.ParseSpecs(c.specs, n)
	return out, err
}

// runSize makes the search and prints its answer.
func runSize(ctx context.Context, t terminal, n *model.Network, c *sizeChoice, o hold.Options, asJSON, quiet bool) error {
	options, err := c.options(n, o)
	if err != nil {
		return misuseOf(err)
	}
	bar := newBar(t.err, quiet)
	options.Progress = bar.sizeProgress
	report, err := sizing.Run(ctx, n, options)
	bar.close()
	if err != nil {
		return misuseOf(err)
	}
	if asJSON {
		err = writeJSON(t.out, report)
	} else {
		err = writeSize(t.out, report)
	}
	if err == nil && o.Folder != "" {
		fmt.Fprintln(t.err, "records are in", o.Folder)
	}
	if err == nil && report.Answer == nil {
		return errors.New("no setting in the range surely meets the specification")
	}
	return err
}

// misuseOf marks the errors that the command line is to blame for.
func misuseOf(err error) error {
	var spec *sizing.SpecError
	var knob *sizing.KnobError
	if errors.As(err, &spec) || errors.As(err, &knob) {
		return misusef("%v", err)
	}
	return err
}

func (b *bar) sizeProgress(p sizing.Progress) {
	p.Hold.Stage = fmt.Sprintf("evaluation %d at %s: %s", p.Evaluation, digits(p.Setting, 6), p.Hold.Stage)
	b.holdProgress(p.Hold)
}

// A sizeKnob is the flag that names what is turned to meet a specification.
type sizeKnob struct{ knob *sizing.Knob }

func (k sizeKnob) String() string {
	if k.knob == nil || k.knob.Name == "" {
		return ""
	}
	return k.knob.Name + "=" + bare(k.knob.Low) + ":" + bare(k.knob.High)
}

func bare(v float64) string { return strconv.FormatFloat(v, 'g', -1, 64) }

// Set reads the knob.
func (k sizeKnob) Set(text string) error {
	if k.knob.Name != "" {
		return fmt.Errorf("%s is turned already; only one thing is sized at a time", k.knob.Name)
	}
	read, err := readKnob(text)
	*k.knob = sizing.Knob(read)
	return err
}

// Type names the value in help texts.
func (k sizeKnob) Type() string { return "name=low:high" }

func writeSize(w io.Writer, r *sizing.Report) error {
	fmt.Fprintf(w, "%s: time in %s%s, seed %d\n", r.Design, r.TimeUnit, generationWords(r.Generation, r.TimeUnit), r.Seed)
	for _, s := range r.Specs {
		fmt.Fprintf(w, "spec: %s\n", s)
	}
	fmt.Fprintf(w, "%s from %s to %s, %s in the design\n\n", r.Knob, setting(r.RangeLow), setting(r.RangeHigh), setting(r.Today))
	writeAnswer(w, r)
	fmt.Fprintf(w, "\n%d settings evaluated: [95 %% interval], or ± error bound\n", len(r.Evaluations))
	if err := evaluationTable(r).write(w); err != nil {
		return err
	}
	writeWarnings(w, r.Warnings)
	_, err := fmt.Fprintln(w, "These are a model's estimates; a strain must be tested ('holdfast help').")
	return err
}

// setting writes a value of the knob with all the digits that were set.
func setting(v hold.Value) string { return digits(float64(v), 7) }
