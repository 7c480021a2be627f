//go:build unix

package engine

import (
	"os"
	"syscall"
)

// childAttributes puts the child in a process group of its own: an interrupt
// from the terminal is for the parent, and all that a cell starts can be ended
// with it.
func childAttributes() *syscall.SysProcAttr { return &syscall.SysProcAttr{Setpgid: true} }

// killGroup ends a child and what it has started.
func killGroup(p *os.Process) {
	_ = syscall.Kill(-p.Pid, syscall.SIGKILL) // it may be gone
	_ = p.Kill()
}
