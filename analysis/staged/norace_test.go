//go:build !race

package staged_test

// underRace tells that the race detector is on.
const underRace = false
