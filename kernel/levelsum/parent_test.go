package main

import (
	"os"
	"os/exec"
	"strconv"
	"testing"
)

func TestWatchParent(t *testing.T) {
	// A process that ends when its input does.
	parent := exec.Command("cat")
	in, err := parent.StdinPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := parent.Start(); err != nil {
		t.Fatal(err)
	}
	gone := make(chan struct{})
	go watchParent(t.Context(), parent.Process.Pid, func() { close(gone) })
	select {
	case <-gone:
		t.Error("gone while it runs")
	default:
	}
	in.Close()
	if err := parent.Wait(); err != nil {
		t.Fatal(err)
	}
	<-gone
}

func TestParentPID(t *testing.T) {
	for value, want := range map[string]int{"": 0, "x": 0, "0": 0, "1": 0, "-5": 0, strconv.Itoa(os.Getpid()): os.Getpid()} {
		t.Setenv("JPY_PARENT_PID", value)
		if got := parentPID(); got != want {
			t.Errorf("parentPID() with %q = %d, want %d", value, got, want)
		}
	}
}
