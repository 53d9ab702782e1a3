package hold

import (
	"fmt"
	"math"
	"runtime"
	"slices"

	"holdfast/analysis/survey/resting"
	"holdfast/model"
)

const (
	defaultPrecision = 0.1
	// defaultEvents is what two cores do in a few seconds on a small network.
	defaultEvents = 600_000_000
	// stagedEvents is the same where staged runs are asked for by name: they know what the
	// precision takes, and this is about a minute on two cores.
	stagedEvents = 6_000_000_000
)

// Options say how a hold job is done. The zero value is a job of the default
// precision and budget.
type Options struct {
	// Route is how hold times are found, one of Routes; empty: Auto. Second, if not
	// empty, is a second route to hold against the first.
	Route, Second string
	// Precision is the relative half-width asked of each 95 % interval; 0: 0.1.
	Precision float64
	// Runs is the number of runs of each state, each to its first flip; 0: as many
	// as Precision takes, or as the budget allows.
	Runs int64
	// Events is the most reaction events of all runs together, or steps of all
	// Langevin paths; 0: 600 million, or no limit where Runs or Until is given.
	Events int64
	// Step is the step of Langevin paths, in the design's unit; 0: 0.02 over the
	// fastest rate at a resting state.
	Step float64
	// Along is what the progress of staged runs is measured along: AlongPath, AlongLine
	// or the name of a species; empty: AlongPath. Other choices cost time, never truth.
	Along string
	// Interval is the time, in the design's unit, for which constants that vary in time
	// are held; 0: a twentieth of the shortest memory or less (see the page on
	// variation). Runs are made again with half of it.
	Interval float64
	// Until is the longest time that one run lasts, in the design's unit; 0: no limit.
	Until float64

	// Seed chooses the random numbers: the same seed gives the same answer,
	// whatever Threads and Lanes are.
	Seed uint64
	// Point is the number of the point of a batch, which chooses the random numbers
	// together with Seed; 0: a job by itself.
	Point uint64
	// States, if not nil, are the resting states of the network, found before.
	States *resting.List
	// Threads is the number of goroutines; 0: one a processor. Lanes is the number
	// of runs that one of them advances in turn; 0: chosen by the engine.
	Threads, Lanes int

	// Holds are the numbers of generations that chances of holding are given for,
	// each above 0; nil: 10, 100 and 1000.
	Holds []float64

	// Memory is the most bytes that the lattice may take; 0: 4 GiB.
	Memory int64

	// Cores, if not nil, are the regions between which dwells are counted, one for each
	// stable state in the survey's order, instead of the survey's own: so that designs
	// that differ a little are held between the same ones.
	Cores []model.Core

	// Folder, if not empty, receives the records. Command is what they carry as
	// the command that made them.
	Folder, Command string

	// Progress, if not nil, is told now and then how far the job is; never twice
	// at once.
	Progress func(Progress)

	// Notice, if not nil, is told before a route that auto has chosen begins, where it is
	// likely to take long: one plain sentence.
	Notice func(string)

	sampled bool // a number or a budget was given that only runs understand
}

// Progress tells how far a job is.
type Progress struct {
	Stage  string  // what is being done, in a few words
	Share  float64 // done, from 0 to 1
	Events int64   // of all runs so far, or steps, as Unit says
	Unit   string  // events or steps; empty: events
}

// An OptionError is an option out of its range.
type OptionError struct {
	Name    string
	Value   any
	Allowed string
}

// Error states the option, its value and what is allowed.
func (e *OptionError) Error() string {
	return fmt.Sprintf("%s is %v; it must be %s", e.Name, e.Value, e.Allowed)
}

// Check says what is wrong with the options, as Run would: an *OptionError.
func (o Options) Check() error {
	_, err := o.complete()
	return err
}

// complete gives the options with zeros replaced, or an *OptionError.
func (o Options) complete() (Options, error) {
	switch {
	case o.Precision != 0 && !(o.Precision >= 0.001 && o.Precision < 1):
		return o, &OptionError{"precision", o.Precision, "from 0.001 to below 1"}
	case o.Runs < 0 || o.Runs > 1<<31:
		return o, &OptionError{"runs", o.Runs, "from 1 to 2³¹"}
	case o.Events < 0:
		return o, &OptionError{"events", o.Events, "at least 1"}
	case !(o.Until >= 0 && o.Until <= 1e300):
		return o, &OptionError{"until", o.Until, "a time above 0, at most 1e300"}
	case !(o.Step >= 0 && o.Step <= 1e300):
		return o, &OptionError{"step", o.Step, "a time above 0, at most 1e300"}
	case !(o.Interval >= 0 && o.Interval <= 1e200):
		return o, &OptionError{"interval", o.Interval, "a time above 0, at most 1e200"}
	case o.Memory < 0:
		return o, &OptionError{"memory", o.Memory, "a number of bytes above 0"}
	case o.Threads < 0 || o.Threads > 4096:
		return o, &OptionError{"threads", o.Threads, "from 1 to 4096"}
	}
	if err := o.checkHolds(); err != nil {
		return o, err
	}
	if o.Holds == nil {
		o.Holds = holdGenerations()
	}
	if o.Route == "" {
		o.Route = Auto
	}
	if err := checkRoute("route", o.Route); err != nil {
		return o, err
	}
	if o.Second != "" {
		if err := checkRoute("second", o.Second); err != nil {
			return o, err
		}
		if o.Second == o.Route && o.Route != Auto {
			return o, &OptionError{"second", fmt.Sprintf("%q", o.Second), "another route than the first"}
		}
	}
	if o.Step > 0 && o.Route != Langevin && o.Second != Langevin {
		return o, &OptionError{"step", o.Step, "left out but for Langevin paths (--route langevin): no other route takes steps"}
	}
	o.sampled = o.Runs != 0 || o.Events != 0 || o.Until != 0
	if o.Precision == 0 {
		o.Precision = defaultPrecision
	}
	if o.Threads == 0 {
		o.Threads = runtime.GOMAXPROCS(0)
	}
	if o.Events == 0 && o.Runs == 0 && o.Until == 0 {
		o.Events = defaultEvents
		if o.Route == Staged {
			o.Events = stagedEvents
		}
	}
	return o, nil
}

// checkHolds sees that each number of generations is a length of time, and stands once.
func (o Options) checkHolds() error {
	for i, g := range o.Holds {
		if !(g > 0) || math.IsInf(g, 1) || slices.Contains(o.Holds[:i], g) {
			return &OptionError{"holds", o.Holds, "numbers of generations above 0, each once"}
		}
	}
	return nil
}
