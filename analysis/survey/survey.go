// Package survey reports the deterministic map of a design: its resting states and
// saddles and what is proved of their list, stability, linear noise, cores and basins;
// and, as one or two knobs are turned, the windows of the states and what ends them.
package survey

import (
	"context"
	"errors"
	"fmt"

	"holdfast/analysis/hold"
	"holdfast/analysis/survey/resting"
	"holdfast/deterministic"
	"holdfast/deterministic/branch"
	"holdfast/model"
)

// A Report is the map of a design. Times are in TimeUnit.
type Report struct {
	Design     string     `json:"design"`
	Digest     string     `json:"sha256"`
	TimeUnit   string     `json:"time_unit"`
	Generation hold.Value `json:"generation"`
	Copies     float64    `json:"copies"`
	Species    []string   `json:"species"`
	Readout    string     `json:"readout"`
	Box        []Interval `json:"box"` // of amounts, one a species
	States     []State    `json:"states"`
	// List says what is proved of the list of states.
	List List `json:"list"`
	// Start says which state the design's own start belongs to.
	Start  string `json:"start"`
	Search string `json:"search"` // how the states were found, in a sentence
	// Basins are the shares of the box, where there are two stable states or more;
	// Separatrices the curves between them, where two amounts are free.
	Basins       *Basins      `json:"basins,omitempty"`
	Separatrices []Separatrix `json:"separatrices,omitempty"`
	// Diagram follows the states over the knob, where one is given; FoldDiagram has
	// the fold curves, where two are.
	Diagram     *Diagram     `json:"diagram,omitempty"`
	FoldDiagram *FoldDiagram `json:"fold_diagram,omitempty"`
	Warnings    []string     `json:"warnings"`
}

// An Interval is a range of amounts.
type Interval struct {
	Low   hold.Value `json:"low"`
	High  hold.Value `json:"high"`
	Basis string     `json:"basis"` // why no resting state lies beyond
}

// A List is what is proved of the list of states.
type List struct {
	Proved bool `json:"proved"`
	// Text says 'complete (proved)', 'not proved' with the box that resisted and why,
	// or 'multi-start, not proved'.
	Text string `json:"text"`
}

// A Knob is a quantity of the design and the range to turn it over: a constant, a
// product of constants such as "a*b", "copies", or a conserved total ("total", or
// "total1", … where there are several).
type Knob struct {
	Name      string
	Low, High float64
}

// Options say what is mapped beside the states, and where it is written to.
type Options struct {
	// Knobs are turned: none, one or two.
	Knobs []Knob
	// Folder receives the tables; empty: nothing is written. Command is what the
	// records carry as the command that made them.
	Folder, Command string
}

// A KnobError is a knob that cannot be turned as asked.
type KnobError struct{ Err error }

// Error says what is wrong with it.
func (e *KnobError) Error() string { return e.Err.Error() }

// Unwrap gives the error of package branch.
func (e *KnobError) Unwrap() error { return e.Err }

// A job is one map in the making.
type job struct {
	network *model.Network
	options Options
	knobs   []branch.Knob
	survey  *deterministic.Map // nil where there is no stable state
	report  *Report
}

// Run maps the network. Errors are a *KnobError, those of deterministic.Survey and of
// the records.
//
// With one stable state only, or with states that share a lattice point, the report
// comes together with the *deterministic.OneStateError or IndistinctError. With
// knobs it does not: the diagram is an answer, and the error's sentence stands
// among the warnings; so does that of a design that has no stable state at all.
func Run(ctx context.Context, network *model.Network, o Options) (*Report, error) {
	j := &job{network: network, options: o, report: newReport(network)}
	if err := j.makeKnobs(); err != nil {
		return nil, err
	}
	state, err := j.findStates(ctx)
	if err != nil {
		return nil, err
	}
	if err := j.turn(ctx); err != nil {
		return nil, err
	}
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	return j.report, errors.Join(state, j.write())
}

// makeKnobs reads the knobs and sees that today's setting is in their ranges.
func (j *job) makeKnobs() error {
	if len(j.options.Knobs) > 2 {
		return &KnobError{fmt.Errorf("%d knobs are given; turn one, or two for the fold curve", len(j.options.Knobs))}
	}
	for _, o := range j.options.Knobs {
		k, err := branch.NewKnob(j.network, o.Name, o.Low, o.High)
		if err != nil {
			return &KnobError{err}
		}
		if today := k.Today(j.network); today < k.Low || today > k.High {
			return &KnobError{&branch.OutsideError{Knob: k.Name, Today: today, Low: k.Low, High: k.High}}
		}
		j.knobs = append(j.knobs, k)
	}
	return nil
}

// findStates lists the states, their proof and their basins. state is what the survey
// has to say of a design that is no switch; with knobs to turn that is a warning.
func (j *job) findStates(ctx context.Context) (state, err error) {
	list, state := resting.States(ctx, j.network)
	if list == nil && (len(j.knobs) == 0 || !turnable(state)) {
		return nil, state
	}
	if list != nil {
		j.survey = list.Map
		j.report.addStates(ctx, list)
		j.addBasins(ctx)
	}
	if state != nil && len(j.knobs) > 0 {
		j.warn("at today's setting: %v", state)
		state = nil
	}
	return state, nil
}

// turnable tells whether a design with this error may have states at other settings.
func turnable(err error) bool {
	var away *deterministic.RunawayError
	var line *deterministic.ContinuumError
	return errors.Is(err, deterministic.ErrNoRestingState) || errors.As(err, &away) || errors.As(err, &line)
}

// turn follows the states over the knob, or traces the fold curve of two.
func (j *job) turn(ctx context.Context) error {
	switch len(j.knobs) {
	case 1:
		return j.follow(ctx)
	case 2:
		return j.foldCurves(ctx)
	}
	return nil
}

func (j *job) warn(format string, a ...any) {
	j.report.Warnings = append(j.report.Warnings, fmt.Sprintf(format, a...))
}

func values(v []float64) []hold.Value {
	out := make([]hold.Value, len(v))
	for i, x := range v {
		out[i] = hold.Value(x)
	}
	return out
}
