//go:build unix

package compile

import (
	"os/exec"
	"syscall"
)

// alone puts a tool and what it starts into a process group of their own, so
// that an interrupt meant for the kernel does not reach them and a cancelled
// build leaves none behind.
func alone(cmd *exec.Cmd) {
	cmd.SysProcAttr = &syscall.SysProcAttr{Setpgid: true}
	cmd.Cancel = func() error { return syscall.Kill(-cmd.Process.Pid, syscall.SIGKILL) }
}
