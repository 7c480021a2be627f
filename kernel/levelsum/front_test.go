package main

import (
	"context"
	"encoding/json"
	"fmt"
	"io"
	"log"
	"maps"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"sync"
	"syscall"
	"testing"
	"time"

	"github.com/go-zeromq/zmq4"

	"levelsum/kernel/compile/kittest"
	"levelsum/kernel/wire"
)

// giveUp ends a test that waits for what does not come; none passes by it.
const giveUp = time.Minute

// A process is a real "levelsum serve" with its engine.
type process struct {
	t      *testing.T
	cmd    *exec.Cmd
	path   string // of the connection file
	temp   string // its TMPDIR
	ports  map[string]int
	stderr *strings.Builder
	ended  chan struct{}
}

// serveReal starts one with a connection file that is there already, or a new
// one if path is empty.
func serveReal(t *testing.T, host *kittest.Host, path string, env []string, args ...string) *process {
	t.Helper()
	p := &process{t: t, path: path, temp: t.TempDir(), stderr: &strings.Builder{}, ended: make(chan struct{})}
	if path == "" {
		p.path, p.ports = connectionFile(t)
	} else {
		b, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		var all map[string]any
		if err := json.Unmarshal(b, &all); err != nil {
			t.Fatal(err)
		}
		p.ports = map[string]int{}
		for k, v := range all {
			if n, ok := v.(float64); ok {
				p.ports[k] = int(n)
			}
		}
	}
	p.cmd = exec.Command(host.Exe, slices.Concat([]string{"serve"}, args, []string{p.path})...)
	p.cmd.Env = slices.Concat(host.Env(), []string{"TMPDIR=" + p.temp}, env)
	p.cmd.Stderr = p.stderr
	if err := p.cmd.Start(); err != nil {
		t.Fatal(err)
	}
	go func() {
		defer close(p.ended)
		p.cmd.Wait()
	}()
	t.Cleanup(func() {
		p.cmd.Process.Kill()
		<-p.ended
	})
	return p
}

// child is the process in which the cells run.
func (p *process) child() int {
	p.t.Helper()
	dirs, err := filepath.Glob("/proc/[0-9]*/stat")
	if err != nil {
		p.t.Fatal(err)
	}
	for _, d := range dirs {
		b, _ := os.ReadFile(d)
		_, rest, _ := strings.Cut(string(b), ") ")
		if f := strings.Fields(rest); len(f) > 1 && f[1] == strconv.Itoa(p.cmd.Process.Pid) && f[0] != "Z" {
			pid, _ := strconv.Atoi(strings.Split(d, "/")[2])
			return pid
		}
	}
	p.t.Fatal("the kernel has no child")
	return 0
}

// wantEnd waits for the end of the process and checks that nothing is left but,
// if another kernel follows, the journal.
func (p *process) wantEnd(child int, restart bool) {
	p.t.Helper()
	t0 := time.Now()
	select {
	case <-p.ended:
	case <-time.After(giveUp):
		p.t.Fatal("the kernel does not end")
	}
	p.t.Logf("ended after %v", time.Since(t0).Round(time.Millisecond))
	if code := p.cmd.ProcessState.ExitCode(); code != 0 {
		p.t.Errorf("exit status %d: %s", code, p.stderr)
	}
	if err := syscall.Kill(child, 0); err != syscall.ESRCH {
		p.t.Errorf("the engine is still there: %v", err)
	}
	if _, err := os.Stat(journalPath(p.path)); restart != (err == nil) {
		p.t.Errorf("the journal after an end with restart %v: %v", restart, err)
	}
	if left, err := os.ReadDir(p.temp); err != nil || len(left) > 0 {
		p.t.Errorf("temporary files are left: %v %v", left, err)
	}
}

// A front is a front end.
type front struct {
	t              *testing.T
	codec          *wire.Codec
	sender         *wire.Sender
	shell, control zmq4.Socket
	stdin          zmq4.Socket
	beats          zmq4.Socket

	mu      sync.Mutex // guards the fields below
	changed chan struct{}
	got     map[string]*answer // by the id of the request
}

// An answer is what came because of one request.
type answer struct {
	Reply   map[string]any // content of the reply
	Streams map[string]string
	Shown   []string // plain text of display_data and execute_result
	Error   string   // ename: evalue
	Trace   string
	Idle    bool
}

// connectFront waits until the kernel answers.
func (p *process) connectFront() *front {
	p.t.Helper()
	f := &front{t: p.t, codec: wire.NewCodec([]byte(testKey)), sender: wire.NewSender("tester"), changed: make(chan struct{}), got: map[string]*answer{}}
	id := zmq4.WithID(zmq4.SocketIdentity("front-" + f.sender.Session()))
	open := func(make func(context.Context, ...zmq4.Option) zmq4.Socket, name string) zmq4.Socket {
		z := make(context.Background(), id, zmq4.WithLogger(log.New(io.Discard, "", 0)), zmq4.WithDialerMaxRetries(200))
		p.t.Cleanup(func() { z.Close() })
		if err := z.Dial(fmt.Sprintf("tcp://127.0.0.1:%d", p.ports[name])); err != nil {
			p.t.Fatal(err)
		}
		return z
	}
	iopub := open(zmq4.NewSub, "iopub_port")
	if err := iopub.SetOption(zmq4.OptionSubscribe, ""); err != nil {
		p.t.Fatal(err)
	}
	f.shell, f.control, f.stdin = open(zmq4.NewDealer, "shell_port"), open(zmq4.NewDealer, "control_port"), open(zmq4.NewDealer, "stdin_port")
	f.beats = open(zmq4.NewReq, "hb_port")
	welcomed := make(chan struct{})
	var once sync.Once
	read := func(z zmq4.Socket) {
		for {
			raw, err := z.Recv()
			if err != nil {
				return
			}
			m, err := f.codec.Parse(raw.Frames)
			if err != nil {
				f.t.Errorf("message that cannot be read: %v", err)
				return
			}
			if m.Header.Type == "iopub_welcome" {
				once.Do(func() { close(welcomed) })
			}
			f.take(m)
		}
	}
	for _, z := range []zmq4.Socket{iopub, f.shell, f.control} {
		go read(z)
	}
	select {
	case <-welcomed:
	case <-time.After(giveUp):
		p.t.Fatal("no welcome")
	}
	return f
}

// take notes what m says.
func (f *front) take(m *wire.Message) {
	f.mu.Lock()
	defer f.mu.Unlock()
	id := m.ParentID()
	a := f.got[id]
	if a == nil {
		a = &answer{Streams: map[string]string{}}
		f.got[id] = a
	}
	var c map[string]any
	_ = json.Unmarshal(m.Content, &c)
	text := func(key string) string { s, _ := c[key].(string); return s }
	switch m.Header.Type {
	case "stream":
		a.Streams[text("name")] += text("text")
	case "display_data", "execute_result":
		data, _ := c["data"].(map[string]any)
		a.Shown = append(a.Shown, fmt.Sprint(data["text/plain"]))
	case "error":
		a.Error = text("ename") + ": " + text("evalue")
		a.Trace = fmt.Sprint(c["traceback"])
	case "status":
		a.Idle = a.Idle || text("execution_state") == "idle"
	default:
		if strings.HasSuffix(m.Header.Type, "_reply") && a.Reply == nil {
			a.Reply = c
		}
	}
	close(f.changed)
	f.changed = make(chan struct{})
}

// until waits until ok says that a request has been answered far enough.
func (f *front) until(id, what string, ok func(answer) bool) answer {
	f.t.Helper()
	late := time.After(giveUp)
	for {
		f.mu.Lock()
		var a answer
		if p := f.got[id]; p != nil {
			a = *p
			a.Streams = maps.Clone(p.Streams)
		}
		changed := f.changed
		f.mu.Unlock()
		if ok(a) {
			return a
		}
		select {
		case <-changed:
		case <-late:
			f.t.Fatalf("waited in vain for %s: %+v", what, a)
		}
	}
}

// send sends a request and returns its id.
func (f *front) send(z zmq4.Socket, kind string, content map[string]any) string {
	f.t.Helper()
	if content == nil {
		content = map[string]any{}
	}
	m := wire.New(f.sender.Header(kind), nil, content)
	if err := z.SendMulti(zmq4.NewMsgFrom(f.codec.Format(m)...)); err != nil {
		f.t.Fatal(err)
	}
	return m.Header.ID
}

// post sends a cell.
func (f *front) post(src string) string {
	f.t.Helper()
	return f.send(f.shell, "execute_request", map[string]any{"code": src, "allow_stdin": true})
}

// end waits for the end of a cell.
func (f *front) end(id string) answer {
	f.t.Helper()
	return f.until(id, "the end of a cell", func(a answer) bool { return a.Idle && a.Reply != nil })
}

func (f *front) run(src string) answer { f.t.Helper(); return f.end(f.post(src)) }

// value runs an expression that has to succeed.
func (f *front) value(src string) string {
	f.t.Helper()
	a := f.run(src)
	if a.Error != "" {
		f.t.Errorf("%s: %s %s", src, a.Error, a.Trace)
	}
	return strings.Join(a.Shown, " ")
}

// ask sends a request to control and waits for the answer.
func (f *front) ask(kind string, content map[string]any) answer {
	f.t.Helper()
	id := f.send(f.control, kind, content)
	return f.until(id, kind, func(a answer) bool { return a.Reply != nil })
}

// beat checks the heartbeat.
func (f *front) beat() {
	f.t.Helper()
	if err := f.beats.Send(zmq4.NewMsgString("ping")); err != nil {
		f.t.Fatal(err)
	}
	if m, err := f.beats.Recv(); err != nil || string(m.Bytes()) != "ping" {
		f.t.Errorf("heartbeat: %q, %v", m.Bytes(), err)
	}
}

// in is f for a subtest.
func (f *front) in(t *testing.T) *front {
	f.t = t
	return f
}
