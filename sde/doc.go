// Package sde makes approximate stochastic runs: Euler–Maruyama paths of the
// chemical Langevin equation of a reaction network (Gillespie, J. Chem. Phys. 113
// (2000) 297), or of a System of one's own.
//
// A Plan goes in and a Result comes out. A run's outcome depends on the plan's
// system, start, cores, step, limits, seed, point, group and the replicate; not on
// threads, lanes, or how runs are cut into shards.
//
// Two errors are to be told apart. That of the step vanishes with the step: Halve
// shows it next to the sampling error. That of the model does not: the equation
// replaces the firings of a reaction, which are Poisson, by normal numbers of the
// same mean and variance. It needs many firings of each reaction in a time in which
// no rate changes much, so it fails where few molecules matter, and it has rare
// flips at the wrong exponent: the barrier of a one-species chain with birth rate b
// and death rate d is ∫2(d−b)/(d+b)dx instead of ∫ln(d/b)dx, and the two meet only
// near a fold.
package sde
