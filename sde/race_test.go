//go:build race

package sde

// UnderRace tells that the race detector is on, which slows steps many times: tests of
// laws, which do nothing at once that the others do not, are then left to the plain run.
const UnderRace = true
