package main

import (
	"io"
	"os"
	"sync"

	"golang.org/x/sys/unix"
)

// A progressLine is a terminal that keeps one line for what a running cell says
// of its progress: the line is replaced in place, and gone before anything else
// is written.
type progressLine struct {
	w     io.Writer
	width func() int

	mu    sync.Mutex // guards what follows
	shown bool
}

// withProgress returns where messages go, and a function that shows progress;
// nil if w is no terminal, where lines cannot be replaced.
func withProgress(w io.Writer) (io.Writer, func(text string)) {
	f, ok := w.(*os.File)
	if !ok {
		return w, nil
	}
	if _, err := unix.IoctlGetTermios(int(f.Fd()), unix.TCGETS); err != nil {
		return w, nil
	}
	l := &progressLine{w: w, width: func() int {
		size, err := unix.IoctlGetWinsize(int(f.Fd()), unix.TIOCGWINSZ)
		if err != nil || size.Col == 0 {
			return 80
		}
		return int(size.Col)
	}}
	return l, l.show
}

// clearLine goes to the beginning of the line and empties it (ECMA-48).
const clearLine = "\r\x1b[K"

// show replaces the line, cut to the width of the terminal; an empty text
// takes it away.
func (l *progressLine) show(text string) {
	l.mu.Lock()
	defer l.mu.Unlock()
	if text == "" && !l.shown {
		return
	}
	line := clearLine
	if text != "" {
		line += clipped("  "+text, l.width()-1)
	}
	if _, err := io.WriteString(l.w, line); err == nil {
		l.shown = text != ""
	}
}

func clipped(s string, n int) string {
	if r := []rune(s); len(r) > n && n > 0 {
		return string(r[:n-1]) + "…"
	}
	return s
}

// Write writes other messages, where the line was.
func (l *progressLine) Write(p []byte) (int, error) {
	l.mu.Lock()
	defer l.mu.Unlock()
	if l.shown {
		l.shown = false
		if _, err := io.WriteString(l.w, clearLine); err != nil {
			return 0, err
		}
	}
	return l.w.Write(p)
}
