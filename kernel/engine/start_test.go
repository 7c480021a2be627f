package engine

import (
	"os/exec"
	"strings"
	"testing"
)

// TestStartFails: a process that ends before it is ready is an error that says
// so, and not waited for without end.
func TestStartFails(t *testing.T) {
	sh, err := exec.LookPath("sh")
	if err != nil {
		t.Fatal(err)
	}
	_, err = Start(t.Context(), Options{Command: []string{sh, "-c", "echo no kit >&2; exit 3"}})
	if err == nil || !strings.Contains(err.Error(), "ended at its start") {
		t.Errorf("Start = %v", err)
	}
}
