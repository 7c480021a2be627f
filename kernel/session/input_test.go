package session

import (
	"errors"
	"testing"

	"levelsum/kernel/engine"
	"levelsum/kernel/wire"
)

// asking is a cell that asks and shows the answer or the error.
func asking(r *running) engine.Outcome {
	r.Stream("stdout", "asks\n")
	text, err := r.Ask("T / K: ", true)
	if err != nil {
		return engine.Outcome{Fault: &engine.Fault{Name: "input", Message: err.Error()}}
	}
	return value(text)
}

func inputReply(c *client, to *wire.Message, text string) *wire.Message {
	return wire.New(c.sender.Header("input_reply"), to.RawHeader, cell{"value": text})
}

func TestInput(t *testing.T) {
	c := connect(serveFake(t, &fake{cells: cellMap{"ask": asking}}))
	m := c.run("ask", cell{"allow_stdin": true})
	q := c.wait(c.onStdin)
	o := c.check(q, m, "input_request")
	o.want(t, "prompt", "T / K: ")
	o.want(t, "password", true)
	c.send(c.stdin, inputReply(c, q, "298.15"))
	if s := summary(c.shown(m)); s != "execute_input|stdout:asks\n|execute_result:298.15" {
		t.Errorf("published %s", s)
	}
	c.reply(m, "execute_reply").want(t, "status", "ok")
}

// Some clients send the reply without a parent header.
func TestInputReplyWithoutParent(t *testing.T) {
	c := connect(serveFake(t, &fake{cells: cellMap{"ask": asking}}))
	m := c.run("ask", cell{"allow_stdin": true})
	c.wait(c.onStdin)
	c.send(c.stdin, c.message("input_reply", cell{"value": "x"}))
	c.reply(m, "execute_reply").want(t, "status", "ok")
}

func TestInputWithoutPermissionFailsAtOnce(t *testing.T) {
	c := connect(serveFake(t, &fake{cells: cellMap{"ask": asking}}))
	m := c.run("ask", cell{"allow_stdin": false})
	r := c.reply(m, "execute_reply")
	r.want(t, "status", "error")
	r.want(t, "evalue", "this front end takes no input here")
	m = c.request("execute_request", cell{"code": "ask"}) // permission is not the default
	c.reply(m, "execute_reply").want(t, "status", "error")
}

// A client that allows input but has no stdin socket does not hang the kernel.
func TestInputWithoutStdinSocket(t *testing.T) {
	c := connect(serveFake(t, &fake{cells: cellMap{"ask": asking}}), "no stdin")
	m := c.run("ask", cell{"allow_stdin": true})
	r := c.reply(m, "execute_reply")
	r.want(t, "status", "error")
	r.want(t, "evalue", "this front end takes no input here")
}

// The question goes to the client whose cell asks, and only its answer counts.
func TestInputIsRoutedByIdentity(t *testing.T) {
	k := serveFake(t, &fake{cells: cellMap{"ask": asking}})
	a, b := connect(k), connect(k)
	m := a.run("ask", cell{"allow_stdin": true})
	q := a.wait(a.onStdin)
	b.send(b.stdin, inputReply(b, q, "b's"))
	// The stdin socket takes messages in the order of arrival from each client
	// only, so b has to be heard before a answers: it is, when the log says so.
	b.send(b.stdin, b.message("nonsense", cell{}))
	a.send(a.stdin, a.message("nonsense", cell{}))
	a.send(a.stdin, inputReply(a, q, "a's"))
	if s := summary(a.shown(m)); s != "execute_input|stdout:asks\n|execute_result:a's" {
		t.Errorf("published %s", s)
	}
	select {
	case q := <-b.onStdin:
		t.Errorf("%s went to the other client", q.Header.Type)
	default:
	}
}

// The answer to a question that was broken off is not taken for the next one's.
func TestLateInputReply(t *testing.T) {
	k := serveFake(t, &fake{cells: cellMap{"ask": asking}})
	c := connect(k)
	m := c.run("ask", cell{"allow_stdin": true})
	first := c.wait(c.onStdin)
	c.send(c.control, c.message("interrupt_request", cell{}))
	r := c.reply(m, "execute_reply")
	r.want(t, "status", "error")
	r.want(t, "evalue", "interrupted")
	m = c.run("ask", cell{"allow_stdin": true})
	second := c.wait(c.onStdin)
	c.send(c.stdin, inputReply(c, first, "late"))
	c.send(c.stdin, inputReply(c, second, "right"))
	if got := c.shown(m); summary(got[len(got)-1:]) != "execute_result:right" {
		t.Errorf("published %s", summary(got))
	}
}

// A goroutine that asks when its cell is over gets an error, at once.
func TestInputAfterTheCell(t *testing.T) {
	left := make(chan *running, 1)
	k := serveFake(t, &fake{cells: cellMap{"go": func(r *running) engine.Outcome { left <- r; return engine.Outcome{} }}})
	c := connect(k)
	m := c.run("go", cell{"allow_stdin": true})
	c.shown(m)
	c.reply(m, "execute_reply")
	c.drained()
	if _, err := (<-left).Ask("?", false); !errors.Is(err, errNoCell) {
		t.Errorf("Ask after the cell: %v, want %v", err, errNoCell)
	}
}

// Shutdown breaks off a question.
func TestShutdownDuringInput(t *testing.T) {
	k := serveFake(t, &fake{cells: cellMap{"ask": asking}})
	c := connect(k)
	m := c.run("ask", cell{"allow_stdin": true})
	c.wait(c.onStdin)
	c.send(c.control, c.message("shutdown_request", cell{}))
	c.reply(m, "execute_reply").want(t, "status", "error")
	<-k.done
}
