//go:build unix

package records

import (
	"os"
	"syscall"
)

// lock marks the file as being written by a living process. Where the file system has
// no locks it does nothing.
func lock(f *os.File) {
	_ = syscall.Flock(int(f.Fd()), syscall.LOCK_EX|syscall.LOCK_NB)
}

// locked tells whether a living process is writing the file.
func locked(f *os.File) bool {
	return syscall.Flock(int(f.Fd()), syscall.LOCK_SH|syscall.LOCK_NB) == syscall.EWOULDBLOCK
}
