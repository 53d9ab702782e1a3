// Package deterministic surveys the rate equations of a network: its resting
// states and saddles, their stability, the linear noise about them, the cores that
// the exact engines count flips by, and the basin of any point.
//
// Survey gives a Map. The rate equations are dxᵢ/dt = Σ_r AmountChange(r, i)·Flux(r, x)
// in amounts, on the stoichiometric compatibility class of the start: the amounts
// that have the conserved totals of StartCounts. Derivatives are exact.
//
// The box that is searched holds every resting state of the class. Its ends follow
// from the conserved totals, from bounds on each reaction's rate by interval
// arithmetic together with the balance of all rates at rest, and from what makes a
// species over what takes it away; Map.Basis says which. Only where none of these
// bounds a species is its end the reach of followed flows, and a warning says so.
//
// States are looked for inside the class and on each of its faces where absent
// species stay absent: by damped Newton steps from many starts, spread evenly in the
// amounts and in their logarithms, from flows followed to rest, along the slow
// directions of the states found, and between stable states; a class of one
// dimension is searched along its line by interval branch and prune instead. The
// indices of the states must add up. That is no proof that none is missing: package
// proof gives one.
package deterministic
