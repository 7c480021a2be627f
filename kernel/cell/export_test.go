package cell

// BareHints lets a panic while a hint is looked for through.
func (s *Scope) BareHints() { s.bareHints = true }
