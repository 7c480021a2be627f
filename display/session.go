package display

// A SessionSink is a [Sink] that can tell the state of the session it belongs
// to.
type SessionSink interface {
	Sink
	Session() View
}

type sessionView struct{ view View }

func (s sessionView) View() View { return s.view }

// Session returns what the notebook session holds: its names, the values that
// are older than what they were made of (a cell was run out of order or
// edited), and the goroutines that cells have started and that live. Outside
// of a notebook it says that there is no session.
func Session() Viewer {
	if s, ok := Current().(SessionSink); ok {
		return sessionView{s.Session()}
	}
	return sessionView{Text("no notebook session")}
}
