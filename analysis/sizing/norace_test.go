//go:build !race

package sizing_test

// underRace tells that the race detector is on.
const underRace = false
