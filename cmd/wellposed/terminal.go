package main

import (
	"io"
	"os"
	"runtime"

	"golang.org/x/term"
)

// terminal returns the descriptor of a stream that is a terminal.
func terminal(w io.Writer) (fd int, ok bool) {
	f, isFile := w.(*os.File)
	if !isFile || !term.IsTerminal(int(f.Fd())) {
		return 0, false
	}
	return int(f.Fd()), true
}

// colourTerminal reports whether a terminal understands colour escapes. Only
// newer Windows consoles do; they set WT_SESSION.
func colourTerminal(int) bool {
	return runtime.GOOS != "windows" || os.Getenv("WT_SESSION") != ""
}
