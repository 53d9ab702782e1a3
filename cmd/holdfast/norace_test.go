//go:build !race

package main

// underRace tells that the race detector is on.
const underRace = false
