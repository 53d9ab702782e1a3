//go:build !race

package batch_test

// underRace tells that the race detector is on.
const underRace = false
