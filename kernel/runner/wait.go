package runner

import (
	"fmt"
	"regexp"
	"runtime"
	"strings"
	"time"

	"levelsum/kernel/cell"
	"levelsum/kernel/engine"
)

// waitHint is how long a cell may wait on channels or locks before the reader
// is told what it waits for.
const waitHint = 2 * time.Second

var waiting = regexp.MustCompile(`^goroutine \d+ \[(chan receive|chan send|select|semacquire|sync\.[A-Za-z.]+|select \(no cases\)|chan receive \(nil chan\)|chan send \(nil chan\))`)

// watchWait tells the reader once if the running cell waits on channels or
// locks and nothing moves. The cell is not ended.
func (r *Runner) watchWait() chan struct{} {
	stop := make(chan struct{})
	go func() {
		last := ""
		t := time.NewTicker(waitHint)
		defer t.Stop()
		for {
			select {
			case <-stop:
				return
			case <-t.C:
			}
			hint, blocked := blockedHint()
			if blocked && hint == last {
				_ = r.w.Send(engine.Event{Op: "hint", Text: hint})
				return
			}
			last = ""
			if blocked {
				last = hint
				t.Reset(10 * time.Millisecond) // a second look tells a wait from work
			} else {
				t.Reset(waitHint)
			}
		}
	}()
	return stop
}

// blockedHint describes the goroutines of cells if all of them wait.
func blockedHint() (string, bool) {
	buf := make([]byte, 1<<20)
	return hintOf(string(buf[:runtime.Stack(buf, true)]))
}

// hintOf is blockedHint from the stacks of all goroutines. Who waits for the
// reader, to answer or to take what is shown, is not blocked.
func hintOf(stacks string) (string, bool) {
	var lines []string
	for g := range strings.SplitSeq(stacks, "\n\n") {
		main := strings.Contains(g, "runner.(*Runner).goroutine.func")
		if !main && !strings.Contains(g, "guard.Left") && !strings.Contains(g, "\tIn[") && !strings.Contains(g, "/In[") {
			continue
		}
		m := waiting.FindStringSubmatch(g)
		if m == nil || strings.Contains(g, "guard.Sleep") || strings.Contains(g, "sink.Ask") || strings.Contains(g, "(*Runner).send") {
			return "", false
		}
		where := "a library call"
		for l := range strings.Lines(g) {
			l = strings.TrimSpace(l)
			file, rest, ok := strings.Cut(l, "]:")
			if i := strings.LastIndex(file, "In["); ok && i >= 0 {
				num, _, _ := strings.Cut(rest, " ")
				where = cellFile(file[i:]+"]") + ":" + num
				break
			}
		}
		what := "the cell"
		if !main {
			what = "a goroutine"
		}
		lines = append(lines, fmt.Sprintf("    %s waits at %s (%s)", what, where, m[1]))
	}
	if len(lines) == 0 {
		return "", false
	}
	return cell.Unmark("the cell waits and nothing moves:\n" + strings.Join(lines, "\n") + "\n    interrupt it if this is not meant\n"), true
}
