//go:build !race

package levers

// underRace tells that the race detector is on.
const underRace = false
