// Package race tells tests whether the race detector is on: calibrations of many million
// events, which it slows tenfold, are then left to the plain run of the same tests.
package race
