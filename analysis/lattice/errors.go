package lattice

import (
	"errors"
	"fmt"
	"strings"
)

// ErrOneState is what Solve returns for fewer than two cores: there is nothing to
// flip to.
var ErrOneState = errors.New("the lattice route needs at least two states to flip between; this design has fewer")

// A RateError tells that a rate law has a value that no rate can have at a
// lattice point inside the box.
type RateError struct {
	Reaction string
	Species  []string
	Counts   []int64
	Value    float64
}

// Error says what is wrong and, where something helps, what to do.
func (e *RateError) Error() string {
	return fmt.Sprintf("reaction %q has the rate %v at %s; rates must be finite and not negative",
		e.Reaction, e.Value, place(e.Species, e.Counts))
}

func place(species []string, counts []int64) string {
	var s strings.Builder
	for i, k := range counts {
		if i > 0 {
			s.WriteString(", ")
		}
		s.WriteString(fmt.Sprintf("%s = %d", species[i], k))
	}
	return s.String()
}

// A DimensionError tells that the network has more independent species with long
// ranges of counts than the lattice route serves.
type DimensionError struct {
	Dimensions int
	Species    []string // the species with long ranges
}

// Error says what is wrong and, where something helps, what to do.
func (e *DimensionError) Error() string {
	return fmt.Sprintf("the lattice route serves one to three independent species; this design has %d (%v): make exact runs instead",
		e.Dimensions, e.Species)
}

// A TooLargeError tells that the lattice needs more than it was allowed.
type TooLargeError struct {
	Estimate Estimate
	// Allowed is the memory allowed, in bytes.
	Allowed int64
	// AtLeast marks an estimate made before the lattice was counted to its end.
	AtLeast bool
}

// Error says what is wrong and, where something helps, what to do.
func (e *TooLargeError) Error() string {
	some := ""
	if e.AtLeast {
		some = "at least "
	}
	return fmt.Sprintf("the lattice has %s%d states in %v and needs %s%.1f GiB and about %.0f s; %.1f GiB are allowed: "+
		"allow more memory, lower the copies, or make exact runs instead",
		some, e.Estimate.States, e.Estimate.Box, some, gib(e.Estimate.Bytes), e.Estimate.Seconds, gib(e.Allowed))
}

func gib(bytes int64) float64 { return float64(bytes) / (1 << 30) }

// A UnreachableError tells that a core can neither be entered from any other
// core nor left for one.
type UnreachableError struct{ State string }

// Error says what is wrong and, where something helps, what to do.
func (e *UnreachableError) Error() string {
	return fmt.Sprintf("no path of reactions joins the core of state %q to another core, either way: its conserved totals differ, or the core is wrong", e.State)
}

// A CoreError tells that a core cannot serve as a start or a target.
type CoreError struct{ State, Why string }

// Error says what is wrong and, where something helps, what to do.
func (e *CoreError) Error() string { return fmt.Sprintf("core of state %q: %s", e.State, e.Why) }

// A RangeError tells that a dwell time, or a probability, is beyond what numbers
// of double precision hold.
type RangeError struct{ State string }

// Error says what is wrong and, where something helps, what to do.
func (e *RangeError) Error() string {
	return fmt.Sprintf("the mean dwell time of state %q is beyond about 1e280 and cannot be held in double precision: lower the copies", e.State)
}

// A BoxError tells that the box grew as often as it may and the truncation error
// is still above what was asked.
type BoxError struct {
	Box          Box
	Bound, Asked float64
}

// Error says what is wrong and, where something helps, what to do.
func (e *BoxError) Error() string {
	return fmt.Sprintf("the box %v still leaves a truncation error of %.2g where %.2g was asked: the counts may grow without limit", e.Box, e.Bound, e.Asked)
}
