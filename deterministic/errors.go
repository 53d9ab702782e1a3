package deterministic

import (
	"errors"
	"fmt"
	"strings"
)

// ErrNoRestingState tells that no stable resting state was found; errors that wrap
// it say what was found instead.
var ErrNoRestingState = errors.New("no stable resting state")

// A OneStateError tells that a design has one stable state only.
type OneStateError struct {
	State State
	// Species names the species in the order of the State's slices.
	Species []string
}

// Error says what is wrong and what to do.
func (e *OneStateError) Error() string {
	parts := make([]string, len(e.Species))
	for i, name := range e.Species {
		parts[i] = fmt.Sprintf("%s = %.4g (%.4g molecules)", name, e.State.Amounts[i], e.State.Molecules[i])
	}
	return "not a switch here: there is one stable state only, at " + strings.Join(parts, ", ")
}

// A RunawayError tells that amounts grow without bound.
type RunawayError struct {
	// Species is the name of the species that passed Limit, an amount.
	Species string
	Limit   float64
}

// Error says what is wrong and what to do.
func (e *RunawayError) Error() string {
	return fmt.Sprintf("%s grows without bound (beyond %.3g): give it a loss that keeps up with its production, or a production that saturates", e.Species, e.Limit)
}

// A ContinuumError tells that resting states form a line or a sheet instead of
// separate points: some combination of amounts is not held by anything.
type ContinuumError struct {
	// Amounts is one of the resting states.
	Amounts []float64
	// Species names the species that change along the continuum.
	Species []string
}

// Error says what is wrong and what to do.
func (e *ContinuumError) Error() string {
	return fmt.Sprintf("the resting states are not separate points: %s can drift along a line of them; give each a production or a loss of its own", strings.Join(e.Species, ", "))
}

// An IndistinctError tells that two states have the same nearest lattice point.
type IndistinctError struct {
	First, Second string
	Counts        []int64
}

// Error says what is wrong and what to do.
func (e *IndistinctError) Error() string {
	return fmt.Sprintf("states %q and %q are not distinguishable at this copy number: the lattice point nearest to both is %v; raise copies", e.First, e.Second, e.Counts)
}

// A CoreError tells what is wrong with a declared core.
type CoreError struct {
	Core, Problem string
}

// Error says what is wrong and what to do.
func (e *CoreError) Error() string { return fmt.Sprintf("[core.%s]: %s", e.Core, e.Problem) }

// A RateError tells that a law is negative or not finite at the start or at a
// resting state.
type RateError struct {
	Reaction string
	Place    string // where that is, in words
	Amounts  []float64
	Value    float64
}

// Error says what is wrong and what to do.
func (e *RateError) Error() string {
	return fmt.Sprintf("reaction %q has rate %v at %s, amounts %v: it must be finite and not below 0", e.Reaction, e.Value, e.Place, e.Amounts)
}
