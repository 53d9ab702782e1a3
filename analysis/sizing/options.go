package sizing

import (
	"fmt"
	"math"
	"slices"

	"holdfast/analysis/hold"
	"holdfast/deterministic"
	"holdfast/model"
)

// Copies is the name of the knob that turns the copy number.
const Copies = "copies"

// The range of copies where none is given.
const (
	leastCopies = 1
	mostCopies  = 10_000
)

// A Knob is what is turned, copies or a constant, and the range to look in, both ends
// included. With both ends 0, copies are looked at from 1 to 10,000.
type Knob struct {
	Name      string
	Low, High float64
}

// Options say what is asked and how.
type Options struct {
	Knob Knob
	// Specs must all be met.
	Specs []Spec
	// Tolerance is how narrowly a constant is found, relative to its value; 0: 0.001.
	// Copies are found to the last one.
	Tolerance float64
	// Hold says how each setting is evaluated: its route, precision, budget and seed.
	// Folder and Holds are not used.
	Hold hold.Options
	// Folder, if not empty, receives the table of evaluations. Command is what it
	// carries as the command that made it.
	Folder, Command string
	// Progress, if not nil, is told which setting is being evaluated and how far that
	// is; never twice at once.
	Progress func(Progress)
}

// Progress tells how far a search is. How many evaluations it will take is not known
// before.
type Progress struct {
	Evaluation int // from 1
	Setting    float64
	Hold       hold.Progress
}

// A KnobError is a knob that cannot be turned as asked.
type KnobError struct{ Name, Problem string }

// Error says what is wrong with it.
func (e *KnobError) Error() string { return e.Name + ": " + e.Problem }

// Check sees, before anything is evaluated, that the knob can be turned as asked, and that
// each specification is about a state that there may be at some setting. Errors are
// *KnobError, *SpecError and *hold.OptionError.
func (o Options) Check(n *model.Network) error {
	if _, err := o.complete(n); err != nil {
		return err
	}
	names := []string{"low", "middle", "high"}
	declared := map[string]bool{}
	for _, d := range n.Declared {
		if declared[d.State] = true; !slices.Contains(names, d.State) {
			names = append(names, d.State)
		}
	}
	for _, s := range o.Specs {
		if s.State != Every && !declared[s.State] && !deterministic.IsStableName(s.State) {
			return s.unknownState(names)
		}
	}
	return nil
}

const defaultTolerance = 1e-3

// complete gives the options with zeros replaced.
func (o Options) complete(n *model.Network) (Options, error) {
	if len(o.Specs) == 0 {
		return o, fmt.Errorf("a specification is missing: %s", forms)
	}
	if o.Tolerance == 0 {
		o.Tolerance = defaultTolerance
	}
	if !(o.Tolerance >= 1e-5 && o.Tolerance <= 0.1) {
		return o, &hold.OptionError{Name: "tolerance", Value: o.Tolerance, Allowed: "from 1e-5 to 0.1"}
	}
	k, err := o.Knob.complete(n)
	o.Knob = k
	return o, err
}

// complete sees that the knob is there and its range one to look in.
func (k Knob) complete(n *model.Network) (Knob, error) {
	var names []string
	for _, c := range n.Constants {
		names = append(names, c.Name)
	}
	if k.Name == "" {
		k.Name = Copies
	}
	constant := n.ConstantIndex(k.Name) >= 0
	if !constant && k.Name != Copies {
		return k, &KnobError{k.Name, "there is no such constant: " + model.NameHint(k.Name, append(names, Copies))}
	}
	if k.Low == 0 && k.High == 0 && !constant {
		k.Low, k.High = leastCopies, mostCopies
	}
	if !constant {
		k.Low, k.High = math.Ceil(k.Low), math.Floor(k.High)
	}
	return k, k.check(constant)
}

func (k Knob) check(constant bool) error {
	problem := ""
	switch {
	case !(k.Low >= 0) || math.IsInf(k.High, 0) || math.IsNaN(k.High):
		problem = "both ends of the range must be finite numbers, not below 0"
	case !constant && k.Low < 1:
		problem = "copies are looked for among whole numbers from 1 on"
	case !constant && k.Low > k.High:
		problem = "the range holds no whole number, or its ends are the wrong way round"
	case k.Low > k.High:
		problem = fmt.Sprintf("the range from %s to %s holds nothing; give the lower end first", short(k.Low), short(k.High))
	case k.Low == k.High:
		problem = fmt.Sprintf("the range is one setting, %s; give two different ends", short(k.Low))
	}
	if problem != "" {
		return &KnobError{k.Name, problem}
	}
	return nil
}
