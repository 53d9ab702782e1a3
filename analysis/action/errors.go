package action

import (
	"fmt"
	"strings"
)

// A FixedNoiseError tells that a reaction changes a species of fixed count: its
// noise does not vanish as copies grow, and there is no least action.
type FixedNoiseError struct{ Species, Reaction string }

// Error says what is wrong and what to do.
func (e *FixedNoiseError) Error() string {
	return fmt.Sprintf("reaction %q changes %s, a species of fixed count, whose noise does not vanish as copies grow; least action is for designs in which all noise does: take another route (runs, staged, lattice), or put the average over %s's states into the rate laws", e.Reaction, e.Species, e.Species)
}

// An EndError tells that a point cannot be an end of a path.
type EndError struct{ State, Why string }

// Error says what is wrong.
func (e *EndError) Error() string { return fmt.Sprintf("%s: %s", e.State, e.Why) }

// A NeverError tells that a state is not left in that direction, however long one
// waits: no reaction brings back a species that is gone.
type NeverError struct {
	From, To string
	// Species are gone in From and there in To.
	Species []string
}

// Error says what is wrong.
func (e *NeverError) Error() string {
	return fmt.Sprintf("no path leads from %s to %s: %s is gone there, and no reaction brings it back", e.From, e.To, strings.Join(e.Species, " and "))
}

// A RateError tells that a law has a value on the way that no rate can have.
type RateError struct {
	Reaction string
	Species  []string
	Amounts  []float64
	Value    float64
}

// Error says what is wrong and where.
func (e *RateError) Error() string {
	parts := make([]string, len(e.Species))
	for i, s := range e.Species {
		parts[i] = fmt.Sprintf("%s = %.4g", s, e.Amounts[i])
	}
	return fmt.Sprintf("reaction %q has the rate %v at amounts %s, on the way to the saddle; a rate must be finite and not below 0: mend its law, with max(0, …) say", e.Reaction, e.Value, strings.Join(parts, ", "))
}

// A PathError tells that no path of least action was found between two states.
type PathError struct{ From, Saddle, Why string }

// Error says what is wrong.
func (e *PathError) Error() string {
	return fmt.Sprintf("no path of least action was found from %s to %s: %s", e.From, e.Saddle, e.Why)
}
