package engine

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"os"
	"os/exec"
	"strings"
	"sync"
	"time"

	"golang.org/x/sys/unix"
)

// A child is one process that runs cells, and the goroutine that reads it.
type child struct {
	cmd    *exec.Cmd
	w      *Writer
	req    *os.File
	handle func(c *child, ev *Event, stream, text string)
	exited chan error    // gets what the process ended with
	ended  chan struct{} // closed when the process is gone and all is read

	text  [5]cleaner // used by the reading goroutine only
	strip *strings.Replacer

	mu      sync.Mutex // guards what follows
	waiting map[int]chan *Event
	reason  string // why it was ended, if we did it
	crash   crashText
	status  string
}

// startChild starts the process and waits until it says that it is ready.
func startChild(ctx context.Context, o Options, handle func(*child, *Event, string, string)) (*child, error) {
	var toClose []*os.File
	defer func() {
		for _, f := range toClose {
			f.Close()
		}
	}()
	pipe := func() (r, w *os.File, err error) {
		r, w, err = os.Pipe()
		return
	}
	reqR, reqW, err := pipe()
	if err != nil {
		return nil, fmt.Errorf("engine: %w", err)
	}
	var reads, writes [5]*os.File // raw stdout, raw stderr, events, stdout, stderr
	for i := range reads {
		if reads[i], writes[i], err = pipe(); err != nil {
			return nil, fmt.Errorf("engine: %w", err)
		}
	}
	toClose = append(toClose, reqR)
	toClose = append(toClose, writes[:]...)
	cmd := exec.Command(o.Command[0], o.Command[1:]...)
	cmd.Dir = o.Dir
	cmd.Env = append(os.Environ(), o.Env...)
	cmd.Stdout, cmd.Stderr = writes[0], writes[1]
	cmd.ExtraFiles = []*os.File{reqR, writes[2], writes[3], writes[4]}
	cmd.SysProcAttr = childAttributes()
	if err := cmd.Start(); err != nil {
		reqW.Close()
		for _, f := range reads {
			f.Close()
		}
		return nil, fmt.Errorf("engine: the process that runs cells does not start: %w", err)
	}
	// Now, and not when this returns: while an end that is written to is open
	// here, the death of a child that never gets ready is not seen.
	for _, f := range toClose {
		f.Close()
	}
	toClose = nil
	c := &child{cmd: cmd, w: NewWriter(reqW), req: reqW, handle: handle, exited: make(chan error, 1), ended: make(chan struct{}), waiting: map[int]chan *Event{}}
	ready := make(chan *Event, 1)
	c.waiting[0] = ready
	go c.wait()
	go c.read(reads)
	if o.MemoryLimit > 0 {
		go c.watchMemory(o.MemoryLimit)
	}
	select {
	case ev := <-ready:
		if ev == nil {
			return nil, fmt.Errorf("engine: the process that runs cells ended at its start: %s", c.why())
		}
		return c, nil
	case <-ctx.Done():
		c.kill("not ready in time")
		<-c.ended
		return nil, ctx.Err()
	}
}

// ask sends a request whose answer arrives in the channel; nil there means
// that the child is gone.
func (c *child) ask(r Request, id int) (<-chan *Event, error) {
	ch := make(chan *Event, 1)
	c.mu.Lock()
	if c.waiting == nil {
		c.mu.Unlock()
		return nil, errors.New("engine: the process that runs cells is gone")
	}
	c.waiting[id] = ch
	c.mu.Unlock()
	if err := c.w.Send(r); err != nil {
		c.kill("")
	}
	return ch, nil
}

func (c *child) gone() bool {
	select {
	case <-c.ended:
		return true
	default:
		return false
	}
}

// kill ends the process at once.
func (c *child) kill(reason string) {
	c.mu.Lock()
	if c.reason == "" {
		c.reason = reason
	}
	c.mu.Unlock()
	killGroup(c.cmd.Process)
}

// end ends the process: it is asked first.
func (c *child) end() {
	c.mu.Lock()
	if c.reason == "" {
		c.reason = "closed"
	}
	c.mu.Unlock()
	c.req.Close()
	select {
	case <-c.ended:
	case <-time.After(300 * time.Millisecond):
		killGroup(c.cmd.Process)
		<-c.ended
	}
}

// why says in one line how the process ended.
func (c *child) why() string {
	<-c.ended
	c.mu.Lock()
	defer c.mu.Unlock()
	if c.reason != "" {
		return c.reason
	}
	if s := c.crash.meaning(); s != "" {
		return s
	}
	return "the process that runs cells ended: " + c.status
}

// wait waits for the process to end. What a cell has started and left behind
// is ended with it: it would keep the pipes open.
func (c *child) wait() {
	err := c.cmd.Wait()
	killGroup(c.cmd.Process)
	c.exited <- err
}

// The order of the descriptors that read polls.
const (
	rawOut = iota
	rawErr
	events
	stdout
	stderr
)

// read reads all pipes of the child until they are closed. One goroutine does
// it, so that the order in which a cell printed and showed is kept: at an event
// for which the child waits, everything printed before it is in the pipes.
func (c *child) read(files [5]*os.File) {
	fds := make([]unix.PollFd, len(files))
	for i, f := range files {
		fds[i] = unix.PollFd{Fd: int32(f.Fd()), Events: unix.POLLIN}
		_ = unix.SetNonblock(int(f.Fd()), true) // a pipe of ours
	}
	buf := make([]byte, 1<<16)
	var pending bytes.Buffer // events, up to the next newline
	quiet := false
	for {
		open := 0
		for i := range fds {
			fds[i].Revents = 0
			if fds[i].Fd >= 0 {
				open++
			}
		}
		if open == 0 {
			break
		}
		timeout := -1
		if c.crash.held() {
			timeout = 50
		}
		n, err := unix.Poll(fds, timeout)
		if err == unix.EINTR {
			continue
		}
		if err != nil {
			break
		}
		quiet = n == 0
		if quiet {
			c.release()
			continue
		}
		c.drain(fds, buf)
		if fds[events].Fd >= 0 && fds[events].Revents != 0 {
			n, err := unix.Read(int(fds[events].Fd), buf)
			switch {
			case n > 0:
				pending.Write(buf[:n])
				c.take(&pending, fds, buf)
			case err == unix.EAGAIN || err == unix.EINTR:
			default:
				fds[events].Fd = -1
			}
		}
	}
	for i, f := range files {
		f.Close()
		if rest := c.text[i].rest(); rest != "" && i != events {
			c.handle(c, nil, "stdout", rest)
		}
	}
	err := <-c.exited
	c.mu.Lock()
	c.status = "exit status 0"
	if err != nil {
		c.status = err.Error()
	}
	crashed := c.crash.meaning() != ""
	waiting := c.waiting
	c.waiting = nil
	c.mu.Unlock()
	if !crashed {
		c.release()
	}
	c.req.Close()
	close(c.ended)
	for _, ch := range waiting {
		close(ch)
	}
}

// drain passes on everything that is in the output pipes now.
func (c *child) drain(fds []unix.PollFd, buf []byte) {
	for _, i := range []int{stdout, stderr, rawOut, rawErr} {
		for fds[i].Fd >= 0 {
			n, err := unix.Read(int(fds[i].Fd), buf)
			if n > 0 {
				c.pass(i, buf[:n])
				continue
			}
			if err != unix.EAGAIN && err != unix.EINTR {
				fds[i].Fd = -1
			}
			if err != unix.EINTR {
				break
			}
		}
	}
}

// pass passes on bytes from one of the output pipes. What the process itself
// writes to its standard error is held back for a moment, since it may be the
// first line of a crash.
func (c *child) pass(i int, b []byte) {
	s := c.clean(c.text[i].whole(b))
	if s == "" {
		return
	}
	switch i {
	case stdout, rawOut:
		c.handle(c, nil, "stdout", s)
	case stderr:
		c.handle(c, nil, "stderr", s)
	case rawErr:
		c.mu.Lock()
		c.crash.add(s)
		c.mu.Unlock()
	}
}

// release passes on what was held back.
func (c *child) release() {
	c.mu.Lock()
	s := c.crash.take()
	c.mu.Unlock()
	if s != "" {
		c.handle(c, nil, "stderr", s)
	}
}

// take handles the whole events in pending.
func (c *child) take(pending *bytes.Buffer, fds []unix.PollFd, buf []byte) {
	for {
		i := bytes.IndexByte(pending.Bytes(), '\n')
		if i < 0 {
			return
		}
		line := pending.Next(i + 1)
		ev := new(Event)
		d := json.NewDecoder(bytes.NewReader(line))
		d.UseNumber()
		if err := d.Decode(ev); err != nil {
			c.kill("sent a message that cannot be read: " + err.Error())
			return
		}
		if ev.Sync {
			c.drain(fds, buf)
			c.release()
		}
		c.deliver(ev)
		if ev.Sync {
			_ = c.w.Send(Request{Op: "ack"})
		}
	}
}

// deliver hands an event to who waits for it, or to the engine.
func (c *child) deliver(ev *Event) {
	switch ev.Op {
	case "ready", "done", "reply":
		if ev.Op == "ready" {
			c.setMarkers(ev.Text)
		}
		c.mu.Lock()
		ch := c.waiting[ev.ID]
		delete(c.waiting, ev.ID)
		c.mu.Unlock()
		if ch != nil {
			ch <- ev
		}
	default:
		c.handle(c, ev, "", "")
	}
}

// crashText is what the process itself has written to its standard error.
type crashText struct{ text string }

func (t *crashText) add(s string) { t.text += s }
func (t *crashText) held() bool   { return t.text != "" && t.meaning() == "" }

func (t *crashText) take() string {
	s := t.text
	t.text = ""
	return s
}

// meaning reads the first lines of a crash of the Go runtime.
func (t *crashText) meaning() string {
	for line := range strings.Lines(t.text) {
		line = strings.TrimSpace(line)
		switch {
		case strings.HasPrefix(line, "runtime: goroutine stack exceeds"):
			return "endless recursion: the stack grew beyond its limit"
		case strings.HasPrefix(line, "fatal error: stack overflow"):
			return "endless recursion: the stack grew beyond its limit"
		case strings.HasPrefix(line, "fatal error: runtime: out of memory"), strings.HasPrefix(line, "fatal error: runtime: cannot allocate memory"):
			return "out of memory"
		case strings.HasPrefix(line, "panic: "):
			// A goroutine that a cell starts is guarded.
			return "panic in a goroutine that a library has started: " + strings.TrimPrefix(line, "panic: ")
		case strings.HasPrefix(line, "fatal error: "):
			return line
		case strings.HasPrefix(line, "SIG"), strings.HasPrefix(line, "unexpected fault address"):
			return line
		}
	}
	return ""
}
