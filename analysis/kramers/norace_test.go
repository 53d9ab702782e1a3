//go:build !race

package kramers_test

// underRace tells that the race detector is on.
const underRace = false
