package dwell

import (
	"fmt"
	"math"
)

// Values of To beside the index of a state.
const (
	// Censored marks a dwell that was cut off before the state was left.
	Censored = -1
	// Elsewhere marks a dwell that ended in an absorbing state that is none of
	// the states.
	Elsewhere = -2
	// Any stands, in an Estimate, for leaving the state by whichever way.
	Any = -3
)

// An Observation is one dwell.
type Observation struct {
	// To is the index of the state entered, Censored or Elsewhere.
	To int
	// Absorbed tells that nothing leads out of the state entered.
	Absorbed bool
	// Time is how long the dwell lasted or was watched, in the design's unit.
	Time float64
}

// flipped tells whether the dwell ended by a flip to the target, a state, Elsewhere or Any.
func (o *Observation) flipped(target int) bool {
	return o.To == target || target == Any && o.To != Censored
}

// cutOff is −1 for a dwell that was cut off, else 0.
func (o *Observation) cutOff() int {
	if o.To == Censored {
		return -1
	}
	return 0
}

// An ObservationError is an observation that cannot be one.
type ObservationError struct {
	Index       int // place in the list of observations
	Observation Observation
	Problem     string
}

// Error states the place, the value and what is wrong with it.
func (e *ObservationError) Error() string {
	return fmt.Sprintf("dwell %d (to state %d after %v): %s", e.Index, e.Observation.To, e.Observation.Time, e.Problem)
}

func checkObservations(obs []Observation, states, from int) error {
	for i, o := range obs {
		if problem := o.problem(states, from); problem != "" {
			return &ObservationError{Index: i, Observation: o, Problem: problem}
		}
	}
	return nil
}

func (o *Observation) problem(states, from int) string {
	switch {
	case !(o.Time >= 0) || math.IsInf(o.Time, 0):
		return "a time must be a finite number, not below 0"
	case o.To < Elsewhere || o.To >= states:
		return fmt.Sprintf("there are %d states, numbered from 0", states)
	case o.To == from:
		return "a state cannot flip to itself"
	case o.To == Censored && o.Absorbed:
		return "a dwell that was cut off cannot have been absorbed"
	case o.To == Elsewhere && !o.Absorbed:
		return "a dwell can end outside the states only in an absorbing one"
	}
	return ""
}
