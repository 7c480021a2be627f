package session

import (
	"context"
	"encoding/json"
	"fmt"
	"io"
	"log"
	"net"
	"strings"
	"testing"
	"time"

	"github.com/go-zeromq/zmq4"

	"levelsum/kernel/socket"
	"levelsum/kernel/wire"
)

const testKey = "f2c9-test"

// giveUp ends a test that waits for something that does not come. No test
// passes because of it.
const giveUp = 20 * time.Second

// A served session, and the means to end it.
type served struct {
	t       testing.TB
	session *Session
	engine  *fake
	log     *strings.Builder // read after the end only
	done    chan struct{}
	hasty   bool // does not wait long for a cell when it ends
	restart bool // after done
	err     error
}

// serveFake serves a session with a fake engine until the test ends.
func serveFake(t testing.TB, e *fake, more ...func(*Options)) *served {
	t.Helper()
	k := &served{t: t, engine: e, log: &strings.Builder{}, done: make(chan struct{})}
	o := Options{
		Connection: socket.Connection{Transport: "tcp", IP: "127.0.0.1", Key: testKey},
		Start:      e.start,
		Version:    "1.2.3",
		Log:        log.New(k.log, "", 0),
	}
	for _, f := range more {
		f(&o)
	}
	k.hasty = o.Version == hastyVersion
	s, err := Open(o)
	if err != nil {
		t.Fatal(err)
	}
	k.session = s
	// On a machine with much to do the answers that a test waits for may take
	// longer than a user would.
	s.queue.grace = giveUp
	if !k.hasty {
		s.patience = giveUp
	}
	go func() {
		defer close(k.done)
		k.restart, k.err = s.Serve(context.Background())
	}()
	t.Cleanup(k.end)
	return k
}

// hasty makes a session that ends as soon as one of a user does.
func hasty(o *Options) { o.Version = hastyVersion }

const hastyVersion = "hasty"

// end stops the session and waits for it.
func (k *served) end() {
	k.session.Stop()
	select {
	case <-k.done:
	case <-time.After(giveUp):
		k.t.Error("Serve did not return")
	}
}

// A client speaks the protocol from the other end.
type client struct {
	t                     testing.TB
	codec                 *wire.Codec
	sender                *wire.Sender
	identity              string
	shell, control, stdin zmq4.Socket
	iopub                 zmq4.Socket
	onShell, onControl    <-chan *wire.Message
	onStdin, onIOPub      <-chan *wire.Message
}

func endpoint(a net.Addr) string {
	if a.Network() == "unix" {
		return "ipc://" + a.String()
	}
	return "tcp://" + a.String()
}

// connect returns a client whose subscription counts already.
func connect(k *served, channels ...string) *client {
	k.t.Helper()
	c := &client{t: k.t, codec: wire.NewCodec([]byte(testKey)), sender: wire.NewSender("tester")}
	c.identity = "client-" + c.sender.Session()
	at := k.session.Addrs()
	dealer := func(a net.Addr) zmq4.Socket {
		z := zmq4.NewDealer(context.Background(), zmq4.WithID(zmq4.SocketIdentity(c.identity)), zmq4.WithLogger(log.New(io.Discard, "", 0)))
		k.t.Cleanup(func() { z.Close() })
		if err := z.Dial(endpoint(a)); err != nil {
			k.t.Fatal(err)
		}
		return z
	}
	c.iopub = zmq4.NewSub(context.Background(), zmq4.WithLogger(log.New(io.Discard, "", 0)))
	k.t.Cleanup(func() { c.iopub.Close() })
	if err := c.iopub.Dial(endpoint(at.IOPub)); err != nil {
		k.t.Fatal(err)
	}
	if err := c.iopub.SetOption(zmq4.OptionSubscribe, ""); err != nil {
		k.t.Fatal(err)
	}
	c.onIOPub = c.listen(c.iopub)
	c.shell = dealer(at.Shell)
	c.onShell = c.listen(c.shell)
	c.control = dealer(at.Control)
	c.onControl = c.listen(c.control)
	if len(channels) == 0 { // any name means without stdin
		c.stdin = dealer(at.Stdin)
		c.onStdin = c.listen(c.stdin)
	}
	for m := range c.published() {
		if m.Header.Type == "iopub_welcome" {
			break
		}
	}
	return c
}

// listen returns what comes over z.
func (c *client) listen(z zmq4.Socket) <-chan *wire.Message {
	in := make(chan *wire.Message, 1<<16)
	go func() {
		defer close(in)
		for {
			raw, err := z.Recv()
			if err != nil || len(raw.Frames) == 0 {
				return
			}
			m, err := c.codec.Parse(raw.Frames)
			if err != nil {
				c.t.Errorf("the kernel sent %q: %v", raw.Frames, err)
				return
			}
			in <- m
		}
	}()
	return in
}

// wait returns the next message on in.
func (c *client) wait(in <-chan *wire.Message) *wire.Message {
	c.t.Helper()
	select {
	case m, ok := <-in:
		if !ok {
			c.t.Fatal("the connection has ended")
		}
		return m
	case <-time.After(giveUp):
		c.t.Fatal("no message came")
	}
	return nil
}

// published yields what comes over iopub.
func (c *client) published() func(func(*wire.Message) bool) {
	return func(yield func(*wire.Message) bool) {
		for yield(c.wait(c.onIOPub)) {
		}
	}
}

// message returns a new message of the client.
func (c *client) message(kind string, content any) *wire.Message {
	return wire.New(c.sender.Header(kind), nil, content)
}

func (c *client) send(z zmq4.Socket, m *wire.Message) *wire.Message {
	c.t.Helper()
	c.sendFrames(z, c.codec.Format(m))
	return m
}

func (c *client) sendFrames(z zmq4.Socket, frames [][]byte) {
	c.t.Helper()
	if err := z.SendMulti(zmq4.NewMsgFrom(frames...)); err != nil {
		c.t.Fatal(err)
	}
}

// request sends a request over shell.
func (c *client) request(kind string, content any) *wire.Message {
	c.t.Helper()
	return c.send(c.shell, c.message(kind, content))
}

// ask sends a request over shell and returns the reply.
func (c *client) ask(kind string, content any) object {
	c.t.Helper()
	return c.reply(c.request(kind, content), strings.TrimSuffix(kind, "_request")+"_reply")
}

// reply returns the next message on shell, which has to answer m.
func (c *client) reply(m *wire.Message, kind string) object {
	c.t.Helper()
	return c.check(c.wait(c.onShell), m, kind)
}

// check checks that got answers m and returns its content.
func (c *client) check(got, m *wire.Message, kind string) object {
	c.t.Helper()
	if got.Header.Type != kind || string(got.Parent) != string(m.RawHeader) {
		c.t.Fatalf("got %s with the parent %s, want %s with %s", got.Header.Type, got.Parent, kind, m.RawHeader)
	}
	return contentOf(got)
}

// cell is the content of an execute request.
type cell map[string]any

// run sends an execute request.
func (c *client) run(code string, more cell) *wire.Message {
	c.t.Helper()
	content := cell{"code": code, "silent": false, "store_history": true, "allow_stdin": false, "stop_on_error": true}
	for k, v := range more {
		content[k] = v
	}
	return c.request("execute_request", content)
}

// shown returns what is published because of m, from busy to idle, without
// these two.
func (c *client) shown(m *wire.Message) []*wire.Message {
	c.t.Helper()
	var all []*wire.Message
	busy := false
	for got := range c.published() {
		if string(got.Parent) != string(m.RawHeader) {
			continue
		}
		if got.Header.Type != "status" {
			if !busy {
				c.t.Fatalf("%s came before busy", got.Header.Type)
			}
			all = append(all, got)
			continue
		}
		switch state := contentOf(got)["execution_state"]; {
		case state == "busy" && !busy:
			busy = true
		case state == "idle" && busy:
			return all
		default:
			c.t.Fatalf("the status %v came with busy = %v", state, busy)
		}
	}
	return nil
}

// drained checks that nothing has come that the test did not take: a request
// of a type without effect is the last to be answered.
func (c *client) drained() {
	c.t.Helper()
	m := c.request("comm_info_request", cell{})
	c.reply(m, "comm_info_reply")
	if got := c.shown(m); len(got) != 0 {
		c.t.Errorf("%s was published for comm_info_request", got[0].Header.Type)
	}
}

// object is the content of a message.
type object map[string]any

func contentOf(m *wire.Message) object {
	var o object
	if err := json.Unmarshal(m.Content, &o); err != nil {
		panic(err)
	}
	return o
}

// want checks a field of o; want is compared as JSON.
func (o object) want(t testing.TB, field string, want any) {
	t.Helper()
	got, _ := json.Marshal(o[field])
	w, _ := json.Marshal(want)
	if string(got) != string(w) {
		t.Errorf("%s = %s, want %s", field, got, w)
	}
}

// summary names messages with the fields that tests look at.
func summary(all []*wire.Message) string {
	var parts []string
	for _, m := range all {
		o := contentOf(m)
		switch m.Header.Type {
		case "stream":
			parts = append(parts, fmt.Sprintf("%s:%s", o["name"], o["text"]))
		case "display_data", "update_display_data", "execute_result":
			text := o["data"].(map[string]any)["text/plain"]
			id := ""
			if transient, ok := o["transient"].(map[string]any); ok && transient["display_id"] != nil {
				id = fmt.Sprintf("(%v)", transient["display_id"])
			}
			parts = append(parts, fmt.Sprintf("%s%s:%v", m.Header.Type, id, text))
		case "error":
			parts = append(parts, fmt.Sprintf("error:%s:%s", o["ename"], o["evalue"]))
		case "clear_output":
			parts = append(parts, fmt.Sprintf("clear_output:%v", o["wait"]))
		default:
			parts = append(parts, m.Header.Type)
		}
	}
	return strings.Join(parts, "|")
}
