package runner_test

import (
	"bytes"
	"encoding/json"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"sort"
	"strings"
	"testing"
)

// A cellCase is a fragment of Go: declarations and statements.
type cellCase struct{ file, name, decls, stmts string }

// cellCases reads the case files in testdata/cells.
func cellCases(t *testing.T) []cellCase {
	t.Helper()
	files, err := filepath.Glob("testdata/cells/*.txt")
	if err != nil || len(files) == 0 {
		t.Fatalf("no case files: %v", err)
	}
	var out []cellCase
	for _, f := range files {
		b, err := os.ReadFile(f)
		if err != nil {
			t.Fatal(err)
		}
		for _, part := range strings.Split("\n"+string(b), "\n### ")[1:] {
			name, body, _ := strings.Cut(part, "\n")
			decls, stmts, ok := strings.Cut("\n"+body, "\n---\n")
			if !ok {
				t.Fatalf("%s: %s has no line ---", f, name)
			}
			out = append(out, cellCase{filepath.Base(f), strings.TrimSpace(name), strings.TrimSpace(decls), strings.TrimSpace(stmts)})
		}
	}
	return out
}

const nativePath = "levelsum/kernel/runner/testdata/native"

// importsOf lists the import lines that a fragment needs.
func importsOf(text string) []string {
	paths := map[string]string{
		"fmt": "fmt", "math": "math", "sort": "sort", "strings": "strings", "errors": "errors", "os": "os", "time": "time",
		"sync": "sync", "strconv": "strconv", "slices": "slices", "maps": "maps", "cmp": "cmp", "rand": "math/rand",
		"bytes": "bytes", "json": "encoding/json", "io": "io", "bufio": "bufio", "context": "context", "regexp": "regexp",
		"template": "text/template", "mat": "gonum.org/v1/gonum/mat", "native": nativePath, "reflect": "reflect", "big": "math/big",
		"utf8": "unicode/utf8", "unicode": "unicode", "heap": "container/heap", "list": "container/list", "atomic": "sync/atomic", "cmplx": "math/cmplx",
		"iter": "iter", "log": "log", "bits": "math/bits", "stat": "gonum.org/v1/gonum/stat", "floats": "gonum.org/v1/gonum/floats", "optimize": "gonum.org/v1/gonum/optimize",
		"quad": "gonum.org/v1/gonum/integrate/quad", "tabwriter": "text/tabwriter", "csv": "encoding/csv", "runtime": "runtime", "constraints": "golang.org/x/exp/constraints",
	}
	var out []string
	for name, path := range paths {
		for i := 0; ; {
			j := strings.Index(text[i:], name+".")
			if j < 0 {
				break
			}
			j += i
			if j == 0 || !strings.ContainsRune("abcdefghijklmnopqrstuvwxyzABCDEFGHIJKLMNOPQRSTUVWXYZ0123456789_.\"", rune(text[j-1])) {
				out = append(out, fmt.Sprintf("import %s %q", name, path))
				break
			}
			i = j + 1
		}
	}
	sort.Strings(out)
	return out
}

// A truth is what the Go compiler makes of a case.
type truth struct {
	Error  string `json:",omitempty"` // the program does not compile
	Output string
	Exit   int `json:",omitempty"`
}

// truths runs each case as a Go program and keeps what it prints in a file
// beside the cases, so that a later run need not.
func truths(t *testing.T, cases []cellCase) map[string]truth {
	t.Helper()
	const file = "testdata/cells/truth.json"
	out := map[string]truth{}
	if b, err := os.ReadFile(file); err == nil {
		if err := json.Unmarshal(b, &out); err != nil {
			t.Fatal(err)
		}
	}
	changed := false
	for _, c := range cases {
		key := c.file + " " + c.name
		if _, ok := out[key]; ok {
			continue
		}
		changed = true
		out[key] = compileAndRun(t, c)
	}
	if changed {
		b, err := json.MarshalIndent(out, "", "\t")
		if err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(file, append(b, '\n'), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	return out
}

func compileAndRun(t *testing.T, c cellCase) truth {
	dir := filepath.Join("testdata", "tmp-"+c.name)
	if err := os.MkdirAll(dir, 0o777); err != nil {
		t.Fatal(err)
	}
	defer os.RemoveAll(dir)
	text := "package main\n" + strings.Join(importsOf(c.decls+"\n"+c.stmts), "\n") + "\n" + c.decls + "\nfunc main() {\n" + c.stmts + "\n}\n"
	if err := os.WriteFile(filepath.Join(dir, "main.go"), []byte(text), 0o666); err != nil {
		t.Fatal(err)
	}
	exe := filepath.Join(t.TempDir(), "case")
	var msg bytes.Buffer
	build := exec.Command("go", "build", "-o", exe, "./"+dir)
	build.Stderr = &msg
	if err := build.Run(); err != nil {
		return truth{Error: msg.String()}
	}
	var stdout bytes.Buffer
	run := exec.Command(exe)
	run.Stdout = &stdout
	err := run.Run()
	tr := truth{Output: stdout.String()}
	if err != nil {
		tr.Exit = run.ProcessState.ExitCode()
	}
	return tr
}
