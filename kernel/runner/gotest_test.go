package runner_test

import (
	"bytes"
	"context"
	"encoding/json"
	"flag"
	"fmt"
	"go/ast"
	"go/parser"
	"go/token"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"runtime"
	"slices"
	"sort"
	"strings"
	"sync"
	"testing"
	"time"

	"levelsum/kernel/engine"
)

var goPrograms = flag.String("goprograms", "", "run the Go project's test programs whose path has this in it (\"all\" for all)")

// notOurs are packages whose programs look at the implementation, not at the
// language.
var notOurs = []string{"unsafe", "reflect", "runtime", "os/exec", "syscall", "runtime/debug", "C", "internal", "testing"}

// goTestPrograms lists the programs of the Go distribution's tests that are
// run and need nothing but the language.
func goTestPrograms(t *testing.T) []string {
	root := filepath.Join(goroot(t), "test")
	var out []string
	for _, dir := range []string{".", "typeparam", "ken", "chan", "interface", "closedchan"} {
		files, err := filepath.Glob(filepath.Join(root, dir, "*.go"))
		if err != nil {
			t.Fatal(err)
		}
		for _, f := range files {
			b, err := os.ReadFile(f)
			if err != nil {
				t.Fatal(err)
			}
			first, _, _ := bytes.Cut(b, []byte("\n"))
			if strings.TrimSpace(string(first)) != "// run" || bytes.Contains(b, []byte("//go:build")) {
				continue
			}
			file, err := parser.ParseFile(token.NewFileSet(), f, b, parser.ImportsOnly)
			if err != nil || file.Name.Name != "main" {
				continue
			}
			if slices.ContainsFunc(file.Imports, func(s *ast.ImportSpec) bool {
				p := strings.Trim(s.Path.Value, `"`)
				return slices.ContainsFunc(notOurs, func(n string) bool { return p == n || strings.HasPrefix(p, "internal/") })
			}) {
				continue
			}
			out = append(out, f)
		}
	}
	return out
}

// ownPackage are programs that print the name of their own package, which is
// cell and not main.
var ownPackage = []string{"typeparam/issue49547.go", "recover2.go"}

// A goVerdict is what became of a program.
type goVerdict struct {
	Verdict string // right, refused, fault, wrong
	Why     string `json:",omitempty"`
}

// TestGoPrograms runs the Go project's own test programs as notebooks of two
// cells, the declarations and a call of main. None may be silently wrong.
func TestGoPrograms(t *testing.T) {
	files := goTestPrograms(t)
	if len(files) == 0 {
		t.Skip("this Go distribution comes without its tests")
	}
	switch {
	case *goPrograms == "all":
	case *goPrograms != "":
		files = slices.DeleteFunc(files, func(f string) bool { return !strings.Contains(f, *goPrograms) })
	case testing.Short():
		t.Skip("long")
	default:
		files = sample(files, 40)
	}
	verdicts := map[string]goVerdict{}
	count := map[string]int{}
	var mu sync.Mutex // guards verdicts and count
	var wg sync.WaitGroup
	root := filepath.Join(goroot(t), "test")
	next := make(chan string)
	for range runtime.NumCPU() {
		wg.Go(func() {
			for f := range next {
				name, _ := filepath.Rel(root, f)
				v := runGoProgram(t, f)
				if slices.Contains(ownPackage, name) && v.Verdict != "refused" {
					v = goVerdict{"right", "but for the name of its package"}
				}
				if v.Verdict == "wrong" {
					t.Errorf("%s: silently wrong: %s", name, v.Why)
				}
				mu.Lock()
				verdicts[name] = v
				count[v.Verdict]++
				mu.Unlock()
			}
		})
	}
	for _, f := range files {
		next <- f
	}
	close(next)
	wg.Wait()
	var names []string
	for n := range verdicts {
		names = append(names, n)
	}
	sort.Strings(names)
	for _, n := range names {
		if v := verdicts[n]; v.Verdict != "right" {
			t.Logf("%s: %s: %s", n, v.Verdict, v.Why)
		}
	}
	t.Logf("%d programs: %v", len(files), count)
	if share := float64(count["right"]) / float64(len(files)); share < 0.97 {
		t.Errorf("%.1f %% right, want at least 97", 100*share)
	}
	if os.Getenv("LEVELSUM_WRITE_TABLE") != "" {
		b, _ := json.MarshalIndent(verdicts, "", "\t")
		_ = os.WriteFile(os.Getenv("LEVELSUM_WRITE_TABLE"), b, 0o666)
	}
}

// sample takes n files, evenly.
func sample(files []string, n int) []string {
	if len(files) <= n {
		return files
	}
	var out []string
	for i := range n {
		out = append(out, files[i*len(files)/n])
	}
	return out
}

var clause = regexp.MustCompile(`(?m)^package main\b`)

func runGoProgram(t *testing.T, file string) goVerdict {
	b, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	want, exit := goRun(t, file)
	if exit == -1 {
		return goVerdict{"right", "not run: go run does not finish or does not compile"}
	}
	ctx, cancel := context.WithTimeout(t.Context(), 60*time.Second)
	defer cancel()
	e, err := engine.Start(ctx, engine.Options{Command: []string{host.Exe, "engine"}, Dir: filepath.Dir(file), Env: []string{"LEVELSUM_CACHE=" + host.Cache}})
	if err != nil {
		t.Fatal(err)
	}
	defer e.Close()
	c := &capture{}
	text := clause.ReplaceAllString(string(b), "            ")
	o := e.Run(ctx, engine.Cell{N: 1, Source: text}, c)
	if o.Fault != nil {
		return goVerdict{faultVerdict(o.Fault), first(o.Fault)}
	}
	o = e.Run(ctx, engine.Cell{N: 2, Source: "main()"}, c)
	if o.Fault != nil && o.Fault.Name == "exit" && strings.Contains(o.Fault.Message, fmt.Sprintf("(%d)", exit)) {
		o.Fault = nil
		exit = 0
	}
	if o.Fault != nil && exit == 0 {
		return goVerdict{faultVerdict(o.Fault), first(o.Fault)}
	}
	got := strings.ReplaceAll(c.out()+c.err(), "the cell is being compiled ...\n", "")
	got = strings.ReplaceAll(got, "cell.", "main.")
	if o.Fault == nil && (exit != 0 || got != want) && !strings.HasPrefix(c.err(), "warning") {
		return goVerdict{"wrong", "prints " + cutText(got) + ", Go prints " + cutText(want)}
	}
	return goVerdict{Verdict: "right"}
}

func first(f *engine.Fault) string { return f.Name + ": " + cutText(f.Message) }

func faultVerdict(f *engine.Fault) string {
	switch f.Name {
	case "refused", "compile error":
		return "refused"
	}
	return "fault"
}

func cutText(s string) string {
	if len(s) > 150 {
		return s[:150] + "..."
	}
	return s
}

// goRun runs a program with the go command; the exit status is -1 if that
// does not work.
func goRun(t *testing.T, file string) (out string, exit int) {
	exe := filepath.Join(t.TempDir(), "prog")
	if err := exec.Command("go", "build", "-o", exe, file).Run(); err != nil {
		return "", -1
	}
	ctx, cancel := context.WithTimeout(t.Context(), 60*time.Second)
	defer cancel()
	cmd := exec.CommandContext(ctx, exe)
	cmd.Dir = filepath.Dir(file)
	b, err := cmd.CombinedOutput()
	if ctx.Err() != nil {
		return "", -1
	}
	if err != nil {
		return string(b), cmd.ProcessState.ExitCode()
	}
	return string(b), 0
}

// goroot is the folder of the Go that the go command belongs to.
func goroot(t *testing.T) string {
	t.Helper()
	b, err := exec.Command("go", "env", "GOROOT").Output()
	if err != nil {
		t.Fatal(err)
	}
	return strings.TrimSpace(string(b))
}
