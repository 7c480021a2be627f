package socket

import (
	"errors"
	"net"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"syscall"
	"testing"

	"github.com/go-zeromq/zmq4"
)

func TestRouterAnswersByIdentity(t *testing.T) {
	s := listen(t, Router, Options{})
	a, b := dealer(t, s, "a"), dealer(t, s, "b")
	for _, d := range []zmq4.Socket{b, a} {
		if err := d.Send(zmq4.NewMsgFrom(frames("", "ask")...)); err != nil {
			t.Fatal(err)
		}
		m, err := s.Recv()
		if err != nil {
			t.Fatal(err)
		}
		if got := strings.Join([]string{string(m[1]), string(m[2])}, "|"); len(m) != 3 || got != "|ask" {
			t.Fatalf("received %q", m)
		}
		if err := s.Send([][]byte{m[0], nil, []byte("to " + string(m[0]))}); err != nil {
			t.Fatal(err)
		}
	}
	for want, d := range map[string]zmq4.Socket{"to a": a, "to b": b} {
		m, err := d.Recv()
		if err != nil || string(m.Bytes()) != want {
			t.Errorf("got %q, %v, want %q", m.Bytes(), err, want)
		}
	}
}

func TestSubscribersGetTheirTopics(t *testing.T) {
	for _, kind := range []Kind{XPub, Pub} {
		on, seen := events()
		s := listen(t, kind, Options{OnSubscribe: on})
		all := connect(t, s, "SUB", "")
		all.write(message("\x01"))
		wantEvent(t, seen, "+")
		some := connect(t, s, "SUB", "")
		some.write(message("\x01b"))
		wantEvent(t, seen, "+b")
		for _, m := range []string{"a1", "b2", "c3", "b4"} {
			if err := s.Send(frames(m, "", "rest of "+m)); err != nil {
				t.Fatal(err)
			}
		}
		for _, m := range []string{"a1", "b2", "c3", "b4"} {
			all.want(m, "", "rest of "+m)
		}
		some.want("b2", "", "rest of b2")
		some.want("b4", "", "rest of b4")
		some.write(message("\x00b"))
		wantEvent(t, seen, "-b")
		some.write(message("\x01c"))
		wantEvent(t, seen, "+c")
		s.Send(frames("b5"))
		s.Send(frames("c6"))
		some.want("c6")
		some.Close()
		wantEvent(t, seen, "-c")
	}
}

func TestSubscribeCommands(t *testing.T) {
	// ZMTP 3.1: https://rfc.zeromq.org/spec/37/, SUBSCRIBE and CANCEL.
	on, seen := events()
	s := listen(t, XPub, Options{OnSubscribe: on})
	c := connect(t, s, "SUB", "")
	c.write(appendCommand(nil, "SUBSCRIBE", []byte("news")))
	wantEvent(t, seen, "+news")
	s.Send(frames("news of today"))
	c.want("news of today")
	c.write(appendCommand(nil, "CANCEL", []byte("news")))
	wantEvent(t, seen, "-news")
}

func TestSubscriptionsOfOnePeerAreCounted(t *testing.T) {
	// As in libzmq, where a topic subscribed twice takes two cancellations.
	on, seen := events()
	s := listen(t, XPub, Options{OnSubscribe: on})
	c := connect(t, s, "SUB", "")
	for _, m := range []string{"\x01x", "\x01x", "\x00x", "\x00never", "\x01end"} {
		c.send(m)
	}
	wantEvent(t, seen, "+x")
	wantEvent(t, seen, "+end")
	s.Send(frames("x is still subscribed"))
	c.want("x is still subscribed")
	c.send("\x00x")
	wantEvent(t, seen, "-x")
}

func TestListenErrors(t *testing.T) {
	s := listen(t, Rep, Options{})
	if _, err := Listen(Rep, s.Endpoint(), Options{}); !errors.Is(err, syscall.EADDRINUSE) {
		t.Errorf("second Listen on %s: %v, want EADDRINUSE", s.Endpoint(), err)
	}
	file := filepath.Join(t.TempDir(), "precious")
	if err := os.WriteFile(file, []byte("data"), 0o600); err != nil {
		t.Fatal(err)
	}
	for _, ep := range []string{"", "tcp://", "ipc://", "udp://127.0.0.1:0", "127.0.0.1:0",
		"tcp://127.0.0.1", "tcp://127.0.0.1:99999", "ipc://" + file, "ipc:///no/such/folder/x"} {
		if s, err := Listen(Rep, ep, Options{}); err == nil {
			s.Close(0)
			t.Errorf("Listen(%q) succeeded", ep)
		}
	}
	if b, err := os.ReadFile(file); err != nil || string(b) != "data" {
		t.Errorf("the file in the way: %q, %v", b, err)
	}
	if _, err := Listen(Kind(7), "tcp://127.0.0.1:0", Options{}); err == nil {
		t.Error("Listen(Kind(7)) succeeded")
	}
}

func TestSendErrors(t *testing.T) {
	r := listen(t, Router, Options{})
	if err := r.Send(frames("nobody", "x")); err != ErrNoPeer { // before any peer has come
		t.Errorf("Send to nobody: %v, want ErrNoPeer", err)
	}
	for _, m := range [][][]byte{nil, {}, frames("only an identity")} {
		if err := r.Send(m); err == nil || errors.Is(err, ErrNoPeer) {
			t.Errorf("Router.Send(%q): %v", m, err)
		}
	}
	p := listen(t, XPub, Options{})
	if err := p.Send(nil); err == nil {
		t.Error("XPub.Send(nil) succeeded")
	}
	h := listen(t, Rep, Options{})
	if err := h.Send(frames("x")); err != ErrNoPeer {
		t.Errorf("Rep.Send without a request: %v, want ErrNoPeer", err)
	}
	c := connect(t, h, "REQ", "")
	c.send("", "ask")
	if _, err := h.Recv(); err != nil {
		t.Fatal(err)
	}
	if err := h.Send(frames("first")); err != nil {
		t.Error(err)
	}
	if err := h.Send(frames("second")); err != ErrNoPeer {
		t.Errorf("second Rep.Send: %v, want ErrNoPeer", err)
	}
	c.want("", "first")
}

// TestMain lets the test binary be the process that is killed in
// TestStaleSocketFile.
func TestMain(m *testing.M) {
	if path := os.Getenv("SOCKET_TEST_HOLD"); path != "" {
		if _, err := Listen(Rep, "ipc://"+path, Options{}); err != nil {
			os.Stdout.WriteString(err.Error())
			os.Exit(1)
		}
		os.Stdout.WriteString("bound\n")
		select {}
	}
	os.Exit(m.Run())
}

func TestStaleSocketFile(t *testing.T) {
	path := filepath.Join(t.TempDir(), "hb")
	hold := exec.Command(os.Args[0])
	hold.Env = append(os.Environ(), "SOCKET_TEST_HOLD="+path)
	out, err := hold.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := hold.Start(); err != nil {
		t.Fatal(err)
	}
	var b [6]byte
	if _, err := out.Read(b[:]); err != nil || string(b[:]) != "bound\n" {
		t.Fatalf("the other process says %q, %v", b, err)
	}
	if _, err := Listen(Rep, "ipc://"+path, Options{}); !errors.Is(err, syscall.EADDRINUSE) {
		t.Errorf("Listen while the other process lives: %v, want EADDRINUSE", err)
	}
	hold.Process.Kill()
	hold.Wait()
	if _, err := os.Stat(path); err != nil {
		t.Fatalf("a killed process has left no file: %v", err)
	}
	s, err := Listen(Rep, "ipc://"+path, Options{})
	if err != nil {
		t.Fatalf("Listen on a stale file: %v", err)
	}
	info, err := os.Stat(path)
	if err != nil || info.Mode().Perm() != 0o600 {
		t.Errorf("mode %v, %v, want 0600", info.Mode(), err)
	}
	if s.Endpoint() != "ipc://"+path {
		t.Errorf("Endpoint %s, want ipc://%s", s.Endpoint(), path)
	}
	echo(s)
	roundTrip(t, req(t, s), "over ipc")
	if err := s.Close(0); err != nil {
		t.Error(err)
	}
	if _, err := os.Stat(path); !errors.Is(err, os.ErrNotExist) {
		t.Errorf("Close has left the socket file: %v", err)
	}
}

func TestAddrHasTheRealPort(t *testing.T) {
	s := listen(t, Router, Options{})
	a, ok := s.Addr().(*net.TCPAddr)
	if !ok || a.Port == 0 {
		t.Fatalf("Addr() = %v", s.Addr())
	}
	if want := "tcp://" + a.String(); s.Endpoint() != want {
		t.Errorf("Endpoint() = %s, want %s", s.Endpoint(), want)
	}
}
