package cell

import (
	"errors"
	"fmt"
	"go/scanner"
	"go/token"
	"sort"
	"strings"
	"unicode/utf8"
)

// A Diagnostic is one error or warning about a cell: the compiler's words and
// the place.
type Diagnostic struct {
	Source *Source
	Line   int // 1-based
	Column int // 1-based, in bytes, as the Go compiler counts
	Msg    string
	Hint   string // what to do, or ""
}

// String is the first line of what a reader sees: In[7]:3:12: undefined: x.
func (d Diagnostic) String() string {
	return fmt.Sprintf("%s:%d:%d: %s", d.Source.Name(), d.Line, d.Column, d.Msg)
}

// Lines is the diagnostic with its source line and a caret under the place.
func (d Diagnostic) Lines() []string {
	out := []string{d.String()}
	lines := strings.Split(d.Source.Text, "\n")
	if d.Line >= 1 && d.Line <= len(lines) {
		text, before := excerpt(strings.TrimRight(lines[d.Line-1], "\r"), d.Column)
		out = append(out, "    "+text, "    "+strings.Repeat(" ", before)+"^")
	}
	if d.Hint != "" {
		out = append(out, "    "+d.Hint)
	}
	return out
}

// excerptWidth is how much of a long line is shown: a front end would wrap more
// of it, and the caret would stand under nothing.
const excerptWidth = 72

// excerpt returns the part of a line to show for a column (1-based, in bytes),
// without indentation and tabs, and how many characters stand before the column.
func excerpt(line string, column int) (text string, before int) {
	before = utf8.RuneCountInString(line[:min(max(column-1, 0), len(line))])
	rs := []rune(strings.ReplaceAll(line, "\t", " "))
	indent := 0
	for indent < before && rs[indent] == ' ' {
		indent++
	}
	rs, before = rs[indent:], before-indent
	if len(rs) > excerptWidth && before > excerptWidth*2/3 {
		cut := min(before-excerptWidth/2, len(rs)-excerptWidth)
		rs, before = append([]rune("… "), rs[cut:]...), before-cut+2
	}
	if len(rs) > excerptWidth+2 {
		rs = append(rs[:excerptWidth:excerptWidth], []rune(" …")...)
	}
	return string(rs), before
}

// Diagnostics are all errors of a cell, in the order of the source.
type Diagnostics []Diagnostic

func (ds Diagnostics) Error() string {
	if len(ds) == 0 {
		return "no errors"
	}
	s := ds[0].String()
	if len(ds) > 1 {
		s += fmt.Sprintf(" (and %d more)", len(ds)-1)
	}
	return s
}

// sorted orders by place and drops repetitions.
func (ds Diagnostics) sorted() Diagnostics {
	sort.SliceStable(ds, func(i, j int) bool {
		a, b := ds[i], ds[j]
		if a.Source != b.Source {
			return a.Source.N < b.Source.N
		}
		if a.Line != b.Line {
			return a.Line < b.Line
		}
		return a.Column < b.Column
	})
	out := ds[:0]
	for i, d := range ds {
		if i == 0 || d != out[len(out)-1] {
			out = append(out, d)
		}
	}
	return out
}

// diagnosticAt makes a Diagnostics of one error at a byte offset.
func diagnosticAt(src *Source, off int, msg string) Diagnostics {
	off = min(off, len(src.Text))
	line := 1 + strings.Count(src.Text[:off], "\n")
	col := off - (strings.LastIndexByte(src.Text[:off], '\n') + 1) + 1
	return Diagnostics{{Source: src, Line: line, Column: col, Msg: msg}}
}

// syntaxErrors merges the errors of the two parses of a cell. An error that
// both parses report, or one that lies behind the text, is said once.
func syntaxErrors(src *Source, errs ...error) Diagnostics {
	var out Diagnostics
	for _, err := range errs {
		var list scanner.ErrorList
		if !errors.As(err, &list) {
			if err != nil {
				out = append(out, diagnosticAt(src, 0, err.Error())...)
			}
			continue
		}
		for _, e := range list {
			out = append(out, Diagnostic{Source: src, Line: e.Pos.Line, Column: e.Pos.Column, Msg: "syntax error: " + e.Msg})
		}
	}
	// What the parser says about the end of the text, where split has added a
	// brace, is told once, and only if nothing is wrong before.
	last := 1 + strings.Count(strings.TrimRight(src.Text, " \t\r\n"), "\n")
	var within, beyond Diagnostics
	for _, d := range out {
		if d.Line > last || strings.HasSuffix(d.Msg, "found 'EOF'") {
			beyond = append(beyond, d)
		} else {
			within = append(within, d)
		}
	}
	if len(within) > 0 {
		return within.sorted()
	}
	if len(beyond) == 0 {
		return nil
	}
	text := strings.TrimRight(src.Text, " \t\r\n")
	msg := strings.TrimPrefix(beyond[0].Msg, "syntax error: ")
	if strings.HasPrefix(msg, "expected declaration") && strings.HasSuffix(msg, "found '}'") {
		return diagnosticAt(src, max(len(text)-1, 0), "syntax error: unexpected }")
	}
	msg = strings.TrimSuffix(strings.TrimSuffix(msg, ", found '}'"), ", found 'EOF'") // which the reader has not written
	return diagnosticAt(src, len(text), "syntax error: the cell ends too early: "+msg)
}

// place is the position of pos in its cell.
func (s *Source) place(fset *token.FileSet, pos token.Pos) (line, column int) {
	p := fset.Position(pos)
	return p.Line, p.Column
}
