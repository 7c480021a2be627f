package session

import (
	"encoding/json"
	"maps"
	"strings"
	"time"

	"levelsum/display"
	"levelsum/kernel/engine"
	"levelsum/kernel/wire"
)

// begin says that an execute request is being answered: from the first busy to
// the last idle an interrupt counts for it.
func (s *Session) begin() {
	s.mu.Lock()
	defer s.mu.Unlock()
	s.executing, s.stopCell = true, false
}

// end is called after the idle of the request.
func (s *Session) end() {
	s.mu.Lock()
	s.executing = false
	s.question.answer(reply{err: errNoCell}) // of a goroutine that the cell has left behind
	s.mu.Unlock()
}

// stopped reports whether the running cell is to end.
func (s *Session) stopped() bool {
	s.mu.Lock()
	defer s.mu.Unlock()
	return s.stopCell
}

// execute runs a cell.
func (s *Session) execute(r *request) {
	if r.abort {
		// Without execution_count: a client would show it as the prompt number.
		r.reply("execute_reply", wire.Status{Status: wire.StatusAborted})
		return
	}
	if r.unread != nil {
		r.fail("execute_reply", r.unread)
		return
	}
	e := r.execute
	if !e.Silent {
		r.publish("execute_input", wire.ExecuteInput{Code: e.Code, ExecutionCount: r.number})
	}
	out := s.newOutput(r)
	result := s.run(r, out)
	text := s.show(r, out, result)
	if r.stored() {
		s.history.add(entry{number: r.number, source: e.Code, output: text})
	}
	s.answer(r, result)
}

// run runs the cell of r, or does what it asks of the session itself.
func (s *Session) run(r *request, out *output) engine.Outcome {
	if blank(r.execute.Code) {
		return engine.Outcome{}
	}
	e := s.awaitEngine()
	if e == nil {
		return engine.Outcome{Fault: faultOf("engine ended", errLeaving)}
	}
	if s.stopped() {
		return engine.Outcome{Fault: faultOf("interrupted", errInterrupted)}
	}
	if own := ownCell(r.execute.Code); own != nil {
		return own(s, out)
	}
	c := s.cell(r, r.number)
	result := e.Run(s.ctx, c, out)
	s.record(c, result, out)
	return result
}

// show publishes how the cell ended and returns its value as text.
func (s *Session) show(r *request, out *output, result engine.Outcome) (text string) {
	out.finish()
	if r.execute.Silent {
		return ""
	}
	if f := result.Fault; f != nil {
		r.publish("error", wire.Failure{Name: f.Name, Value: f.Message, Traceback: trace(f)})
		return ""
	}
	if result.Value == nil {
		return ""
	}
	data, metadata := bundle(*result.Value)
	r.publish("execute_result", wire.ExecuteResult{ExecutionCount: r.number, Data: data, Metadata: metadata})
	text, _ = data["text/plain"].(string)
	return text
}

// answer sends the reply to r. After an error the cells that wait are aborted.
func (s *Session) answer(r *request, result engine.Outcome) {
	var content any
	how := maps.Clone(result.How)
	payload := payloadOf(how)
	if f := result.Fault; f != nil {
		content = wire.ExecuteFailure{
			Failure:         wire.Failure{Status: wire.StatusError, Name: f.Name, Value: f.Message, Traceback: trace(f)},
			ExecutionCount:  r.number,
			UserExpressions: map[string]any{},
			Payload:         payload,
		}
	} else {
		content = wire.ExecuteReply{
			Status:          wire.StatusOK,
			ExecutionCount:  r.number,
			UserExpressions: answers(r.execute.UserExpressions, result.Answers),
			Payload:         payload,
		}
	}
	m := wire.New(s.sender.Header("execute_reply"), r.msg.RawHeader, content)
	if len(how) > 0 {
		m.Metadata = wire.Marshal(how)
	}
	if result.Fault != nil && r.execute.StopOnError {
		// Before the reply, which a client may answer with a new request; what
		// is marked here is answered after the idle of r.
		s.queue.abort(r, time.Now())
	}
	r.send(m)
}

// payloadOf takes the payload out of how: pages to show and texts for the next
// cell, as the protocol has them.
func payloadOf(how map[string]any) []any {
	payload, _ := how["payload"].([]any)
	delete(how, "payload")
	if payload == nil {
		return []any{}
	}
	return payload
}

// answers are the values of the expressions that were asked for. An expression
// without an answer has an error of its own.
func answers(asked map[string]string, got map[string]engine.Answer) map[string]any {
	all := make(map[string]any, len(asked))
	for name := range asked {
		a, ok := got[name]
		switch {
		case ok && a.Fault == nil:
			data, metadata := bundle(a.View)
			all[name] = map[string]any{"status": wire.StatusOK, "data": data, "metadata": metadata}
		default:
			f := a.Fault
			if f == nil {
				f = &engine.Fault{Name: "no value", Message: "the expression was not evaluated"}
			}
			all[name] = wire.Failure{Status: wire.StatusError, Name: f.Name, Value: f.Message, Traceback: trace(f)}
		}
	}
	return all
}

// bundle is v with both of its maps made.
func bundle(v display.View) (data, metadata map[string]any) {
	data, metadata = v.Data, v.Metadata
	if data == nil {
		data = map[string]any{}
	}
	if metadata == nil {
		metadata = map[string]any{}
	}
	return data, metadata
}

// trace is what a front end prints for f.
func trace(f *engine.Fault) []string {
	if len(f.Trace) == 0 {
		return []string{f.Error()}
	}
	return f.Trace
}

// cellID is the front end's name for the cell that m asks to run.
func cellID(m *wire.Message) string {
	var metadata struct {
		CellID string `json:"cellId"`
	}
	if json.Unmarshal(m.Metadata, &metadata) != nil {
		return ""
	}
	return metadata.CellID
}

func blank(source string) bool { return strings.TrimSpace(source) == "" }
