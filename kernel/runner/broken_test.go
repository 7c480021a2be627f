package runner_test

import (
	"encoding/json"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"golang.org/x/sys/unix"

	"levelsum/kernel/compile"
	"levelsum/kernel/engine"
)

// broken makes a folder for LEVELSUM_CACHE whose kit is that of the host but
// for what alter changes; tools, if there are some, are scripts in place of the
// compiler and the linker, in which $REAL is the folder of the real ones.
func broken(t *testing.T, tools map[string]string, alter func(root string, m *compile.Manifest)) string {
	t.Helper()
	root := t.TempDir()
	kit := filepath.Join(root, "kit", filepath.Base(host.Kit.Dir))
	m := host.Kit.Manifest
	write := func(name, data string, mode os.FileMode) {
		t.Helper()
		if err := os.MkdirAll(filepath.Dir(name), 0o777); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(name, []byte(data), mode); err != nil {
			t.Fatal(err)
		}
	}
	if tools != nil {
		real := m.Tools
		m.GOROOT = filepath.Join(root, "go")
		m.Tools = m.GOROOT
		write(filepath.Join(m.GOROOT, "VERSION"), m.Go+"\n", 0o666)
		for _, tool := range []string{"compile", "link"} {
			script := tools[tool]
			if script == "" {
				script = "exec $REAL/" + tool + ` "$@"`
			}
			write(filepath.Join(m.Tools, tool), "#!/bin/sh\nREAL='"+real+"'\n"+script+"\n", 0o777)
		}
	}
	if alter != nil {
		alter(root, &m)
	}
	data, err := json.Marshal(m)
	if err != nil {
		t.Fatal(err)
	}
	write(filepath.Join(kit, "manifest.json"), string(data), 0o666)
	if err := os.Symlink(filepath.Join(host.Kit.Dir, "pkg"), filepath.Join(kit, "pkg")); err != nil {
		t.Fatal(err)
	}
	return root
}

// TestBrokenCompiledTier runs a cell that has to be compiled where that cannot
// be done: it is refused in words that say what to do, nothing changes, what
// is interpreted works on, and the program of a notebook says the same.
func TestBrokenCompiledTier(t *testing.T) {
	for _, test := range []struct {
		name  string
		tools map[string]string
		alter func(root string, m *compile.Manifest)
		path  string
		want  []string
	}{
		{name: "compiler", tools: map[string]string{"compile": "echo '<unknown line number>: internal compiler error: it broke'; exit 2"},
			want: []string{"the Go compile tool failed: exit status 2", "internal compiler error: it broke", "levelsum version", "run install.sh again"}},
		{name: "compiler killed", tools: map[string]string{"compile": "kill -9 $$"},
			want: []string{"the Go compile tool failed: signal: killed", "out of memory"}},
		{name: "linker", tools: map[string]string{"link": "echo 'gcc: fatal error: cannot execute ld'; exit 1"},
			want: []string{"the Go link tool failed: exit status 1", "cannot execute ld", "run install.sh again"}},
		{name: "full disk", tools: map[string]string{"link": "echo 'link: mapping output file failed: no space left on device'; exit 2"},
			want: []string{"no space left for compiled cells in ", "free some, or name another folder in LEVELSUM_CACHE"}},
		{name: "cache that is no folder", alter: func(root string, _ *compile.Manifest) {
			if err := os.WriteFile(filepath.Join(root, "built"), nil, 0o666); err != nil {
				t.Fatal(err)
			}
		}, want: []string{"the folder for compiled cells, ", "built, cannot be used: ", "not a directory"}},
		{name: "unwritable cache", alter: func(root string, _ *compile.Manifest) {
			// A folder in which nobody can make anything, not even the superuser.
			if err := os.Symlink("/proc/self", filepath.Join(root, "built")); err != nil {
				t.Fatal(err)
			}
		}, want: []string{"built", "cannot be"}},
		{name: "other Go", alter: func(root string, m *compile.Manifest) {
			m.GOROOT = filepath.Join(root, "go")
			m.Tools = m.GOROOT
			if err := os.Mkdir(m.GOROOT, 0o777); err != nil {
				t.Fatal(err)
			}
			if err := os.WriteFile(filepath.Join(m.GOROOT, "VERSION"), []byte("go1.99.1\n"), 0o666); err != nil {
				t.Fatal(err)
			}
		}, path: "/nowhere", want: []string{"was installed with go1.", "but go1.99.1 is installed now; run install.sh again"}},
		{name: "no Go", alter: func(root string, m *compile.Manifest) { m.GOROOT, m.Tools = "/nowhere/go", "/nowhere/go" }, path: "/nowhere",
			want: []string{"the Go toolchain is gone from /nowhere/go", "install go1."}},
		{name: "no C compiler", alter: func(root string, m *compile.Manifest) { m.CC = "no-such-cc" },
			want: []string{"the C compiler no-such-cc, with which Go links compiled cells, is not found; install "}},
	} {
		t.Run(test.name, func(t *testing.T) {
			t.Parallel()
			env := []string{"LEVELSUM_CACHE=" + broken(t, test.tools, test.alter)}
			if test.path != "" {
				env = append(env, "PATH="+test.path)
			}
			e := start(t, env...)
			const declares = "type level struct{ e float64 }"
			says := func(got string) {
				t.Helper()
				for _, w := range test.want {
					if !strings.Contains(got, w) {
						t.Errorf("got %q, which lacks %q", got, w)
					}
				}
			}
			p, err := e.Program(t.Context(), []engine.Cell{{N: 1, Source: declares}}, &capture{})
			if err != nil {
				t.Fatal(err)
			}
			says(p.Alone)
			out, c := run(t, e, 1, declares)
			if out.Fault == nil || out.Fault.Name != "refused" {
				t.Fatalf("%s", told(out, c))
			}
			says(strings.Join(out.Fault.Trace, "\n"))
			if out, c := run(t, e, 2, "level{2}"); out.Fault == nil || out.Fault.Name != "compile error" {
				t.Errorf("after the refusal: %s", told(out, c))
			}
			if out, c := run(t, e, 3, "x := 2.5\nx * 2"); told(out, c) != " = 5" {
				t.Errorf("interpreted: %s", told(out, c))
			}
		})
	}
}

// TestRepairedCompiler breaks the compiler for one build: the cell can be run
// when it works again, without a restart.
func TestRepairedCompiler(t *testing.T) {
	flag := filepath.Join(t.TempDir(), "full")
	if err := os.WriteFile(flag, nil, 0o666); err != nil {
		t.Fatal(err)
	}
	e := start(t, "LEVELSUM_CACHE="+broken(t, map[string]string{
		"link": "if test -e '" + flag + "'; then echo 'write: no space left on device'; exit 1; fi\nexec $REAL/link \"$@\"",
	}, nil))
	const src = "func half(x float64) float64 { return x / 2 }\nhalf(5)"
	if out, c := run(t, e, 1, src); out.Fault == nil || !strings.Contains(out.Fault.Message, "no space left") {
		t.Fatalf("%s", told(out, c))
	}
	if err := os.Remove(flag); err != nil {
		t.Fatal(err)
	}
	if out, c := run(t, e, 2, src); told(out, c) != " = 2.5" {
		t.Errorf("repaired: %s", told(out, c))
	}
}

// A hinted is a capture that tells when a hint comes.
type hinted struct {
	capture
	hints chan string
}

func (h *hinted) Hint(text string) { h.hints <- text }

// TestSlowBuildIsTold holds the linker up until the reader has been told that
// the cell is being compiled.
func TestSlowBuildIsTold(t *testing.T) {
	gate := filepath.Join(t.TempDir(), "gate") // the linker waits until it is opened
	if err := unix.Mkfifo(gate, 0o666); err != nil {
		t.Fatal(err)
	}
	e := start(t, "LEVELSUM_CACHE="+broken(t, map[string]string{
		"link": ": <'" + gate + "'\nexec $REAL/link \"$@\"",
	}, nil))
	h := &hinted{hints: make(chan string, 10)}
	done := make(chan engine.Outcome, 1)
	go func() {
		done <- e.Run(t.Context(), engine.Cell{N: 1, Source: "func third(x float64) float64 { return x / 3 }\nthird(6)"}, h)
	}()
	if got := <-h.hints; got != "the cell is being compiled ...\n" {
		t.Errorf("hint %q", got)
	}
	select {
	case out := <-done:
		t.Fatalf("over before the link: %s", told(out, &h.capture))
	default:
	}
	if err := os.WriteFile(gate, nil, 0o666); err != nil {
		t.Fatal(err)
	}
	if out := <-done; told(out, &h.capture) != " = 2" {
		t.Errorf("%s", told(out, &h.capture))
	}
	if len(h.hints) > 0 {
		t.Errorf("one more hint: %q", <-h.hints)
	}
}
