//go:build !windows

package cli

import (
	"errors"
	"syscall"
)

// isBrokenPipe reports whether err says that nobody reads what is written any more.
func isBrokenPipe(err error) bool { return errors.Is(err, syscall.EPIPE) }
