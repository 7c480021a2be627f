package runner

import (
	"errors"
	"fmt"
	"reflect"
	"regexp"
	"runtime"
	"strconv"
	"strings"
	"sync"

	"levelsum/kernel/cell"
	"levelsum/kernel/engine"
	"levelsum/kernel/runner/guard"
)

// A frame is one call of the user's code.
type frame struct {
	fun  string
	file string // In[3]
	line int
}

// userFrames are the calls of cells on the stack, innermost first. It is
// called in a function deferred below the panic, where the frames that
// panicked are still on the stack.
func userFrames(skip int) []frame {
	pcs := make([]uintptr, 4096)
	n := runtime.Callers(skip+1, pcs)
	return framesOf(runtime.CallersFrames(pcs[:n]))
}

// lineOf is a line of the cell itself as a frame, none if it is not known.
func lineOf(src *cell.Source, line int) []frame {
	if line == 0 {
		return nil
	}
	return []frame{{file: src.Name(), line: line}}
}

// framesOf picks the frames of cells.
func framesOf(fs *runtime.Frames) []frame {
	var out []frame
	for {
		f, more := fs.Next()
		if file := cellFile(f.File); file != "" {
			out = append(out, frame{fun: funcName(f.Function), file: file, line: f.Line})
		}
		if !more {
			return out
		}
	}
}

// tags says which cells the file names of compiled code stand for: the last
// one that was run with the text.
var tags struct {
	sync.Mutex
	names map[string]string
}

// nameTag notes that a cell is run.
func nameTag(src *cell.Source) {
	tags.Lock()
	defer tags.Unlock()
	if tags.names == nil {
		tags.names = map[string]string{}
	}
	tags.names[src.Tag()] = src.Name()
}

// tagged is the name of a cell in compiled code.
var tagged = regexp.MustCompile(`In\[[0-9a-f]{12}\]`)

// cellText is text of the Go runtime's or of a library's for a reader: without
// marker letters, and with the cells' own names.
func cellText(s string) string {
	s = cell.Unmark(s)
	if strings.Contains(s, "In[") {
		s = tagged.ReplaceAllStringFunc(s, cellFile)
	}
	return s
}

// cellFile picks In[3] out of the file of a frame, "" if it is not of a cell.
func cellFile(file string) string {
	i := strings.LastIndex(file, "In[")
	if i < 0 || !strings.HasSuffix(file, "]") {
		return ""
	}
	tags.Lock()
	defer tags.Unlock()
	if name, ok := tags.names[file[i:]]; ok {
		return name
	}
	return file[i:]
}

// funcName is what a user calls a function: cell/k3f9.(*Ɐt).Ɐset.func1 is
// (*t).set.func1.
func funcName(s string) string {
	if i := strings.LastIndex(s, "/"); i >= 0 {
		s = s[i+1:]
	}
	if _, rest, ok := strings.Cut(s, "."); ok {
		s = rest
	}
	s = cell.Unmark(s)
	if s == "run" || strings.HasPrefix(s, "run.") {
		s = strings.TrimPrefix(strings.TrimPrefix(s, "run"), ".")
	}
	return s
}

// faultOf turns the value of a panic into a Fault.
func faultOf(v any, frames []frame, src *cell.Source) *engine.Fault {
	f := &engine.Fault{Name: "panic"}
	var unread guard.UnreadError
	var exit guard.ExitError
	err, isErr := v.(error)
	switch {
	case v == any(guard.Halted):
		f.Name, f.Message = "interrupted", "the cell was interrupted"
	case isErr && errors.As(err, &exit):
		f.Name, f.Message = "exit", fmt.Sprintf("the cell called os.Exit(%d); the session goes on", exit.Code)
	case isErr && errors.As(err, &unread):
		f.Name, f.Message = "error not looked at", strings.ReplaceAll(strings.TrimSpace(unread.Err.Error()), "\n", "; ")
		if unread.Name != "" {
			f.Message = unread.Name + ": " + f.Message
		}
	case isErr && ours(v):
		f.Name, f.Message = "domain error", oneLine(err.Error())
	case isErr:
		var re runtime.Error
		if errors.As(err, &re) {
			f.Name = "runtime error"
			f.Message = strings.TrimPrefix(re.Error(), "runtime error: ")
			break
		}
		f.Message = oneLine(safely(err.Error))
	case translated(v) != "":
		f.Name, f.Message = "runtime error", translated(v)
	default:
		if s, ok := v.(fmt.Stringer); ok {
			f.Message = oneLine(safely(s.String))
		} else {
			f.Message = oneLine(fmt.Sprintf("%v", v))
		}
		if _, ok := v.(string); !ok {
			f.Message += fmt.Sprintf(" (%T)", v)
		}
	}
	f.Message = cell.Unmark(f.Message)
	first := f.Name + ": " + f.Message
	if len(frames) > 0 {
		first = fmt.Sprintf("%s:%d: %s", frames[0].file, frames[0].line, first)
	}
	f.Trace = append(f.Trace, first)
	if len(frames) > 0 && src != nil && frames[0].file == src.Name() {
		if lines := strings.Split(src.Text, "\n"); frames[0].line <= len(lines) && frames[0].line > 0 {
			f.Trace = append(f.Trace, "    "+strings.TrimSpace(lines[frames[0].line-1]))
		}
	}
	f.Trace = append(f.Trace, chain(frames)...)
	return f
}

// chain writes the frames below the first, a repeated one once.
func chain(frames []frame) []string {
	var out []string
	for i := 0; i < len(frames); i++ {
		n := 1
		for i+n < len(frames) && frames[i+n] == frames[i] {
			n++
		}
		s := "    in " + frames[i].fun
		if frames[i].fun == "" {
			s = "    in the cell"
		}
		s += " at " + frames[i].file + ":" + strconv.Itoa(frames[i].line)
		if n > 1 {
			s += fmt.Sprintf(" (%d times)", n)
		}
		i += n - 1
		if i == len(frames)-1 && len(out) == 0 && frames[i].fun == "" {
			break // the cell's own line has been said
		}
		out = append(out, s)
		if len(out) == 20 && i+1 < len(frames) {
			return append(out, fmt.Sprintf("    (%d frames more)", len(frames)-i-1))
		}
	}
	return out
}

// ours tells an error of this module's physics packages: its message is meant
// for the reader as it is.
func ours(v any) bool {
	t := reflect.TypeOf(v)
	if t.Kind() == reflect.Pointer {
		t = t.Elem()
	}
	return strings.HasPrefix(t.PkgPath(), "levelsum/statmech") || strings.HasPrefix(t.PkgPath(), "levelsum/display")
}

// translated turns reflect's wording, which interpreted code meets, into the
// runtime's; "" for other values.
func translated(v any) string {
	s, _ := v.(string)
	if e, ok := v.(*reflect.ValueError); ok {
		s = e.Error()
	}
	switch {
	case strings.HasPrefix(s, "reflect") && strings.Contains(s, "index out of range"):
		return "index out of range"
	case strings.HasPrefix(s, "assignment to entry in nil map"):
		return s
	case strings.HasPrefix(s, "reflect: call of reflect.Value") && strings.Contains(s, "zero Value"):
		return "invalid memory address or nil pointer dereference"
	}
	return ""
}

func oneLine(s string) string { return strings.ReplaceAll(strings.TrimSpace(s), "\n", " ") }

func safely(f func() string) (s string) {
	defer func() {
		if r := recover(); r != nil {
			s = fmt.Sprintf("(its message panicked: %v)", r)
		}
	}()
	return f()
}

// runningCall names the call that the cell's code is in, from outside.
func runningCall() string {
	buf := make([]byte, 1<<20)
	buf = buf[:runtime.Stack(buf, true)]
	for g := range strings.SplitSeq(string(buf), "\n\n") {
		if !strings.Contains(g, "runner.(*Runner).goroutine.func") {
			continue
		}
		lines := strings.Split(g, "\n")
		for _, l := range lines[1:] {
			if strings.HasPrefix(l, "\t") || strings.HasPrefix(l, "runtime.") || strings.HasPrefix(l, "internal/") {
				continue
			}
			if i := strings.LastIndex(l, "("); i > 0 {
				l = l[:i]
			}
			return "a call of " + cell.Unmark(l)
		}
	}
	return "a call that does not look whether it is to stop"
}
