package session

import (
	"context"
	"io"
	"log"
	"slices"
	"strings"
	"testing"

	"github.com/go-zeromq/zmq4"

	"levelsum/kernel/socket"
	"levelsum/kernel/wire"
)

func connectionForTests() socket.Connection {
	return socket.Connection{Transport: "tcp", IP: "127.0.0.1", Key: testKey}
}

func TestKernelInfo(t *testing.T) {
	c := connect(serveFake(t, &fake{}))
	m := c.request("kernel_info_request", cell{})
	onShell := c.reply(m, "kernel_info_reply")
	m = c.send(c.control, c.message("kernel_info_request", cell{}))
	onControl := c.check(c.wait(c.onControl), m, "kernel_info_reply")
	if got := c.shown(m); len(got) != 0 {
		t.Errorf("published %s", summary(got))
	}
	for _, o := range []object{onShell, onControl} {
		o.want(t, "status", "ok")
		o.want(t, "protocol_version", "5.5")
		o.want(t, "implementation", "levelsum")
		o.want(t, "implementation_version", "1.2.3")
		o.want(t, "supported_features", []any{})
		o.want(t, "debugger", false)
		l := object(o["language_info"].(map[string]any))
		l.want(t, "name", "go")
		l.want(t, "mimetype", "text/x-go")
		l.want(t, "file_extension", ".go")
		l.want(t, "pygments_lexer", "go")
		l.want(t, "codemirror_mode", "go")
		if v, ok := l["version"].(string); !ok || !strings.HasPrefix(v, "1.") {
			t.Errorf("language version %v", l["version"])
		}
		if b, ok := o["banner"].(string); !ok || b == "" {
			t.Error("no banner")
		}
	}
}

// The first thing that the kernel publishes is starting, once and without a
// parent; the welcome to a subscriber has no parent either.
func TestStartingOnceAndWelcome(t *testing.T) {
	s, err := Open(Options{Connection: connectionForTests(), Start: (&fake{}).start})
	if err != nil {
		t.Fatal(err)
	}
	k := &served{t: t, session: s, done: make(chan struct{})}
	sub := zmq4.NewSub(context.Background(), zmq4.WithLogger(log.New(io.Discard, "", 0)))
	defer sub.Close()
	c := &client{t: t, codec: wire.NewCodec([]byte(testKey))}
	if err := sub.Dial(endpoint(s.Addrs().IOPub)); err != nil {
		t.Fatal(err)
	}
	if err := sub.SetOption(zmq4.OptionSubscribe, "stat\xff"); err != nil { // not UTF-8: no welcome
		t.Fatal(err)
	}
	if err := sub.SetOption(zmq4.OptionSubscribe, ""); err != nil {
		t.Fatal(err)
	}
	in := c.listen(sub)
	welcome := c.wait(in)
	if welcome.Header.Type != "iopub_welcome" || string(welcome.Parent) != "{}" || welcome.Header.Version != "5.5" {
		t.Fatalf("first message %s with the parent %s", welcome.Header.Type, welcome.Parent)
	}
	contentOf(welcome).want(t, "subscription", "")
	if len(welcome.Identities) != 1 || len(welcome.Identities[0]) != 0 {
		t.Errorf("topic %q, want the subscription", welcome.Identities)
	}
	go func() { s.Serve(context.Background()); close(k.done) }()
	starting := c.wait(in)
	if starting.Header.Type != "status" || string(starting.Parent) != "{}" {
		t.Fatalf("then %s with the parent %s", starting.Header.Type, starting.Parent)
	}
	contentOf(starting).want(t, "execution_state", "starting")
	other := connect(k)
	m := other.run("x", nil)
	for got := range c.all(in) {
		if contentOf(got)["execution_state"] == "starting" {
			t.Error("starting was published twice")
		}
		if contentOf(got)["execution_state"] == "idle" && string(got.Parent) == string(m.RawHeader) {
			break
		}
	}
	k.end()
}

func (c *client) all(in <-chan *wire.Message) func(func(*wire.Message) bool) {
	return func(yield func(*wire.Message) bool) {
		for yield(c.wait(in)) {
		}
	}
}

// Everything is answered between busy and idle, on both channels, and what is
// not known gets no other answer.
func TestStatusAroundEveryRequest(t *testing.T) {
	k := serveFake(t, &fake{})
	c := connect(k)
	for _, kind := range []string{
		"kernel_info_request", "execute_request", "complete_request", "inspect_request", "is_complete_request",
		"history_request", "comm_info_request", "comm_msg", "comm_close", "debug_request", "create_subshell_request", "no_such_request",
	} {
		m := c.request(kind, cell{"code": ""})
		c.shown(m)
	}
	for _, kind := range []string{"kernel_info_request", "interrupt_request", "debug_request", "usage_request", "no_such_request"} {
		m := c.send(c.control, c.message(kind, cell{}))
		c.shown(m)
	}
	c.shell.Close() // nothing is sent any more; the session is still alive
	k.end()
	if got := strings.Count(k.log.String(), "unknown type"); got != 6 {
		t.Errorf("%d requests were called unknown, want 6:\n%s", got, k.log)
	}
}

// What cannot be trusted is dropped and counted, and the kernel lives.
func TestBadMessagesAreDropped(t *testing.T) {
	k := serveFake(t, &fake{})
	c := connect(k)
	frames := func() [][]byte { return c.codec.Format(c.message("kernel_info_request", cell{})) }
	sign := func(parts ...string) [][]byte {
		m := &wire.Message{RawHeader: []byte(parts[0]), Parent: []byte(parts[1]), Metadata: []byte(parts[2]), Content: []byte(parts[3])}
		return c.codec.Format(m)
	}
	replay := frames()
	unsigned := frames()
	unsigned[1] = []byte{}
	upper := frames()
	upper[1] = []byte(strings.ToUpper(string(upper[1])))
	bad := [][][]byte{
		replay,
		unsigned,
		upper,
		wire.NewCodec([]byte("other")).Format(c.message("kernel_info_request", cell{})),
		frames()[:4],
		frames()[1:],
		{[]byte("x")},
		{[]byte("<IDS|MSG>")},
		sign(`{`, `{}`, `{}`, `{}`),
		sign(`{"msg_id":"a","msg_type":"kernel_info_request"}`, `{}`, `{}`, `{"a":`),
		sign(`[]`, `{}`, `{}`, `{}`),
	}
	c.sendFrames(c.shell, replay)
	c.wait(c.onShell)
	for _, f := range bad {
		c.sendFrames(c.shell, f)
		c.sendFrames(c.control, f)
		c.sendFrames(c.stdin, f)
	}
	// Each channel is heard afterwards.
	c.ask("kernel_info_request", cell{}).want(t, "status", "ok")
	m := c.send(c.control, c.message("kernel_info_request", cell{}))
	c.check(c.wait(c.onControl), m, "kernel_info_reply")
	c.send(c.stdin, c.message("input_reply", cell{"value": ""}))
	dropped := func() (n int) {
		for _, m := range k.session.codec.Dropped() {
			n += m
		}
		return n
	}
	k.waitFor(func() bool { return dropped() == 3*len(bad) })
	k.end()
	if !strings.Contains(k.log.String(), "33 messages dropped (no delimiter: 6, not JSON: 3, not signed: 3, replayed: 9, too short: 6, wrong signature: 6)") {
		t.Errorf("log: %s", k.log)
	}
}

// Identities in front and buffers behind are accepted; the reply has the
// identities again.
func TestExtraFrames(t *testing.T) {
	c := connect(serveFake(t, &fake{}))
	m := c.message("kernel_info_request", cell{})
	m.Identities = [][]byte{[]byte("hop"), {0, 1}}
	m.Buffers = [][]byte{{0xff}, {}}
	c.send(c.shell, m)
	got := c.wait(c.onShell)
	c.check(got, m, "kernel_info_reply")
	if !slices.EqualFunc(got.Identities, m.Identities, slices.Equal) {
		t.Errorf("identities %q, want %q", got.Identities, m.Identities)
	}
}

// A subshell in the header is read over.
func TestSubshellIsIgnored(t *testing.T) {
	c := connect(serveFake(t, &fake{}))
	m := c.message("kernel_info_request", cell{})
	m.RawHeader = []byte(strings.Replace(string(m.RawHeader), "{", `{ "subshell_id":"s1", "\u00fc" : 1.50,`, 1))
	c.send(c.shell, m)
	c.reply(m, "kernel_info_reply").want(t, "status", "ok")
}

// Without a key nothing is signed.
func TestNoKey(t *testing.T) {
	k := serveFake(t, &fake{}, func(o *Options) { o.Connection.Key = "" })
	z := zmq4.NewDealer(context.Background(), zmq4.WithLogger(log.New(io.Discard, "", 0)))
	defer z.Close()
	if err := z.Dial(endpoint(k.session.Addrs().Shell)); err != nil {
		t.Fatal(err)
	}
	c := &client{t: t, codec: wire.NewCodec(nil), sender: wire.NewSender("u"), shell: z}
	c.onShell = c.listen(z)
	c.ask("kernel_info_request", cell{}).want(t, "status", "ok")
}

func TestHeartbeat(t *testing.T) {
	hold := make(chan struct{})
	defer close(hold)
	k := serveFake(t, &fake{})
	z := zmq4.NewReq(context.Background(), zmq4.WithLogger(log.New(io.Discard, "", 0)))
	defer z.Close()
	if err := z.Dial(endpoint(k.session.Addrs().Heartbeat)); err != nil {
		t.Fatal(err)
	}
	for _, ping := range []string{"ping", "x"} {
		if err := z.Send(zmq4.NewMsgString(ping)); err != nil {
			t.Fatal(err)
		}
		if got, err := z.Recv(); err != nil || string(got.Bytes()) != ping {
			t.Errorf("echo %q, %v, want %q", got.Bytes(), err, ping)
		}
	}
}

func TestPortTaken(t *testing.T) {
	k := serveFake(t, &fake{})
	taken := k.session.Addrs().Control.String()
	var port int
	for _, d := range taken[strings.LastIndexByte(taken, ':')+1:] {
		port = 10*port + int(d-'0')
	}
	c := connectionForTests()
	c.IOPub = port
	if _, err := Open(Options{Connection: c, Start: (&fake{}).start}); err == nil || !strings.Contains(err.Error(), "in use") {
		t.Errorf("Open on a taken port: %v, want an error", err)
	}
}
