package main

import (
	"context"
	"fmt"
	"io"
	"os"
	"strings"
	"testing"

	"github.com/rogpeppe/go-internal/testscript"

	"levelsum/display"
	"levelsum/kernel/engine"
	"levelsum/kernel/rerun"
)

func TestMain(m *testing.M) {
	testscript.Main(m, map[string]func(){
		"levelsum": func() {
			c := map[string]command{
				"run": func(a []string, _ io.Reader, stdout, stderr io.Writer) int {
					return runWith(a, stdout, stderr, startScripted)
				},
				"check": func(a []string, _ io.Reader, stdout, stderr io.Writer) int {
					return checkWith(a, stdout, stderr, startScripted)
				},
				"clear":   clearNotebooks,
				"report":  makeReport,
				"version": showVersion,
			}[first(os.Args[1:])]
			if c == nil {
				os.Exit(help(os.Args[1:], os.Stdout, os.Stderr))
			}
			os.Exit(c(os.Args[2:], os.Stdin, os.Stdout, os.Stderr))
		},
	})
}

func first(args []string) string {
	if len(args) == 0 {
		return ""
	}
	return args[0]
}

// TestUsage: the help and the package comment list each command that a user
// calls, and no other.
func TestUsage(t *testing.T) {
	source, err := os.ReadFile("main.go")
	if err != nil {
		t.Fatal(err)
	}
	comment, _, _ := strings.Cut(string(source), "package main")
	for name := range commands {
		want := name != "engine" // serve, run and check call it
		if got := strings.Contains(usage, "\n  "+name+" "); got != want {
			t.Errorf("usage lists %s: %t, want %t", name, got, want)
		}
		if got := strings.Contains(comment, "\n\tlevelsum "+name+" "); got != want {
			t.Errorf("the package comment lists %s: %t, want %t", name, got, want)
		}
	}
}

// TestScripts runs the scripts of testdata/script: the commands with real
// notebooks, files and exit statuses, over a session with a language of its
// own (scripted) instead of the engine.
func TestScripts(t *testing.T) {
	testscript.Run(t, testscript.Params{Dir: "testdata/script"})
}

// scripted is a session that runs a line at a time:
//
//	print TEXT               writes to standard output
//	result NAME VALUE U UNIT shows a named result
//	cat FILE                 prints a file of the notebook's folder
//	fail TEXT                ends the cell
//	wait                     ends the cell when it is interrupted
//	tell FILE                writes a line to a file, as to a pipe
//	copy FROM TO             copies a file
//
// Other lines do nothing.
type scripted struct {
	dir  string
	stop chan struct{}
}

func startScripted(_ context.Context, o engine.Options) (rerun.Session, error) {
	return &scripted{o.Dir, make(chan struct{}, 2)}, nil
}

func (s *scripted) Interrupt()   { s.stop <- struct{}{} }
func (s *scripted) Close() error { return nil }

func (s *scripted) Run(_ context.Context, c engine.Cell, out engine.Output) engine.Outcome {
	fault := func(name, text string) engine.Outcome {
		return engine.Outcome{Fault: &engine.Fault{Name: name, Message: text, Trace: []string{text, fmt.Sprintf("In[%d]:1", c.N)}}}
	}
	for l := range strings.Lines(c.Source) {
		cmd, arg, _ := strings.Cut(strings.TrimSpace(l), " ")
		switch cmd {
		case "print":
			out.Stream("stdout", arg+"\n")
		case "cat":
			b, err := os.ReadFile(s.dir + "/" + strings.Trim(arg, `"`))
			if err != nil {
				return fault("error not looked at", err.Error())
			}
			out.Stream("stdout", string(b))
		case "result":
			var name string
			var v, u float64
			w := strings.SplitN(arg, " ", 4)
			if _, err := fmt.Sscan(strings.Join(w[:3], " "), &name, &v, &u); err != nil {
				return fault("compile error", err.Error())
			}
			out.Show(display.Number{Name: name, Value: v, U: u, Unit: w[3]}.View(), "", false)
		case "tell":
			if err := os.WriteFile(s.dir+"/"+arg, []byte("now\n"), 0o666); err != nil {
				return fault("panic", err.Error())
			}
		case "copy":
			from, to, _ := strings.Cut(arg, " ")
			b, err := os.ReadFile(s.dir + "/" + from)
			if err == nil {
				err = os.WriteFile(s.dir+"/"+to, b, 0o666)
			}
			if err != nil {
				return fault("panic", err.Error())
			}
		case "fail":
			return fault("panic", arg)
		case "wait":
			<-s.stop
			return fault("interrupted", "interrupted")
		}
	}
	return engine.Outcome{}
}
