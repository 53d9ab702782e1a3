package main

import (
	"context"
	"errors"
	"fmt"
	"io"
	"path/filepath"
	"strconv"

	"github.com/spf13/pflag"

	"holdfast/analysis/batch"
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
	f.Var(specTexts{&c.specs}, "spec", "what a state must do, as in \"high >= 1000 generations\";\nmay be repeated, and all must hold")
	f.Var(sizeKnob{&c.knob}, "size", "what is turned to meet it, in which range: copies\n(1:10000 if not given) or a constant")
	return c
}

// options gives the search on a network.
func (c *sizeChoice) options(n *model.Network, o hold.Options) (sizing.Options, error) {
	out := sizing.Options{Knob: c.knob, Hold: o, Folder: o.Folder, Command: o.Command}
	var err error
	out.Specs, err = sizing.ParseSpecs(c.specs, n)
	return out, err
}

// sizes tells whether one search for a size is asked for, and refuses what goes with none.
func (c *batchChoice) sizes() (bool, error) {
	switch {
	case len(c.size.specs) == 0 && c.size.knob.Name != "":
		return false, misusef("batch: --size %s for what? --spec \"high >= 1000 generations\", say", c.size.knob.Name)
	case len(c.size.specs) == 0 || c.join:
		return false, nil
	case len(c.axes) > 0 || c.points != "" || c.draws > 0:
		return false, nil // at each point, as a batch
	case c.shard != "":
		return false, misusef("batch: a search for one setting has no shards; leave --shard out")
	}
	return true, nil
}

// sizeOf gives the search to make at each point of a batch; nil: none.
func (c *batchChoice) sizeOf(draft *model.Draft) (*batch.Size, error) {
	if len(c.size.specs) == 0 {
		return nil, nil
	}
	n, err := draft.Bind(0, nil)
	if err != nil {
		return nil, err
	}
	o, err := c.size.options(n, c.hold)
	if err != nil {
		return nil, misuseOf(err)
	}
	return &batch.Size{Knob: o.Knob, Specs: o.Specs}, nil
}

// runSize looks for the setting that meets the specifications.
func (c *batchChoice) runSize(ctx context.Context, t terminal, args []string) error {
	path, err := oneFile("batch", args)
	if err != nil {
		return err
	}
	network, err := c.design.load(path)
	if err != nil {
		return err
	}
	o := c.hold
	o.Threads, o.Memory, o.Folder = int(c.threads), bytesOf(c.memory), c.out
	o.Command = canonical("batch", filepath.Base(path), c.flags)
	return runSize(ctx, t, network, c.size, o, c.asJSON, c.quiet)
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

// A specTexts flag collects specifications.
type specTexts struct{ list *[]string }

func (s specTexts) String() string { return "" }

// Set takes one.
func (s specTexts) Set(text string) error {
	*s.list = append(*s.list, text)
	return nil
}

// Type names the value in help texts.
func (s specTexts) Type() string { return "text" }

// words writes the specifications as they would be typed.
func (s specTexts) words() []string {
	var out []string
	for _, text := range *s.list {
		out = append(out, "--spec", text)
	}
	return out
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
