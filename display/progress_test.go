package display

import (
	"strings"
	"testing"
	"testing/synctest"
	"time"
)

func TestProgress(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		r := record(t)
		p := NewProgress("draws\nhere", 1000)
		for range 500 {
			time.Sleep(10 * time.Millisecond) // of the bubble's clock
			p.Step(1)
		}
		// 5 s, nothing in the first of them, then five lines a second.
		if n := len(r.shown); n < 15 || n > 21 {
			t.Errorf("%d lines in 5 s", n)
		}
		last := r.shown[len(r.shown)-1]
		if !strings.HasPrefix(last, "draws here: ") || !strings.Contains(last, "of 1000 (") || !strings.HasSuffix(last, "about 5 s left") {
			t.Errorf("line %q", last)
		}
		if strings.HasSuffix(r.ids[0], "again") || !strings.HasSuffix(r.ids[1], "again") || r.ids[1] != r.ids[0]+" again" {
			t.Errorf("ids %v: the line is not replaced in place", r.ids[:2])
		}
		p.Done()
		p.Done()
		p.Step(1)
		if got := r.shown[len(r.shown)-1]; got != "" {
			t.Errorf("after the end the line is %q", got)
		}
		for _, v := range r.views {
			if !Transient(v) {
				t.Fatal("a line that would be stored")
			}
		}
		if Transient(Text("x")) {
			t.Error("a text is transient")
		}
	})
}

func TestProgressOfShortWork(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		r := record(t)
		p := NewProgress("short", 10)
		for range 10 {
			time.Sleep(50 * time.Millisecond)
			p.Step(1)
		}
		p.Done()
		if len(r.shown) != 0 {
			t.Errorf("shown %v", r.shown)
		}
	})
}
