// Package action finds how rarely a design flips when its copy numbers are large:
// the exponent S of the mean dwell time τ ≈ C·exp(Ω S), and the path that the
// flip then takes.
//
// A path of the jump process costs ∫θ·dx, where the momenta θ keep
// H(x,θ) = Σ_r a_r(x)(exp(ν_r·θ) − 1) = 0 and H_θ points along the path; x are
// amounts, a_r laws in amounts per time (Freidlin and Wentzell, Random
// Perturbations of Dynamical Systems, 2nd ed., Springer 1998, ch. 4 and 5; Dykman,
// Mori, Ross, Hunt, J. Chem. Phys. 100 (1994) 5735). S is the least cost of a path
// from the resting state to the saddle; from there the flow goes down for nothing.
// A geometric burst of mean m along species j multiplies the exponential by its
// generating function 1/(1+m−m·exp θ_j).
//
// Solve finds one such path, Survey those of all ordered pairs of states.
// What is minimised is the geometric action of Heymann and Vanden-Eijnden
// (Comm. Pure Appl. Math. 61 (2008) 1052), which does not depend on how fast a path
// is run through; see Solve for how.
package action
