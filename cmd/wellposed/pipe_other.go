//go:build !unix

package main

// brokenPipe reports that the reader of our output has gone, which is no fault.
func brokenPipe(error) bool { return false }
