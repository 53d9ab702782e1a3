// Package hold does the main job: how long each resting state of a design
// holds, with an interval, by the route asked for.
//
// A dwell of a state starts at the lattice point of the state's core nearest to
// its resting point, where a set leaves the cell, and ends at the first entry
// into another state's core. Exact runs, the lattice and closed forms share that
// start and that target, so that they can be held against each other.
package hold
