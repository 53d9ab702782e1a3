//go:build unix

package batch

import (
	"errors"
	"os"
	"syscall"
)

// lock takes the file for this process, alone or with others of the shared kind; false
// where another process has it. Where the file system has no locks it does nothing.
func lock(f *os.File, shared bool) (bool, error) {
	how := syscall.LOCK_EX
	if shared {
		how = syscall.LOCK_SH
	}
	err := syscall.Flock(int(f.Fd()), how|syscall.LOCK_NB)
	switch {
	case errors.Is(err, syscall.EWOULDBLOCK):
		return false, nil
	case errors.Is(err, syscall.ENOSYS), errors.Is(err, errors.ErrUnsupported), errors.Is(err, syscall.ENOLCK):
		return true, nil
	}
	return err == nil, err
}
