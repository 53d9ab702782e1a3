package sde

import (
	"errors"
	"fmt"
)

// An Ending says how a run ended.
type Ending uint8

const (
	// Flipped: the run entered a core other than the one it started in.
	Flipped Ending = iota
	// Horizon: the run reached Plan.Until.
	Horizon
	// StepBudget: the run has had Plan.MaxSteps steps.
	StepBudget
	// Cancelled: the context was done before the run was; or it never began.
	Cancelled
	// RanAway: a coordinate went beyond Plan.Limit.
	RanAway
	// NotFinite: a coordinate was about to become no number, or infinite.
	NotFinite
)

var endingNames = [...]string{"flipped", "horizon reached", "step budget spent", "cancelled", "ran away", "not finite"}

// String gives the ending in words.
func (e Ending) String() string {
	if int(e) < len(endingNames) {
		return endingNames[e]
	}
	return fmt.Sprintf("ending %d", uint8(e))
}

// Early tells whether the run ended before the plan let it: nothing may be
// concluded from it but its exposure.
func (e Ending) Early() bool { return e >= Cancelled }

// An Outcome is what became of one run.
type Outcome struct {
	Replicate uint64
	Ending    Ending
	// Core is the index of the core that the run entered; −1 unless Flipped.
	Core int
	// Time is the exposure, in the system's unit: Steps times Result.Step.
	Time float64
	// Steps is the number of steps taken.
	Steps int64
	// State holds the coordinates at the end. If NotFinite they are those before
	// the step that could not be taken, which Steps and Time do not count.
	State []float64

	bad *NotFiniteError
}

// Err gives nil, ErrCancelled, a *RunawayError or a *NotFiniteError, by the ending.
func (o *Outcome) Err() error {
	switch o.Ending {
	case Cancelled:
		return ErrCancelled
	case RanAway:
		return newRunawayError(o.State, o.Time)
	case NotFinite:
		return o.bad
	}
	return nil
}

// ErrCancelled is the error of a run that was cancelled.
var ErrCancelled = errors.New("run cancelled")

// A RunawayError says that a coordinate went beyond the limit.
type RunawayError struct {
	Coordinate int // the largest in magnitude
	State      []float64
	Time       float64
}

func newRunawayError(x []float64, t float64) *RunawayError {
	e := &RunawayError{State: x, Time: t}
	for i := range x {
		if max(x[i], -x[i]) > max(x[e.Coordinate], -x[e.Coordinate]) {
			e.Coordinate = i
		}
	}
	return e
}

// Error names the coordinate and the time.
func (e *RunawayError) Error() string {
	return fmt.Sprintf("coordinate %d ran away to %v at time %v", e.Coordinate, e.State[e.Coordinate], e.Time)
}

// A NotFiniteError says that a path has no finite next step.
type NotFiniteError struct {
	// Reaction is the index of the reaction whose propensity is below 0 or not
	// finite at State, and Name its name; −1 where there is none such.
	Reaction int
	Name     string
	// Value is the propensity, or what the coordinate would have become.
	Value float64
	// Coordinate is the first one that would not be finite; −1 where a reaction is named.
	Coordinate int
	// State is the last finite state, and Time its time.
	State []float64
	Time  float64
}

// Error names the reaction or the coordinate, the state and the value.
func (e *NotFiniteError) Error() string {
	if e.Reaction >= 0 {
		return fmt.Sprintf("reaction %q has the propensity %v at %v, time %v; it must be finite and not negative", e.Name, e.Value, e.State, e.Time)
	}
	return fmt.Sprintf("coordinate %d would become %v after %v, time %v", e.Coordinate, e.Value, e.State, e.Time)
}

// A StepError says that the step asked for is too large for the system.
type StepError struct {
	Step    float64
	Largest float64 // the largest good step
}

// Error gives both steps.
func (e *StepError) Error() string {
	return fmt.Sprintf("step %v is too large: beyond %.6g a path overshoots its fastest mode at every step; take a step up to that", e.Step, e.Largest)
}

// A Result holds what became of all runs.
type Result struct {
	// Outcomes are by replicate, Plan.Runs of them. Those of runs that had not
	// begun when the context was done are Cancelled with Time 0.
	Outcomes []Outcome
	// Steps is the number of steps in all runs.
	Steps int64
	// Step is the step taken, in the system's time unit.
	Step float64
	// Lost counts the runs that ended NotFinite or RanAway: no average may hold them.
	Lost int
}
