package branch

import "fmt"

// Kind is what a mark on a branch is: a point where something happens, or an end.
type Kind uint8

// The kinds of marks.
const (
	// Fold is where a branch turns back in the knob: two states meet and vanish.
	Fold Kind = iota
	// Hopf is where a complex pair of eigenvalues crosses to the other side: the
	// state begins, or ceases, to oscillate.
	Hopf
	// Pitchfork is where a branch of two states that mirror each other leaves
	// another branch, which goes on through.
	Pitchfork
	// Transcritical is where two branches cross and both go on.
	Transcritical
	// Crossing is where branches meet in a way that second derivatives do not tell.
	Crossing
	// Kink is where a law has no derivative: min, max or abs change over.
	Kink
	// RangeEnd is an end of the knob's range.
	RangeEnd
	// BoxEdge is where an amount reaches the edge of the box.
	BoxEdge
	// Emptied is where an amount reaches 0.
	Emptied
	// Closed is where a branch has come back to where it was started.
	Closed
	// Lost is where a branch could not be followed any further.
	Lost
)

// String names it in words.
func (k Kind) String() string {
	names := [...]string{
		"fold", "Hopf point", "pitchfork", "transcritical point", "crossing", "kink",
		"end of the range", "edge of the box", "amount reaches 0", "closed", "lost",
	}
	if int(k) < len(names) {
		return names[k]
	}
	return fmt.Sprintf("Kind(%d)", uint8(k))
}

// Ends tells whether a branch ends at a mark of this kind.
func (k Kind) Ends() bool { return k >= RangeEnd }

// A Mark is a special point of a branch. Slices by species are in the order of
// Network.Species, in amounts.
type Mark struct {
	Kind Kind
	// Index is the place of the mark's own point in Branch.Points.
	Index   int
	Knob    float64
	Amounts []float64
	// Null is the direction of the amounts in which the state gives way at a fold
	// or where branches meet: the Jacobian's null vector, its largest entry relative
	// to the amounts being positive and of the size of the amount. Left is the left
	// null vector on the compatibility class, 0 for the dependent species, with
	// Σ leftᵢ nullᵢ = 1. Nil for other kinds.
	Null, Left []float64
	// Turns tells that the branch turns back in the knob here.
	Turns bool
	// Opens is, for a fold, the side on which its two states exist: +1 above the
	// knob's value, −1 below.
	Opens int
	// RateCoefficient is, for a fold, the c of the slow rate c·√|knob − fold| of
	// both its states near it, 1/time over the root of the knob's unit.
	RateCoefficient float64
	// Bend is, for a fold, Σ leftᵢ·∂²(dxᵢ/dt)/∂xⱼ∂xₖ·nullⱼ·nullₖ: the flow along Null, z
	// nulls away from Amounts at the fold's knob, is Bend/2·z², 1/time.
	Bend float64
	// Frequency is, for a Hopf point, that of the oscillation, radians per unit of
	// time: the imaginary part of the crossing pair.
	Frequency float64
	// Species is the one that meets the edge or 0; Text says more of a kink or of
	// a branch lost: the reaction and its law. Empty for other kinds.
	Species, Text string
}
