package action

// A Path is the likeliest way from a state over a saddle, where flips are rare.
type Path struct {
	From, Saddle, To string
	// S is its action for each unit of copies (Ω): the mean time to go that way is
	// C(Ω)·exp(Ω S). Error estimates its error: what S changed by when the elements
	// were doubled last. S falls as they are doubled.
	S, Error float64
	// Elements is the number of elements it was found in.
	Elements int
	// Points are amounts, Momenta the θ that belong to them, values by species in
	// the order of Network.Species; Position is the share of the path's length gone,
	// from 0 to 1 (in the coordinates that it was found in, which weigh each species by
	// its range), Action the part of S spent so far.
	Points, Momenta  [][]float64
	Position, Action []float64
	// Summit is the index in Points of the saddle: what comes after it is the flow
	// down to To, which costs nothing.
	Summit int
	// Length is the whole length in the coordinates of Position.
	Length float64
	// Extinct tells that the saddle is one at which species are gone, and that the
	// path ends there with momenta that are not 0.
	Extinct bool
	// Gradient is ∂S/∂k for each constant, at fixed copies: −∫ ∂H/∂k dt along the
	// path, since S is least (envelope theorem) and its ends cost nothing to move.
	Gradient []float64
}
