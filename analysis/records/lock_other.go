//go:build !unix

package records

import "os"

// lock does nothing: there, a file that is open cannot be removed by another process.
func lock(*os.File) {}

// locked is not known.
func locked(*os.File) bool { return false }
