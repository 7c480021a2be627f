//go:build unix

package compile

import (
	"os"
	"path/filepath"
	"syscall"
)

const inUse = "in-use"

// hold marks a kit as used until this process ends: the descriptor is never
// closed. A kit in a folder that cannot be written to cannot be marked, and
// need not be, since nobody here can remove it either.
func hold(dir string) {
	fd, err := syscall.Open(filepath.Join(dir, inUse), syscall.O_CREAT|syscall.O_RDONLY|syscall.O_CLOEXEC, 0o666)
	if err != nil {
		return
	}
	if err := syscall.Flock(fd, syscall.LOCK_SH); err != nil {
		syscall.Close(fd)
	}
}

// held says whether a running process uses a kit.
func held(dir string) bool {
	f, err := os.Open(filepath.Join(dir, inUse))
	if err != nil {
		return false
	}
	defer f.Close()
	return syscall.Flock(int(f.Fd()), syscall.LOCK_EX|syscall.LOCK_NB) == syscall.EWOULDBLOCK
}
