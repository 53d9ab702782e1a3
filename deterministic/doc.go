// Package deterministic surveys the rate equations of a network: its resting
// states and saddles, their stability, the linear noise about them, the cores that
// the exact engines count flips by, and the basin of any point.
//
// Survey gives a Map. The rate equations are dxᵢ/dt = Σ_r AmountChange(r, i)·Flux(r, x)
// in amounts, on the stoichiometric compatibility class of the start: the amounts
// that have the conserved totals of StartCounts. Derivatives are exact.
package deterministic
