package session

import (
	"encoding/json"
	"path/filepath"
	"strings"
	"testing"

	"levelsum/kernel/engine"
	"levelsum/kernel/wire"
)

// Whatever a signed request says, the kernel answers it or passes it over, and
// lives.
func TestOddRequests(t *testing.T) {
	f := &fake{
		complete: func(_ string, at int) (engine.Completion, error) {
			return engine.Completion{Start: -5, End: at + 100, Matches: []engine.Match{{}}}, nil
		},
	}
	k := serveFake(t, f)
	c := connect(k)
	kinds := []string{
		"execute", "complete", "inspect", "is_complete", "history", "comm_info", "kernel_info", "interrupt", "", "\x00", "status", strings.Repeat("x", 10000),
	}
	contents := []string{
		`{}`, `{"code":null,"cursor_pos":null,"detail_level":null,"n":null,"pattern":null}`, `{"code":"θ","cursor_pos":-9}`,
		`{"code":"θ","cursor_pos":9007199254740993}`, `{"code":"a","cursor_pos":1.5}`, `{"code":["a"]}`, `{"code":{}}`,
		`{"code":"x","user_expressions":{"a":1}}`, `{"code":"x","user_expressions":null}`, `{"code":"x","user_expressions":{"":""}}`,
		`{"code":"x","silent":"yes"}`, `{"code":"\u0000\ud800"}`, `{"hist_access_type":"tail","n":-3}`, `{"hist_access_type":"range","start":5,"stop":1}`,
		`{"hist_access_type":"search","pattern":"[","n":-1}`, `{"hist_access_type":"search","pattern":"((((*"}`, `{"code":1e400}`,
	}
	var last *wire.Message
	for _, kind := range kinds {
		for _, content := range contents {
			for _, metadata := range []string{`{}`, `{"cellId":7}`, `{"cellId":"c"}`} {
				m := c.message(strings.TrimSuffix(kind, "_request")+"_request", json.RawMessage(content))
				m.Content, m.Metadata = json.RawMessage(content), json.RawMessage(metadata)
				c.send(c.shell, m)
				last = m
			}
		}
	}
	for _, content := range []string{`{"restart":"maybe"}`, `{"restart":1}`} {
		m := c.message("shutdown_request", nil)
		m.Content = json.RawMessage(content)
		c.send(c.control, m)
		c.check(c.wait(c.onControl), m, "shutdown_reply").want(t, "status", "error")
	}
	c.shown(last)
	final := c.request("kernel_info_request", cell{})
	for {
		if m := c.wait(c.onShell); string(m.Parent) == string(final.RawHeader) {
			contentOf(m).want(t, "status", "ok")
			break
		}
	}
}

// Over ipc everything is the same.
func TestOverIPC(t *testing.T) {
	k := serveFake(t, &fake{cells: cellMap{"1": func(*running) engine.Outcome { return value("1") }}}, func(o *Options) {
		o.Connection.Transport, o.Connection.IP = "ipc", filepath.Join(t.TempDir(), "k")
		o.Connection.Shell, o.Connection.Control, o.Connection.Stdin, o.Connection.IOPub, o.Connection.Heartbeat = 1, 2, 3, 4, 5
	})
	c := connect(k)
	m := c.run("1", nil)
	if s := summary(c.shown(m)); s != "execute_input|execute_result:1" {
		t.Errorf("published %s", s)
	}
	c.reply(m, "execute_reply").want(t, "status", "ok")
}

// From a request to its idle and reply, through a client in the same process.
func BenchmarkExecute(b *testing.B) {
	c := connect(serveFake(b, &fake{}))
	b.ReportAllocs()
	for b.Loop() {
		m := c.run("1", nil)
		c.shown(m)
		c.reply(m, "execute_reply")
	}
}
