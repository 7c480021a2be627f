package runner

import (
	"log"
	"os"
	"sync"

	"golang.org/x/sys/unix"

	"levelsum/kernel/engine"
)

// A cell may close its standard output, or the descriptor below it. The pipes
// themselves are kept open by copies that cells do not see, and what is closed
// is opened again before the next cell.

// firstKept is above the numbers of the descriptors that a cell opens.
const firstKept = 100

var kept = sync.OnceValue(func() (k struct {
	raw            [2]int // of what the process itself writes
	out, err, null int
	first          [3]*os.File // while they are held, nothing closes their descriptors
}) {
	keep := func(fd int) int {
		n, err := unix.FcntlInt(uintptr(fd), unix.F_DUPFD_CLOEXEC, firstKept)
		if err != nil {
			return fd // too few descriptors are allowed: not kept, that is all
		}
		return n
	}
	k.first = [3]*os.File{os.Stdin, os.Stdout, os.Stderr}
	k.raw = [2]int{keep(1), keep(2)}
	k.out, k.err = keep(engine.FdStdout), keep(engine.FdStderr)
	k.null, _ = unix.Open(os.DevNull, unix.O_WRONLY|unix.O_CLOEXEC, 0)
	return k
})

// standardFiles sees to it that what cells print arrives.
func standardFiles(first bool) {
	k := kept()
	for i, raw := range k.raw {
		if isClosed(i + 1) {
			_ = unix.Dup3(raw, i+1, 0)
		}
	}
	if first || gone(os.Stdout) {
		os.Stdout = again(k.out, engine.FdStdout, "stdout")
	}
	if first || gone(os.Stderr) {
		os.Stderr = again(k.err, engine.FdStderr, "stderr")
	}
	if first {
		log.SetOutput(standardErr{})
	}
	if first || gone(os.Stdin) {
		// It says why it cannot be read; see package guard for what can.
		os.Stdin = again(k.null, 0, "standard input as a file (a cell reads os.Stdin itself, or calls fmt.Scan)")
	}
}

// again returns a file for a descriptor that is kept: of the usual number, or
// of another if that is taken by now.
func again(kept, usual int, name string) *os.File {
	if usual > 0 && !isClosed(usual) {
		if same(kept, usual) {
			return os.NewFile(uintptr(usual), name)
		}
		usual = -1
	}
	fd, err := kept, error(nil)
	if usual > 0 {
		fd, err = usual, unix.Dup3(kept, usual, unix.O_CLOEXEC)
	} else {
		fd, err = unix.FcntlInt(uintptr(kept), unix.F_DUPFD_CLOEXEC, firstKept)
	}
	if err != nil {
		fd = kept
	}
	return os.NewFile(uintptr(fd), name)
}

func isClosed(fd int) bool {
	_, err := unix.FcntlInt(uintptr(fd), unix.F_GETFD, 0)
	return err == unix.EBADF
}

// gone tells that a file, or the descriptor below it, has been closed.
func gone(f *os.File) bool {
	if f == nil {
		return true
	}
	_, err := f.Stat()
	return err != nil
}

// same tells whether two descriptors are of one pipe.
func same(a, b int) bool {
	var x, y unix.Stat_t
	return unix.Fstat(a, &x) == nil && unix.Fstat(b, &y) == nil && x.Ino == y.Ino && x.Dev == y.Dev
}

// standardOut and standardErr write to what is in place at the time: package
// log and the interpreter keep what they are given at their start.
type (
	standardOut struct{}
	standardErr struct{}
)

func (standardOut) Write(b []byte) (int, error) { return os.Stdout.Write(b) }
func (standardErr) Write(b []byte) (int, error) { return os.Stderr.Write(b) }
