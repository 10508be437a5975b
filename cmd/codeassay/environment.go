package main

import (
	"io"
	"os"
	"strconv"

	"golang.org/x/term"
)

// environment is where results and messages go, and what can be shown there.
type environment struct {
	stdout, stderr io.Writer
	width          int  // columns of stdout
	colour         bool // on stdout
	live           bool // stderr is a terminal, which progress may be drawn on
}

// plainWidth is the width of text that goes to no terminal.
const plainWidth = 80

func newEnvironment(stdout, stderr io.Writer) *environment {
	e := &environment{stdout: stdout, stderr: stderr, width: plainWidth, live: isTerminal(stderr)}
	if isTerminal(stdout) {
		e.colour = os.Getenv("NO_COLOR") == "" && os.Getenv("TERM") != "dumb"
		if w, _, err := term.GetSize(int(stdout.(*os.File).Fd())); err == nil && w > 0 {
			e.width = w
		}
	}
	if w, err := strconv.Atoi(os.Getenv("COLUMNS")); err == nil && w > 0 {
		e.width = w
	}
	e.width = min(max(e.width, 40), 200)
	return e
}

func isTerminal(w io.Writer) bool {
	f, ok := w.(*os.File)
	return ok && term.IsTerminal(int(f.Fd()))
}
