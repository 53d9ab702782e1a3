//go:build race

package ssa

// UnderRace tells that the race detector is on, which slows events tenfold: tests of
// laws, which do nothing at once that the others do not, are then left to the plain run.
const UnderRace = true
