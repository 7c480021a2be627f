package main

import (
	"bytes"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"testing"

	"levelsum/kernel/compile"
	"levelsum/kernel/compile/kittest"
)

// A listed is a notebook whose program is built and run.
type listed struct {
	t          *testing.T
	host       *kittest.Host
	root, work string
}

func newListed(t *testing.T) listed {
	host, err := kittest.Make(t.Context(), t.TempDir(), "./kernel/levelsum", compile.Race)
	if err != nil {
		t.Fatal(err)
	}
	root, err := kittest.Root(t.Context())
	if err != nil {
		t.Fatal(err)
	}
	return listed{t, host, root, t.TempDir()}
}

// command runs a command in a folder and returns what it prints.
func (l listed) command(dir string, args ...string) string {
	l.t.Helper()
	var stdout, stderr bytes.Buffer
	cmd := exec.CommandContext(l.t.Context(), args[0], args[1:]...)
	cmd.Dir, cmd.Env, cmd.Stdout, cmd.Stderr = dir, l.host.Env(), &stdout, &stderr
	if err := cmd.Run(); err != nil {
		l.t.Fatalf("%s: %v\n%s", strings.Join(args, " "), err, stderr.String())
	}
	return stdout.String()
}

// program writes the program of a notebook, builds it and runs it in the
// notebook's folder.
func (l listed) program(file string) (text, printed string) {
	l.t.Helper()
	source, exe := filepath.Join(l.work, "main.go"), filepath.Join(l.work, "program")
	l.command(filepath.Dir(file), l.host.Exe, "script", "-o", source, file)
	data, err := os.ReadFile(source)
	if err != nil {
		l.t.Fatal(err)
	}
	if out := l.command(l.work, "gofmt", "-l", source); out != "" {
		l.t.Errorf("%s: its program is not formatted", file)
	}
	l.command(l.root, "go", "vet", source)
	l.command(l.root, "go", "build", "-o", exe, source)
	return string(data), l.command(filepath.Dir(file), exe)
}

// TestScriptNotebooks: the program of each notebook gives the named results
// that are stored in the notebook.
func TestScriptNotebooks(t *testing.T) {
	l := newListed(t)
	files, err := filepath.Glob(filepath.Join(l.root, "notebooks", "*.ipynb"))
	if err != nil || len(files) < 9 {
		t.Fatal(files, err)
	}
	for _, file := range files {
		t.Run(filepath.Base(file), func(t *testing.T) {
			l := l
			l.t = t
			_, printed := l.program(file)
			results := 0
			for _, text := range storedResults(t, file) {
				results++
				if !strings.Contains(printed, text) {
					t.Errorf("the program does not print %q", text)
				}
			}
			if results == 0 {
				t.Error("no named result is stored")
			}
		})
	}
}

// TestScript: what a notebook does that a program does not.
func TestScript(t *testing.T) {
	l := newListed(t)
	file := filepath.Join(l.work, "n.ipynb")
	write(t, file, newNotebook(t, []string{
		// Declarations after their use, a method, an unused variable in a function.
		"// twice doubles.\nfunc twice(x float64) float64 { y := 1; return 2 * factor * x }\nconst factor = 1\ntype point struct{ X, y int }\nfunc (p point) sum() int { return p.X + p.y }",
		// One variable again with the same type, then as another type.
		"x := 2.0 // a comment stays\nx = twice(x)\nx",
		"x, n := 5.5, point{1, 2}.sum()\nfmt.Println(x, n)",
		"x := \"text\"\nprint := func() string { return x + \"!\" }\nprint()",
		// A function again, and what uses the old one follows.
		"func twice(x float64) float64 { return 200 * x }\ntwice(1)",
		// A name of a package as a variable, and the package before.
		"strings.ToUpper(\"upper\")",
		"strings := []string{\"a\"}\nlen(strings)",
		// Leading variables in Go's order of initialisation; blank lines.
		"var a = b + 1\nvar b = 2\n\na",
		// A value and an error; a constant; names that the program has itself.
		"strconv.Atoi(\"42\")",
		"1 << 70",
		"main, check, cell1 := 1, 2, 3\nmain + check + cell1",
		"var e1, e2 = errors.New(\"seen\"), error(nil)\n_ = e1\nfor i := range 2 { k := i }",
	}))
	text, printed := l.program(file)
	want := "4\n5.5 3\ntext!\n200\nUPPER\n1\n3\n42\n1180591620717411303424\n6\n"
	if printed != want {
		t.Errorf("the program prints\n%s\nwant\n%s\n%s", printed, want, text)
	}
	if !strings.Contains(text, "x = 2.0 // a comment stays") {
		t.Errorf("a comment is lost:\n%s", text)
	}

	// An error that nobody looks at ends the program, as it ends the cell.
	write(t, file, newNotebook(t, []string{"n, err := strconv.Atoi(\"x\")", "n"}))
	source := filepath.Join(l.work, "main.go")
	l.command(l.work, l.host.Exe, "script", "-o", source, file)
	l.command(l.root, "go", "build", "-o", filepath.Join(l.work, "program"), source)
	out, err := exec.CommandContext(t.Context(), filepath.Join(l.work, "program")).CombinedOutput()
	if err == nil || !strings.Contains(string(out), "invalid syntax") {
		t.Errorf("the program ends with %v: %s", err, out)
	}

	// A cell that does not compile.
	write(t, file, newNotebook(t, []string{"x := 1", "y := x + \"a\""}))
	cmd := exec.CommandContext(t.Context(), l.host.Exe, "script", file)
	cmd.Env = l.host.Env()
	out, err = cmd.CombinedOutput()
	if err == nil || !strings.Contains(string(out), "In[2]:1") {
		t.Errorf("%v: %s", err, out)
	}
}
