package sizing

import (
	"context"
	"errors"
	"fmt"
	"slices"

	"holdfast/analysis/hold"
	"holdfast/deterministic"
	"holdfast/model"
)

// An evaluator evaluates settings of the knob, each once.
type evaluator struct {
	ctx     context.Context
	network *model.Network
	options Options
	known   map[float64]*Evaluation
	order   []*Evaluation
	names   []string // of the states at the settings evaluated so far
}

// bind gives the network at a setting.
func (e *evaluator) bind(setting float64) (*model.Network, error) {
	if name := e.options.Knob.Name; e.network.ConstantIndex(name) >= 0 {
		return e.network.Rebind(0, map[string]float64{name: setting})
	}
	return e.network.Rebind(setting, nil)
}

// at evaluates a setting, or gives what was found there before. A setting that cannot
// be evaluated counts as one that fails; only that of the first is an error, since
// nothing is known then.
func (e *evaluator) at(setting float64) (*Evaluation, error) {
	if known := e.known[setting]; known != nil {
		return known, nil
	}
	out := &Evaluation{Setting: setting}
	err := e.evaluate(out)
	if e.ctx.Err() != nil {
		return nil, context.Cause(e.ctx)
	}
	var spec *SpecError
	var option *hold.OptionError
	if errors.As(err, &spec) || errors.As(err, &option) {
		return nil, err
	}
	if err != nil {
		if len(e.order) == 0 {
			return nil, fmt.Errorf("at %s %s: %w", e.options.Knob.Name, short(setting), err)
		}
		out.Failure = err.Error()
	}
	if out.Vanished != "" || out.Failure != "" {
		out.Checks = nil
		for i, s := range e.options.Specs {
			out.Checks = append(out.Checks, nowhere(i, s.State))
		}
	}
	out.conclude()
	e.known[setting] = out
	e.order = append(e.order, out)
	return out, nil
}

// evaluate fills in an evaluation.
func (e *evaluator) evaluate(out *Evaluation) error {
	n, err := e.bind(out.Setting)
	if err != nil {
		return err
	}
	report, err := e.run(n)
	if why := vanished(err); why != "" {
		out.Vanished = why
		return nil
	}
	if err != nil {
		return err
	}
	names := stable(report)
	if err := e.learn(names); err != nil {
		return err
	}
	for i := range e.options.Specs {
		if err := e.check(report, out, i, names); err != nil || out.Vanished != "" {
			return err
		}
	}
	return nil
}

// check holds one specification against the states that it is about.
func (e *evaluator) check(r *hold.Report, out *Evaluation, index int, names []string) error {
	s := &e.options.Specs[index]
	for _, state := range s.of(names) {
		if !slices.Contains(names, state) {
			out.Vanished = fmt.Sprintf("there is no state %s", state)
			return nil
		}
		row := dwellOf(r, state)
		if row == nil {
			return fmt.Errorf("nothing was seen of %s", state)
		}
		out.Checks = append(out.Checks, newCheck(index, s, row, e.generation()))
	}
	return nil
}

// generation is the unit of the lengths that chances of holding are asked for: the
// design's or, where it gives none, one unit of time.
func (e *evaluator) generation() float64 {
	if e.network.Generation > 0 {
		return e.network.Generation
	}
	return 1
}

// run makes the job of a setting, for all specifications.
func (e *evaluator) run(n *model.Network) (*hold.Report, error) {
	o := e.options.Hold
	o.Folder, o.Holds, o.States = "", nil, nil
	for i := range e.options.Specs {
		if s := &e.options.Specs[i]; s.Chance > 0 && !slices.Contains(o.Holds, s.Time/e.generation()) {
			o.Holds = append(o.Holds, s.Time/e.generation())
		}
	}
	if o.Holds != nil {
		bound := *n
		bound.Generation = e.generation()
		n = &bound
	}
	if tell := e.options.Progress; tell != nil {
		number, setting := len(e.order)+1, e.setting(n)
		o.Progress = func(p hold.Progress) { tell(Progress{number, setting, p}) }
	}
	return hold.Run(e.ctx, n, o)
}

// setting gives the knob's value on a network.
func (e *evaluator) setting(n *model.Network) float64 {
	if i := n.ConstantIndex(e.options.Knob.Name); i >= 0 {
		return n.Constants[i].Value
	}
	return n.Copies
}

// vanished says in a few words that a design is no switch; "" where err says something
// else.
func vanished(err error) string {
	var one *deterministic.OneStateError
	var same *deterministic.IndistinctError
	switch {
	case errors.As(err, &one):
		return "the switch has vanished: there is one stable state only"
	case errors.As(err, &same):
		return fmt.Sprintf("states %s and %s share a lattice point", same.First, same.Second)
	case errors.Is(err, deterministic.ErrNoRestingState):
		return "the switch has vanished: there is no stable state"
	}
	return ""
}

// stable lists the states of a report that can be held.
func stable(r *hold.Report) []string {
	var names []string
	for i := range r.States {
		if r.States[i].Stable {
			names = append(names, r.States[i].Name)
		}
	}
	return names
}

// learn remembers the names of states of the first switch met. A name in a
// specification that it does not have is an error.
func (e *evaluator) learn(names []string) error {
	if e.names != nil {
		return nil
	}
	e.names = names
	for i := range e.options.Specs {
		if s := &e.options.Specs[i]; s.State != Every && !slices.Contains(names, s.State) {
			return s.unknownState(names)
		}
	}
	return nil
}

// dwellOf gives the row of leaving a state by whichever way: that to "any" or, where
// there is one way only, the one that occurs.
func dwellOf(r *hold.Report, state string) *hold.DwellReport {
	var found *hold.DwellReport
	for i := range r.Dwells {
		d := &r.Dwells[i]
		switch {
		case d.From != state:
		case d.To == "any":
			return d
		case found == nil || found.Never:
			found = d
		}
	}
	return found
}
