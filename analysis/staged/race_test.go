//go:build race

package staged_test

// underRace tells that the race detector is on: calibrations of many million events,
// which it slows tenfold, are then left to the plain run of the same tests.
const underRace = true
