package ssa

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
	// EventBudget: the run has had Plan.MaxEvents events.
	EventBudget
	// Absorbed: no event can happen any more.
	Absorbed
	// Cancelled: the context was done before the run was; or it never began.
	Cancelled
	// RanAway: a count went above Plan.MaxCount.
	RanAway
	// BadRate: a propensity was negative or not finite.
	BadRate
)

var endingNames = [...]string{"flipped", "horizon reached", "event budget spent", "absorbed", "cancelled", "ran away", "bad rate"}

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
	// Time is the exposure, in the network's unit: the time of the last event, or
	// Plan.Until if the horizon was reached, or, if Cancelled, the time so far.
	Time float64
	// Events is the number of reaction firings.
	Events int64
	// Counts is the state at the end, one count per species.
	Counts []int64

	bad *badRate
}

// badRate is the rate that ended a run.
type badRate struct {
	name     string
	reaction int
	value    float64
}

// Err gives nil, ErrCancelled, a *RunawayError or a *RateError, by the ending.
func (o *Outcome) Err() error {
	switch o.Ending {
	case Cancelled:
		return ErrCancelled
	case RanAway:
		return newRunawayError(o.Counts, o.Time)
	case BadRate:
		return &RateError{Reaction: o.bad.reaction, Name: o.bad.name, Counts: o.Counts, Value: o.bad.value}
	}
	return nil
}

// ErrCancelled is the error of a run that was cancelled.
var ErrCancelled = errors.New("run cancelled")

// A RateError says that a propensity was negative or not finite.
type RateError struct {
	Reaction int    // index in the network
	Name     string // of the reaction
	Counts   []int64
	Value    float64 // the propensity, in events per unit of time
}

// Error names the reaction, the state and the value.
func (e *RateError) Error() string {
	return fmt.Sprintf("reaction %q has the propensity %v at counts %v; it must be finite and not negative", e.Name, e.Value, e.Counts)
}

// A RunawayError says that a count went above the limit.
type RunawayError struct {
	Species int // the species with the largest count
	Counts  []int64
	Time    float64
}

func newRunawayError(counts []int64, t float64) *RunawayError {
	e := &RunawayError{Counts: counts, Time: t}
	for i, n := range counts {
		if n > counts[e.Species] {
			e.Species = i
		}
	}
	return e
}

// Error names the count and the time.
func (e *RunawayError) Error() string {
	return fmt.Sprintf("species %d ran away to a count of %d at time %v", e.Species, e.Counts[e.Species], e.Time)
}

// A Result holds what became of all runs.
type Result struct {
	// Outcomes are by replicate, Plan.Runs of them. Those of runs that had not
	// begun when the context was done are Cancelled with Time 0.
	Outcomes []Outcome
	// Events is the number of reaction firings in all runs.
	Events int64
}
