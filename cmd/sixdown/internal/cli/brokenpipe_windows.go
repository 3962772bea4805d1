package cli

import (
	"errors"
	"syscall"
)

// What Windows returns when the reader of a pipe is gone (winerror.h).
const (
	errorBrokenPipe = syscall.Errno(109) // ERROR_BROKEN_PIPE
	errorNoData     = syscall.Errno(232) // ERROR_NO_DATA: the pipe is being closed
)

// isBrokenPipe reports whether err says that nobody reads what is written any more.
func isBrokenPipe(err error) bool {
	return errors.Is(err, errorBrokenPipe) || errors.Is(err, errorNoData)
}
