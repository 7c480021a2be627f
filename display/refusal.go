package display

// A Refusal says why something is not shown: it would mislead, or it cannot be
// read. [Show], [Result] and the other functions that show at once panic with
// it; [Render] returns it.
type Refusal struct {
	What   string // "Figure", "Table", "Result"
	Reason string
}

func (r *Refusal) Error() string { return "display: " + r.What + ": " + r.Reason }

// A Checker says whether it can be shown truthfully. [Render] asks before it
// asks for the View.
type Checker interface {
	Check() error
}

func refuse(what string, err error) error {
	if err == nil {
		return nil
	}
	if r, ok := err.(*Refusal); ok {
		return r
	}
	return &Refusal{What: what, Reason: err.Error()}
}

// refused is how a refusal looks where it has to be shown as a value.
func refused(err error) View { return Text("not shown: " + err.Error()) }
