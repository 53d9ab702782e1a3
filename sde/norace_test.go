//go:build !race

package sde

// UnderRace tells that the race detector is on.
const UnderRace = false
