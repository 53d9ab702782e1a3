// Package ssa makes exact stochastic runs of a reaction network: every run is
// drawn from the law of the chemical master equation, without any step size
// (Gillespie, J. Phys. Chem. 81 (1977) 2340).
//
// A Plan goes in and a Result comes out. A run's outcome depends on the plan's
// network, start, cores, limits, method, seed, point, group and the replicate;
// not on threads, lanes, or how runs are cut into shards.
package ssa
