//go:build !race

package race

// Enabled tells that the race detector is on.
const Enabled = false
