// Package kramers estimates how soon noise carries a network over the saddle near a
// fold, where it loses a resting state, without a run and without a lattice.
//
// A network in many dimensions has no potential in general, so that there is no
// barrier to read off. Near a fold there is: the state and its saddle part along one slow
// direction, the null vector of the Jacobian at the fold, while all others relax
// at once. Along it the network is the saddle-node dx = (μ + x²)dt + √(2D)dW, whose
// drive μ is proportional to the knob's distance to the fold and whose noise D is that
// of the reactions, seen through the left null vector.
//
// The estimate is that of weak noise close to the fold. Its exponent grows as distance^{3/2}
// (Dykman and Krivoglaz, Physica A 104 (1980) 480, from memory).
package kramers
