//go:build unix

package main

import (
	"errors"
	"syscall"
)

// brokenPipe reports that the reader of our output has gone, which is no fault.
func brokenPipe(err error) bool { return errors.Is(err, syscall.EPIPE) }
