package data

import (
	"errors"
	"fmt"
	"strconv"
	"strings"
)

// ErrTable is matched by every [*Error].
var ErrTable = errors.New("table not understood")

// An Error says where in a file something is wrong, and what.
type Error struct {
	File    string
	Line    int    // in the file, from 1; 0 if it concerns the whole file
	Row     int    // of the data, from 1; 0 above them
	Column  string // symbol or header text, "" if none
	Problem string
}

func (e *Error) Error() string {
	var b strings.Builder
	b.WriteString("data: " + e.File)
	if e.Line > 0 {
		fmt.Fprintf(&b, ": line %d", e.Line)
		if e.Row > 0 {
			fmt.Fprintf(&b, " (row %d)", e.Row)
		}
	} else if e.Row > 0 {
		fmt.Fprintf(&b, ": row %d", e.Row)
	}
	if e.Column != "" {
		b.WriteString(", column " + strconv.Quote(e.Column))
	}
	return b.String() + ": " + e.Problem
}

// Unwrap makes errors.Is(err, ErrTable) true.
func (e *Error) Unwrap() error { return ErrTable }

// problems collects what is wrong with one file, so that a reader sees more
// than the first of many.
type problems struct {
	file string
	head int // line of the header
	list []error
	more int
}

const shownProblems = 8

func (p *problems) add(line, row int, column, format string, args ...any) {
	if len(p.list) == shownProblems {
		p.more++
		return
	}
	if line == 0 && row == 0 && column != "" {
		line = p.head
	}
	p.list = append(p.list, &Error{File: p.file, Line: line, Row: row, Column: column, Problem: fmt.Sprintf(format, args...)})
}

func (p *problems) empty() bool { return len(p.list) == 0 }

func (p *problems) err() error {
	if p.empty() {
		return nil
	}
	list := p.list
	if p.more > 0 {
		list = append(list, &Error{File: p.file, Problem: fmt.Sprintf("and %d more of such problems", p.more)})
	}
	if len(list) == 1 {
		return list[0]
	}
	return errors.Join(list...)
}
