package branch

import (
	"fmt"
	"strings"
)

// An UnknownKnobError says that a knob's name is none of those that the network
// has.
type UnknownKnobError struct {
	Name  string
	Known []string // what could have been written
}

// Error gives the message, one sentence.
func (e *UnknownKnobError) Error() string {
	return fmt.Sprintf("there is no constant, total or product %q to turn; known here: %s", e.Name, strings.Join(e.Known, ", "))
}

// A RangeError says what is wrong with a knob's range.
type RangeError struct {
	Knob      string
	Low, High float64
	Problem   string
}

// Error gives the message, one sentence.
func (e *RangeError) Error() string {
	return fmt.Sprintf("%s from %g to %g: %s", e.Knob, e.Low, e.High, e.Problem)
}

// An OutsideError says that today's setting is not in the knob's range.
type OutsideError struct {
	Knob             string
	Today, Low, High float64
}

// Error gives the message, one sentence.
func (e *OutsideError) Error() string {
	return fmt.Sprintf("today's %s is %g, outside the range from %g to %g; widen the range so that it holds %g", e.Knob, e.Today, e.Low, e.High, e.Today)
}

// A ProductError says why a product of constants cannot be turned.
type ProductError struct {
	Knob    string
	Problem string
}

// Error gives the message, one sentence.
func (e *ProductError) Error() string { return fmt.Sprintf("product %s: %s", e.Knob, e.Problem) }

// A NoStateError says that no resting state was found at any of the settings that
// were looked at.
type NoStateError struct {
	Knob      string
	Low, High float64
	// Last is what the survey of the last setting said; may be nil.
	Last error
}

// Error gives the message, one sentence.
func (e *NoStateError) Error() string {
	text := fmt.Sprintf("no resting state found anywhere on %s from %g to %g", e.Knob, e.Low, e.High)
	if e.Last != nil {
		text += ": " + e.Last.Error()
	}
	return text
}

// Unwrap gives what the last survey said.
func (e *NoStateError) Unwrap() error { return e.Last }

// A SharedKnobError says that two knobs turn the same thing.
type SharedKnobError struct{ First, Second string }

// Error gives the message, one sentence.
func (e *SharedKnobError) Error() string {
	return fmt.Sprintf("%s and %s turn the same thing; give two knobs that have nothing in common", e.First, e.Second)
}

// A BoxError says that a species has no sensible upper edge in the box of amounts.
type BoxError struct {
	Species string
	High    []float64
}

// Error gives the message, one sentence.
func (e *BoxError) Error() string {
	return fmt.Sprintf("the box of amounts needs one finite upper edge above 0 for each species; %s has none in %v", e.Species, e.High)
}
