//go:build !race

package ssa

// UnderRace tells that the race detector is on.
const UnderRace = false
