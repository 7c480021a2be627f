package compile

import (
	"errors"
	"fmt"
	"io/fs"
	"regexp"
	"strconv"
	"strings"
	"syscall"
)

// An Unavailable error says why nothing can be compiled here, and what to do.
type Unavailable struct {
	Reason string
	Do     string
	Err    error // the cause, if there is one beyond the reason
}

func (e *Unavailable) Error() string {
	s := e.Reason
	if e.Err != nil {
		s += " (" + e.Err.Error() + ")"
	}
	if e.Do != "" {
		s += "; " + e.Do
	}
	return s
}

func (e *Unavailable) Unwrap() error { return e.Err }

// A SourceError holds what the compiler says against a package.
type SourceError struct {
	Package string
	Lines   []Diagnostic
}

// A Diagnostic is one complaint of the compiler. File, Line and Col are those
// that the source's line directives give; Line is 0 if there is no position.
type Diagnostic struct {
	File      string
	Line, Col int
	// Message may have several lines.
	Message string
}

func (d Diagnostic) String() string {
	switch {
	case d.Line == 0:
		return d.Message
	case d.Col == 0:
		return fmt.Sprintf("%s:%d: %s", d.File, d.Line, d.Message)
	}
	return fmt.Sprintf("%s:%d:%d: %s", d.File, d.Line, d.Col, d.Message)
}

func (e *SourceError) Error() string {
	var b strings.Builder
	for i, d := range e.Lines {
		if i > 0 {
			b.WriteByte('\n')
		}
		b.WriteString(d.String())
	}
	return b.String()
}

// A ToolError says that the compiler or the linker failed otherwise than by
// refusing the source.
type ToolError struct {
	Tool   string // "compile" or "link"
	Err    error  // how it ended
	Output string // what it printed
}

func (e *ToolError) Error() string {
	s := fmt.Sprintf("the Go %s tool failed: %v", e.Tool, e.Err)
	if out := strings.TrimSpace(e.Output); out != "" {
		s += "\n" + out
	}
	if strings.Contains(e.Err.Error(), "signal: killed") {
		return s + "\nthe system may have ended it because it was out of memory: close what takes much, and run the cell again"
	}
	return s + "\nthe command levelsum version tries whether cells can be compiled here; if not, see to the Go toolchain and the C compiler, and run install.sh again"
}

func (e *ToolError) Unwrap() error { return e.Err }

// A CacheError says that the folder for built code cannot be used, and why.
type CacheError struct {
	Dir string
	Err error
}

func (e *CacheError) Error() string {
	switch {
	case errors.Is(e.Err, syscall.ENOSPC), errors.Is(e.Err, syscall.EDQUOT):
		return fmt.Sprintf("no space left for compiled cells in %s: free some, or name another folder in LEVELSUM_CACHE", e.Dir)
	case errors.Is(e.Err, fs.ErrPermission), errors.Is(e.Err, syscall.EROFS):
		return fmt.Sprintf("compiled cells cannot be written to %s (%v): allow it, or name another folder in LEVELSUM_CACHE", e.Dir, e.Err)
	}
	return fmt.Sprintf("the folder for compiled cells, %s, cannot be used: %v", e.Dir, e.Err)
}

func (e *CacheError) Unwrap() error { return e.Err }

var (
	position = regexp.MustCompile(`^(.+?):(\d+)(?::(\d+))?: (.*)$`)
	noSpace  = regexp.MustCompile(`(?i)no space left on device|disk quota exceeded`)
)

// diagnostics reads the compiler's output. Lines that begin with a tab go on
// with the complaint before them; "# package" headers are dropped.
func diagnostics(output string) []Diagnostic {
	var ds []Diagnostic
	for line := range strings.Lines(output) {
		line = strings.TrimRight(line, "\r\n")
		switch m := position.FindStringSubmatch(line); {
		case line == "" || strings.HasPrefix(line, "# "):
		case strings.HasPrefix(line, "\t") && len(ds) > 0:
			ds[len(ds)-1].Message += "\n" + line
		case m != nil:
			d := Diagnostic{File: m[1], Message: m[4]}
			d.Line, _ = strconv.Atoi(m[2])
			d.Col, _ = strconv.Atoi(m[3])
			ds = append(ds, d)
		default:
			ds = append(ds, Diagnostic{Message: line})
		}
	}
	return ds
}
