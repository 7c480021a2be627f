package runner

import (
	"errors"

	"levelsum/display"
	"levelsum/kernel/engine"
)

// refusal returns the fault of a cell whose last value display refuses to
// show, since it would mislead: such a cell has failed.
func refusal(values []any) *engine.Fault {
	for _, v := range values {
		if r := refusalOf(v); r != nil {
			msg := oneLine(r.Error())
			return &engine.Fault{Name: "refused", Message: msg, Trace: []string{"refused: " + msg}}
		}
	}
	return nil
}

func refusalOf(v any) (r *display.Refusal) {
	c, ok := v.(display.Checker)
	if !ok {
		return nil
	}
	defer func() { _ = recover() }() // a type of the user's; ViewOf reports what it throws
	errors.As(c.Check(), &r)
	return r
}
