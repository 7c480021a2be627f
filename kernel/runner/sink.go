package runner

import (
	"encoding/base64"
	"encoding/json"
	"errors"
	"fmt"
	"sync/atomic"

	"levelsum/display"
	"levelsum/kernel/engine"
	"levelsum/kernel/runner/guard"
)

// sink sends what cells show through the pipe.
type sink struct{ r *Runner }

func (s sink) Show(v display.View, id string, replace bool) {
	w := s.r.origin.marked(wireView(v))
	s.r.send(engine.Event{Op: "show", Sync: true, View: &w, Name: id, Replace: replace})
}

func (s sink) Clear(wait bool) { s.r.send(engine.Event{Op: "clear", Sync: true, Wait: wait}) }

// Interrupted lets long computations of libraries notice that they are to end.
func (s sink) Interrupted() bool { return atomic.LoadUint32(&guard.Stop) != 0 }

// Checkpoint ends a computation of a library that is to end.
func (s sink) Checkpoint() {
	if s.Interrupted() {
		guard.Halt()
	}
}

func (s sink) Ask(prompt string, secret bool) (string, error) {
	s.r.asking.Lock()
	defer s.r.asking.Unlock()
	stop := guard.Done()
	q := s.r.question()
	s.r.send(engine.Event{Op: "ask", ID: q.id, Sync: true, Text: prompt, Secret: secret})
	select {
	case a := <-q.answer:
		select {
		case <-stop:
			panic(guard.Halted)
		default:
		}
		if a.Err != "" {
			return "", errors.New(a.Err)
		}
		return a.Text, nil
	case <-stop:
		panic(guard.Halted)
	}
}

// wireView makes a View that JSON takes: binary data in base64, and data that
// JSON refuses left out with a word about it.
func wireView(v display.View) display.View {
	out := display.View{Data: map[string]any{}, Metadata: v.Metadata}
	for k, x := range v.Data {
		switch x := x.(type) {
		case []byte:
			out.Data[k] = base64.StdEncoding.EncodeToString(x)
		case string:
			out.Data[k] = cellText(x)
		default:
			b, err := json.Marshal(x)
			if err != nil {
				out.Data["text/plain"] = fmt.Sprintf("%v\n(%s left out: %v)", v.Data["text/plain"], k, err)
				continue
			}
			out.Data[k] = x
			if text := cellText(string(b)); text != string(b) {
				out.Data[k] = json.RawMessage(text)
			}
		}
	}
	if _, err := json.Marshal(out.Metadata); err != nil {
		out.Metadata = nil
	}
	return out
}
