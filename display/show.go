package display

// Show shows values at once, in the order given, also in the middle of a cell.
// It panics with a [*Refusal] for a value that would mislead.
func Show(values ...any) {
	for _, v := range values {
		view, err := Render(v)
		if err != nil {
			panic(err)
		}
		Current().Show(view, "", false)
	}
}

// Render returns the view of v, or the reason why v is not shown.
func Render(v any) (view View, err error) {
	if c, ok := v.(Checker); ok {
		if err := safeCheck(c); err != nil {
			return View{}, err
		}
	}
	return ViewOf(v), nil
}

func safeCheck(c Checker) (err error) {
	defer func() {
		if recover() != nil {
			err = nil // ViewOf reports a value whose methods panic
		}
	}()
	return c.Check()
}
