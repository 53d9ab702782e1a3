// Package levers tells which constant of a design moves its hold times most: for each
// constant, and for copies, the per cent change of each hold time for one per cent
// change of it, and how far each can be turned before a state is lost in a fold.
//
// The lattice gives the slopes of the master equation's own mean dwell times, all
// constants from one elimination (lattice.Sensitivity). Where no lattice serves, two
// hold jobs a constant, a step above and below today's value, give a difference with an
// interval. All are taken between today's cores, held in molecules, so that what
// answers is the flip and not its definition.
package levers
