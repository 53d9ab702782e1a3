// Package branch follows resting states as a constant, the copies, a conserved
// total or a product of constants is turned: through folds, to Hopf points, to
// crossings of branches and to the branch's ends. From the branches it gives, for
// each stable state, the window of the knob in which the state exists; with two
// knobs, the curve of folds with its cusps.
//
// Branches are followed by pseudo-arclength continuation (Keller, in: Rabinowitz
// (ed.), Applications of Bifurcation Theory, Academic Press 1977, p. 359) of the
// rate equations on the compatibility class, with exact derivatives. Species and
// knobs of very different size are measured in units of their own amounts.
package branch
