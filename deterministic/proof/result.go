package proof

import (
	"fmt"
	"strings"

	"holdfast/deterministic/proof/interval"
)

// Ending tells how a search ended.
type Ending uint8

// The endings of a search.
const (
	Finished   Ending = iota // every box was dealt with
	OutOfBoxes               // the limit of boxes was reached
	Cancelled                // the context was cancelled
	Unposed                  // the rates do not determine isolated states
)

// String names the ending in words.
func (e Ending) String() string {
	return [...]string{
		"finished", "stopped at the limit of boxes", "cancelled",
		"the equations are fewer than the species: resting states are not isolated",
	}[min(e, Unposed)]
}

// Early tells whether boxes were left unexamined.
func (e Ending) Early() bool { return e != Finished }

// A Root is one resting state, proved to exist.
type Root struct {
	// Box encloses it, in amounts, one interval a species. It is the only resting
	// state in Box, and in some neighbourhood of it.
	Box []interval.Interval
	// Point is the middle of Box.
	Point []float64
	// Kink tells that a rate law may lack a derivative at the state: min, max or
	// abs at its kink. Its stability cannot be read from a Jacobian.
	Kink bool
	// Edge tells that the state may lie just outside the box that was searched, by
	// rounding.
	Edge bool
}

// An Unresolved is a box that could be neither excluded nor proved to hold one
// state. It may hold none, one or several.
type Unresolved struct {
	Box []interval.Interval // in amounts, one interval a species
	// Boxes is the number of boxes of the search that it covers.
	Boxes int
	// Species are the species' names, in the same order.
	Species []string
}

// A Result is a list of resting states, with what is proved about it.
type Result struct {
	// Roots are different resting states, each proved to exist, in the order of
	// their amounts, first species first.
	Roots []Root
	// Unresolved covers the rest of what was not excluded. Empty: the list is
	// complete.
	Unresolved []Unresolved
	// Complete tells that the box holds exactly the resting states listed.
	Complete bool
	// Low and High are the box searched, in amounts. All tells that no resting
	// state with non-negative amounts lies outside it.
	Low, High []float64
	All       bool
	// Boxes is the number of boxes examined.
	Boxes  int
	Ending Ending
}

// String says 'complete (proved)' or 'not proved' and why.
func (r *Result) String() string {
	if r.Complete {
		where := ""
		if !r.All {
			where = " in the box searched"
		}
		return fmt.Sprintf("complete (proved)%s: %s, %d boxes", where, states(len(r.Roots)), r.Boxes)
	}
	var b strings.Builder
	fmt.Fprintf(&b, "not proved: %s found, %d boxes", states(len(r.Roots)), r.Boxes)
	if r.Ending.Early() {
		fmt.Fprintf(&b, ", %v", r.Ending)
	}
	for i, u := range r.Unresolved {
		if i == 3 {
			fmt.Fprintf(&b, "; and %d more", len(r.Unresolved)-i)
			break
		}
		fmt.Fprintf(&b, "; what resisted: %s", u)
	}
	return b.String()
}

func states(n int) string {
	if n == 1 {
		return "1 resting state"
	}
	return fmt.Sprintf("%d resting states", n)
}

// String writes the bounds of the box, by species.
func (u Unresolved) String() string {
	parts := make([]string, len(u.Box))
	for i, a := range u.Box {
		parts[i] = fmt.Sprintf("%s %.9g to %.9g", u.Species[i], a.Lo, a.Hi)
	}
	return strings.Join(parts, ", ")
}
