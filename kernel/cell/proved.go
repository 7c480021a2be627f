package cell

// Unproved says what in the cell the interpreter is not proved for, "" if
// nothing. known tells whether the interpreter has a name of a package.
func (p *Plan) Unproved(known func(path, name string) bool) string {
	return "a cell"
}
