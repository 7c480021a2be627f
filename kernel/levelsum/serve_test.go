package main

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"log"
	"net"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"syscall"
	"testing"

	"github.com/go-zeromq/zmq4"

	"levelsum/kernel/engine"
	"levelsum/kernel/session"
	"levelsum/kernel/wire"
)

// still is an engine whose cells run until they are interrupted.
type still struct {
	options     engine.Options
	running     chan struct{} // gets a value when a cell starts
	interrupted chan struct{}
	once        sync.Once
}

func newStill() *still {
	return &still{running: make(chan struct{}, 1), interrupted: make(chan struct{})}
}

func (e *still) start(_ context.Context, o engine.Options) (session.Engine, error) {
	e.options = o
	return e, nil
}

func (e *still) Run(context.Context, engine.Cell, engine.Output) engine.Outcome {
	e.running <- struct{}{}
	<-e.interrupted
	return engine.Outcome{Fault: &engine.Fault{Name: "interrupted", Message: "interrupted"}}
}
func (e *still) Announce(engine.Cell) {}
func (e *still) Interrupt()           { e.once.Do(func() { close(e.interrupted) }) }
func (e *still) Complete(context.Context, string, int) (engine.Completion, error) {
	return engine.Completion{}, nil
}
func (e *still) Inspect(context.Context, string, int, int) (map[string]any, bool, error) {
	return nil, false, nil
}
func (e *still) Close() error { e.Interrupt(); return nil }

const testKey = "0123"

// connectionFile writes one with free ports.
func connectionFile(t *testing.T) (path string, ports map[string]int) {
	t.Helper()
	ports = map[string]int{}
	for _, name := range []string{"shell_port", "iopub_port", "stdin_port", "control_port", "hb_port"} {
		l, err := net.Listen("tcp", "127.0.0.1:0")
		if err != nil {
			t.Fatal(err)
		}
		defer l.Close()
		ports[name] = l.Addr().(*net.TCPAddr).Port
	}
	file := map[string]any{"ip": "127.0.0.1", "transport": "tcp", "key": testKey, "signature_scheme": "hmac-sha256"}
	for name, port := range ports {
		file[name] = port
	}
	b, err := json.Marshal(file)
	if err != nil {
		t.Fatal(err)
	}
	path = filepath.Join(t.TempDir(), "kernel-7.json")
	if err := os.WriteFile(path, b, 0o600); err != nil {
		t.Fatal(err)
	}
	return path, ports
}

// dial returns a client's socket.
func dial(t *testing.T, port int) zmq4.Socket {
	t.Helper()
	z := zmq4.NewDealer(context.Background(), zmq4.WithLogger(log.New(io.Discard, "", 0)), zmq4.WithDialerMaxRetries(100))
	t.Cleanup(func() { z.Close() })
	if err := z.Dial(fmt.Sprintf("tcp://127.0.0.1:%d", port)); err != nil {
		t.Fatal(err)
	}
	return z
}

// exchange sends a request and returns the type of the answer.
func exchange(t *testing.T, z zmq4.Socket, kind, content string) string {
	t.Helper()
	c := wire.NewCodec([]byte(testKey))
	m := wire.New(wire.NewSender("tester").Header(kind), nil, json.RawMessage(content))
	if err := z.SendMulti(zmq4.NewMsgFrom(c.Format(m)...)); err != nil {
		t.Fatal(err)
	}
	raw, err := z.Recv()
	if err != nil {
		t.Fatal(err)
	}
	answer, err := c.Parse(raw.Frames)
	if err != nil {
		t.Fatal(err)
	}
	return answer.Header.Type
}

// A kernel served in this process.
type kernel struct {
	t      *testing.T
	engine *still
	path   string
	ports  map[string]int
	stderr strings.Builder
	status chan int
}

func serveStill(t *testing.T) *kernel {
	t.Helper()
	k := &kernel{t: t, engine: newStill(), status: make(chan int, 1)}
	k.path, k.ports = connectionFile(t)
	go func() { k.status <- serveWith([]string{k.path}, &k.stderr, k.engine.start) }()
	return k
}

// hang lets a cell run.
func (k *kernel) hang() zmq4.Socket {
	k.t.Helper()
	z := dial(k.t, k.ports["shell_port"])
	m := wire.New(wire.NewSender("tester").Header("execute_request"), nil, map[string]any{"code": "x"})
	if err := z.SendMulti(zmq4.NewMsgFrom(wire.NewCodec([]byte(testKey)).Format(m)...)); err != nil {
		k.t.Fatal(err)
	}
	<-k.engine.running
	return z
}

// left checks that the kernel has ended well and left no file behind.
func (k *kernel) left() {
	k.t.Helper()
	if status := <-k.status; status != 0 {
		k.t.Errorf("exit status %d, want 0: %s", status, k.stderr.String())
	}
	if _, err := os.Stat(journalPath(k.path)); !os.IsNotExist(err) {
		k.t.Errorf("the journal is still there: %v", err)
	}
}

func TestServeUntilShutdown(t *testing.T) {
	k := serveStill(t)
	control := dial(t, k.ports["control_port"])
	if got := exchange(t, control, "kernel_info_request", "{}"); got != "kernel_info_reply" {
		t.Errorf("answer %s", got)
	}
	if info, err := os.Stat(journalPath(k.path)); err != nil || info.Mode().Perm() != 0o600 {
		t.Errorf("journal: %v", err)
	}
	if got := exchange(t, control, "shutdown_request", `{"restart":false}`); got != "shutdown_reply" {
		t.Errorf("answer %s", got)
	}
	k.left()
}

func TestServeUntilSIGTERM(t *testing.T) {
	k := serveStill(t)
	z := k.hang()
	if err := syscall.Kill(os.Getpid(), syscall.SIGTERM); err != nil {
		t.Fatal(err)
	}
	if raw, err := z.Recv(); err != nil || !strings.Contains(string(raw.Bytes()), "execute_reply") {
		t.Errorf("last answer %q, %v", raw.Bytes(), err)
	}
	k.left()
}

func TestSIGINTInterrupts(t *testing.T) {
	k := serveStill(t)
	z := k.hang()
	if err := syscall.Kill(os.Getpid(), syscall.SIGINT); err != nil {
		t.Fatal(err)
	}
	if raw, err := z.Recv(); err != nil || !strings.Contains(string(raw.Bytes()), `"ename":"interrupted"`) {
		t.Errorf("answer %q, %v", raw.Bytes(), err)
	}
	if got := exchange(t, dial(t, k.ports["control_port"]), "shutdown_request", "{}"); got != "shutdown_reply" {
		t.Errorf("answer %s", got)
	}
	k.left()
}

func TestServeCountsWhatItDropped(t *testing.T) {
	k := serveStill(t)
	control := dial(t, k.ports["control_port"])
	forged := wire.NewCodec([]byte("other")).Format(wire.New(wire.NewSender("x").Header("shutdown_request"), nil, map[string]any{}))
	if err := control.SendMulti(zmq4.NewMsgFrom(forged...)); err != nil {
		t.Fatal(err)
	}
	exchange(t, control, "shutdown_request", "{}")
	k.left()
	if !strings.Contains(k.stderr.String(), "levelsum: 1 messages dropped (wrong signature: 1)") {
		t.Errorf("standard error: %s", k.stderr.String())
	}
}

func TestServeMisuse(t *testing.T) {
	broken := filepath.Join(t.TempDir(), "broken.json")
	if err := os.WriteFile(broken, []byte(`{"ip": "127.0.0.1", "transport": "tcp"}`), 0o600); err != nil {
		t.Fatal(err)
	}
	for _, test := range []struct {
		args []string
		want string
	}{
		{nil, "usage: levelsum serve [-memory SIZE] CONNECTION-FILE"},
		{[]string{"a", "b"}, "usage: levelsum serve [-memory SIZE] CONNECTION-FILE"},
		{[]string{"--other"}, "usage: levelsum serve [-memory SIZE] CONNECTION-FILE"},
		{[]string{"-memory", "much", "a"}, "-memory"},
		{[]string{broken}, "levelsum: serve: " + broken + ": shell_port is missing\n"},
		{[]string{broken + "x"}, broken + "x: no such file"},
	} {
		var stderr strings.Builder
		if status := serveWith(test.args, &stderr, newStill().start); status != 2 || !strings.Contains(stderr.String(), test.want) {
			t.Errorf("serve %q: exit status %d, %q, want 2 and %q", test.args, status, stderr.String(), test.want)
		}
	}
}

func TestServeWithLessMemory(t *testing.T) {
	path, ports := connectionFile(t)
	e := newStill()
	status := make(chan int, 1)
	var stderr strings.Builder
	go func() { status <- serveWith([]string{"-memory", "512MB", path}, &stderr, e.start) }()
	exchange(t, dial(t, ports["control_port"]), "shutdown_request", "{}")
	if got := <-status; got != 0 || e.options.MemoryLimit != 512_000_000 && e.options.MemoryLimit != 512<<20 {
		t.Errorf("exit status %d, limit %d, want 512 MB: %s", got, e.options.MemoryLimit, stderr.String())
	}
}

func TestServeWithoutAnEngine(t *testing.T) {
	path, _ := connectionFile(t)
	var stderr strings.Builder
	status := serveWith([]string{path}, &stderr, func(context.Context, engine.Options) (session.Engine, error) {
		return nil, errors.New("no child")
	})
	if want := "levelsum: serve: the engine does not start: no child\n"; status != 1 || stderr.String() != want {
		t.Errorf("exit status %d, %q, want 1 and %q", status, stderr.String(), want)
	}
}

func TestServeOnATakenPort(t *testing.T) {
	path, ports := connectionFile(t)
	l, err := net.Listen("tcp", fmt.Sprintf("127.0.0.1:%d", ports["stdin_port"]))
	if err != nil {
		t.Fatal(err)
	}
	defer l.Close()
	var stderr strings.Builder
	if status := serveWith([]string{path}, &stderr, newStill().start); status != 1 || !strings.Contains(stderr.String(), "in use") {
		t.Errorf("exit status %d, %q, want 1 and a port in use", status, stderr.String())
	}
}

func TestNotebookFolder(t *testing.T) {
	here, err := os.Getwd()
	if err != nil {
		t.Fatal(err)
	}
	folder := t.TempDir()
	for name, want := range map[string]string{
		"":                                here,
		"notebooks/copper.ipynb":          here, // relative to a root that only the server knows
		filepath.Join(folder, "a.ipynb"):  folder,
		filepath.Join(folder, "no", "a"):  here,
		"7c0b2d7e-4f4c-4d2e-9a3e-1b6f0":   here,
		filepath.Join(folder, "θ b.ipnb"): folder,
	} {
		t.Setenv("JPY_SESSION_NAME", name)
		if got := notebookFolder(); got != want {
			t.Errorf("with JPY_SESSION_NAME=%q: %s, want %s", name, got, want)
		}
	}
}
