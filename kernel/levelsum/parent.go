package main

import (
	"context"
	"errors"
	"os"
	"strconv"
	"syscall"
	"time"
)

// parentPID is the process that the front end says has started this one; 0 if
// it says nothing.
func parentPID() int {
	pid, err := strconv.Atoi(os.Getenv("JPY_PARENT_PID"))
	if err != nil || pid <= 1 {
		return 0
	}
	return pid
}

// watchEvery is how often the parent is looked for.
const watchEvery = 500 * time.Millisecond

// watchParent looks now and then whether the process pid is there and calls
// gone when it is not: a killed front end cannot tell its kernels to leave.
func watchParent(ctx context.Context, pid int, gone func()) {
	// Under a wrapper pid is not our parent, and can only be asked for.
	child := os.Getppid() == pid
	t := time.NewTicker(watchEvery)
	defer t.Stop()
	for {
		select {
		case <-ctx.Done():
			return
		case <-t.C:
		}
		if child && os.Getppid() != pid || errors.Is(syscall.Kill(pid, 0), syscall.ESRCH) {
			gone()
			return
		}
	}
}
