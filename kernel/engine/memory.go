package engine

import (
	"bufio"
	"fmt"
	"os"
	"strconv"
	"strings"
	"time"
)

// watchMemory ends the child when its resident memory less file pages passes
// the limit. Address space is useless as a measure, and a limit by the Go
// runtime is soft.
func (c *child) watchMemory(limit int64) {
	tick := time.NewTicker(100 * time.Millisecond)
	defer tick.Stop()
	for {
		select {
		case <-c.ended:
			return
		case <-tick.C:
			if rss := residentAnonymous(c.cmd.Process.Pid); rss > limit {
				c.kill(fmt.Sprintf("used more than %s of memory, the limit", bytesText(limit)))
				return
			}
		}
	}
}

// residentAnonymous is the resident memory of a process less file pages, 0
// where the system does not say.
func residentAnonymous(pid int) int64 {
	f, err := os.Open(fmt.Sprintf("/proc/%d/status", pid))
	if err != nil {
		return 0
	}
	defer f.Close()
	s := bufio.NewScanner(f)
	for s.Scan() {
		if v, ok := strings.CutPrefix(s.Text(), "RssAnon:"); ok {
			return kilobytes(v)
		}
	}
	return 0
}

// memoryAvailable is the memory of the machine or of its control group, the
// smaller; 0 where the system does not say.
func memoryAvailable() int64 {
	var total int64
	if f, err := os.Open("/proc/meminfo"); err == nil {
		defer f.Close()
		s := bufio.NewScanner(f)
		for s.Scan() {
			if v, ok := strings.CutPrefix(s.Text(), "MemTotal:"); ok {
				total = kilobytes(v)
				break
			}
		}
	}
	for _, name := range []string{"/sys/fs/cgroup/memory.max", "/sys/fs/cgroup/memory/memory.limit_in_bytes"} {
		b, err := os.ReadFile(name)
		if err != nil {
			continue
		}
		if n, err := strconv.ParseInt(strings.TrimSpace(string(b)), 10, 64); err == nil && n > 0 && (total == 0 || n < total) {
			total = n
		}
	}
	return total
}

func kilobytes(s string) int64 {
	n, err := strconv.ParseInt(strings.TrimSpace(strings.TrimSuffix(strings.TrimSpace(s), "kB")), 10, 64)
	if err != nil {
		return 0
	}
	return n << 10
}

func bytesText(n int64) string {
	if n >= 1<<30 {
		return fmt.Sprintf("%.1f GiB", float64(n)/(1<<30))
	}
	return fmt.Sprintf("%d MiB", n>>20)
}
