package main

import (
	"bytes"
	"fmt"
	"os"
	"strings"
	"testing"
)

// The line is replaced in place, cut to the terminal, and gone before other
// messages and at the end.
func TestProgressLine(t *testing.T) {
	var b bytes.Buffer
	l := &progressLine{w: &b, width: func() int { return 20 }}
	l.show("") // nothing to take away
	l.show("draws: 1 of 9")
	l.show("draws: 2 of 9, about 17 s left")
	fmt.Fprintln(l, "[1] ok")
	l.show("x")
	l.show("")
	l.show("")
	fmt.Fprintln(l, "[2] ok")
	want := clearLine + "  draws: 1 of 9" + clearLine + "  draws: 2 of 9, a…" + clearLine + "[1] ok\n" + clearLine + "  x" + clearLine + "[2] ok\n"
	if got := b.String(); got != want {
		t.Errorf("written\n%q, want\n%q", got, want)
	}
	for _, line := range strings.Split(b.String(), clearLine) {
		if n := len([]rune(line)); n > 19 {
			t.Errorf("%q is %d wide", line, n)
		}
	}
}

// Without a terminal there is no progress: a file would keep every line.
func TestProgressOnlyOnTerminals(t *testing.T) {
	f, err := os.Create(t.TempDir() + "/log")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	if w, show := withProgress(f); w != f || show != nil {
		t.Error("a file is taken for a terminal")
	}
	if _, show := withProgress(&bytes.Buffer{}); show != nil {
		t.Error("a buffer is taken for a terminal")
	}
}
