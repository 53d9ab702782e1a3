//go:build !race

package hold_test

// underRace tells that the race detector is on.
const underRace = false
