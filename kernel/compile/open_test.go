package compile_test

import (
	"encoding/json"
	"errors"
	"go/importer"
	"go/token"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"levelsum/kernel/compile"
)

// altered makes a kit like the shared one, with another manifest.
func altered(t *testing.T, alter func(dir string, m *compile.Manifest)) string {
	t.Helper()
	_, k := open(t)
	dir := t.TempDir()
	if err := os.Symlink(filepath.Join(k.Dir, "pkg"), filepath.Join(dir, "pkg")); err != nil {
		t.Fatal(err)
	}
	m := k.Manifest
	alter(dir, &m)
	data, err := json.Marshal(m)
	if err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(filepath.Join(dir, "manifest.json"), data, 0o666); err != nil {
		t.Fatal(err)
	}
	return dir
}

// root makes a folder that looks like an installed Go, with the given tools.
func root(t *testing.T, version string, tools map[string]string) (goroot, toolDir string) {
	t.Helper()
	dir := t.TempDir()
	if err := os.WriteFile(filepath.Join(dir, "VERSION"), []byte(version+"\ntime 2026-01-01T00:00:00Z\n"), 0o666); err != nil {
		t.Fatal(err)
	}
	for name, script := range tools {
		if err := os.WriteFile(filepath.Join(dir, name), []byte("#!/bin/sh\n"+script+"\n"), 0o777); err != nil {
			t.Fatal(err)
		}
	}
	return dir, dir
}

func TestOpenSaysWhatIsWrong(t *testing.T) {
	for _, test := range []struct {
		name  string
		alter func(dir string, m *compile.Manifest)
		path  string // PATH, if not as it is
		want  []string
	}{
		{"no kit", func(dir string, m *compile.Manifest) { m.Format = 0 }, "", []string{"another levelsum", "run levelsum install"}},
		{"no gcc", func(dir string, m *compile.Manifest) { m.CC = "no-such-compiler" }, "", []string{"no-such-compiler", "is not found; install "}},
		{"other Go", func(dir string, m *compile.Manifest) { m.GOROOT, m.Tools = root(t, "go1.99.1", nil) }, "/nowhere",
			[]string{"was installed with go1.", "but go1.99.1 is installed now; run install.sh again"}},
		{"no go", func(dir string, m *compile.Manifest) { m.GOROOT, m.Tools = "/nowhere/go", "/nowhere/go/pkg" }, "/nowhere",
			[]string{"the Go toolchain is gone from /nowhere/go", "install go1."}},
		{"tools gone", func(dir string, m *compile.Manifest) { m.GOROOT, _ = root(t, m.Go, nil); m.Tools = m.GOROOT }, "/nowhere",
			[]string{"run install.sh again"}},
		{"archives gone", func(dir string, m *compile.Manifest) { os.Remove(filepath.Join(dir, "pkg")) }, "",
			[]string{"compiled packages are gone from", "run levelsum install"}},
		{"other platform", func(dir string, m *compile.Manifest) { m.GOARCH = "wasm" }, "", []string{"/wasm, this is "}},
	} {
		t.Run(test.name, func(t *testing.T) {
			dir := altered(t, test.alter)
			if test.path != "" {
				t.Setenv("PATH", test.path)
			}
			_, err := compile.Open(dir, t.TempDir())
			var u *compile.Unavailable
			if !errors.As(err, &u) {
				t.Fatalf("got %v, want an Unavailable", err)
			}
			for _, want := range test.want {
				if !strings.Contains(err.Error(), want) {
					t.Errorf("got %q, which lacks %q", err, want)
				}
			}
		})
	}
	_, err := compile.Open(filepath.Join(t.TempDir(), "none"), t.TempDir())
	if err == nil || !strings.Contains(err.Error(), "nothing has been prepared for this levelsum; run levelsum install") {
		t.Errorf("without a folder: %v", err)
	}
}

// A Go that was moved is found by the path if it is the same one.
func TestOpenFindsMovedGo(t *testing.T) {
	dir := altered(t, func(_ string, m *compile.Manifest) { m.GOROOT, m.Tools = "/nowhere/go", "/nowhere/go/pkg" })
	k, err := compile.Open(dir, t.TempDir())
	if err != nil {
		t.Fatal(err)
	}
	build(t, k, "cell/moved", "c.A", pack("cell/moved", "package cell\nconst A = 1\n"))
}

// CC may be a command with arguments.
func TestCompilerWithArguments(t *testing.T) {
	h, _ := open(t)
	k, err := compile.Open(altered(t, func(_ string, m *compile.Manifest) { m.CC = "env FROM=test " + m.CC }), t.TempDir())
	if err != nil {
		t.Fatal(err)
	}
	p := build(t, k, "cell/cc", "c.Run", pack("cell/cc", "package cell\nfunc Run(any) any { return 5 }\n"))
	if got := run(t, h, p); got != "int: 5\n" {
		t.Errorf("got %q", got)
	}
}

func TestBrokenTools(t *testing.T) {
	_, good := open(t)
	link := func(script string) func(string, *compile.Manifest) {
		return func(_ string, m *compile.Manifest) {
			real := filepath.Join(m.Tools, "compile")
			m.GOROOT, m.Tools = root(t, m.Go, map[string]string{"link": script, "compile": "exec '" + real + "' \"$@\""})
		}
	}
	for _, test := range []struct {
		name  string
		alter func(string, *compile.Manifest)
		want  string
	}{
		{"compiler", func(_ string, m *compile.Manifest) {
			m.GOROOT, m.Tools = root(t, m.Go, map[string]string{"compile": "echo internal compiler error: it broke; exit 2", "link": "exit 1"})
		}, "the Go compile tool failed: exit status 2\ninternal compiler error: it broke"},
		{"linker", link("echo cannot find ld; exit 1"), "the Go link tool failed: exit status 1\ncannot find ld"},
		{"full disk", link("echo link: write a.out: no space left on device; exit 1"), "no space left for compiled cells in "},
	} {
		t.Run(test.name, func(t *testing.T) {
			k, err := compile.Open(altered(t, test.alter), t.TempDir())
			if err != nil {
				t.Fatal(err)
			}
			_, err = k.Build(t.Context(), nil, pack("", "package main\n"))
			if err == nil || !strings.HasPrefix(err.Error(), test.want) {
				t.Errorf("got %v, want %q", err, test.want)
			}
		})
	}
	if good.Manifest.Tools == "" {
		t.Error("the shared kit was altered")
	}
}

// Go is updated or removed while a kit is open: that is said, and not that the
// cell is wrong.
func TestGoReplacedWhileOpen(t *testing.T) {
	for _, test := range []struct {
		name    string
		replace func(goroot string) error
		want    string
	}{
		{"another version", func(goroot string) error {
			return errors.Join(os.WriteFile(filepath.Join(goroot, "VERSION"), []byte("go1.99.1\n"), 0o666),
				os.WriteFile(filepath.Join(goroot, "compile"), []byte("#!/bin/sh\necho \"$5.go:1:8: could not import fmt (object is [linux amd64 go1.26.8])\"; exit 1\n"), 0o777))
		}, "while this kernel ran go1.99.1 was put in its place; run install.sh again and restart the kernel"},
		{"none", os.RemoveAll, " was removed while this kernel ran; install go1."},
	} {
		t.Run(test.name, func(t *testing.T) {
			var goroot string
			k, err := compile.Open(altered(t, func(_ string, m *compile.Manifest) {
				m.GOROOT, m.Tools = root(t, m.Go, map[string]string{"compile": "exit 1", "link": "exit 1"})
				goroot = m.GOROOT
			}), t.TempDir())
			if err != nil {
				t.Fatal(err)
			}
			if err := test.replace(goroot); err != nil {
				t.Fatal(err)
			}
			_, err = k.Build(t.Context(), nil, pack("", "package main\nimport _ \"fmt\"\n"))
			var u *compile.Unavailable
			if !errors.As(err, &u) || !strings.Contains(err.Error(), test.want) {
				t.Errorf("got %v, want %q", err, test.want)
			}
		})
	}
}

func TestKitRemovedWhileOpen(t *testing.T) {
	dir := altered(t, func(string, *compile.Manifest) {})
	k, err := compile.Open(dir, t.TempDir())
	if err != nil {
		t.Fatal(err)
	}
	if err := os.RemoveAll(dir); err != nil {
		t.Fatal(err)
	}
	_, err = k.Build(t.Context(), nil, pack("", "package main\nimport _ \"fmt\"\n"))
	var u *compile.Unavailable
	if !errors.As(err, &u) || u.Do != "restart the kernel" {
		t.Errorf("got %v", err)
	}
}

func TestKitOffersWhatCellsUse(t *testing.T) {
	_, k := open(t)
	paths := k.Paths()
	for _, want := range []string{
		"fmt", "math", "maps", "slices", "iter", "net/http", "encoding/json", "os/exec",
		"gonum.org/v1/gonum/mat", "gonum.org/v1/gonum/optimize", "gonum.org/v1/gonum/stat/distuv", "gonum.org/v1/plot/plotter", "gonum.org/v1/plot/vg/vgsvg",
		"levelsum/statmech", "levelsum/statmech/unit", "levelsum/display",
	} {
		if !slices.Contains(paths, want) {
			t.Errorf("%s cannot be imported", want)
		}
	}
	for _, p := range paths {
		if strings.Contains("/"+p+"/", "/internal/") || strings.HasPrefix(p, "levelsum/kernel") || strings.HasPrefix(p, "vendor/") || strings.HasPrefix(p, "cmd/") {
			t.Errorf("%s can be imported", p)
		}
	}
}

func TestLookupServesTypes(t *testing.T) {
	_, k := open(t)
	imp := importer.ForCompiler(token.NewFileSet(), "gc", k.Lookup)
	for _, path := range k.Paths() {
		p, err := imp.Import(path)
		if err != nil {
			t.Errorf("%s: %v", path, err)
			continue
		}
		if name, ok := k.Name(path); !ok || name != p.Name() {
			t.Errorf("%s is named %s, the kit says %q", path, p.Name(), name)
		}
	}
	if _, err := k.Lookup("no/such"); err == nil {
		t.Error("Lookup of a package that is not there succeeds")
	}
}

// Without a C compiler there is a kit all the same, for the type checker.
func TestKitWithoutC(t *testing.T) {
	_, k := open(t)
	bin := t.TempDir()
	if err := os.Symlink(filepath.Join(k.Manifest.GOROOT, "bin", "go"), filepath.Join(bin, "go")); err != nil {
		t.Fatal(err)
	}
	path := os.Getenv("PATH")
	t.Setenv("PATH", bin)
	dir := filepath.Join(t.TempDir(), "kit")
	_, err := compile.Prepare(t.Context(), dir, k.Manifest.Source, compile.Options{Cache: t.TempDir()})
	var u *compile.Unavailable
	if !errors.As(err, &u) || !strings.Contains(err.Error(), "the C compiler "+k.Manifest.CC) {
		t.Fatalf("got %v, want that there is no C compiler", err)
	}
	// Now the go command goes too; later the C compiler is installed.
	t.Setenv("PATH", "/nowhere")
	types, err := compile.OpenTypes(dir)
	if err != nil {
		t.Fatal(err)
	}
	if !slices.Equal(types.Paths(), k.Paths()) {
		t.Errorf("%d packages without a C compiler, %d with it", len(types.Paths()), len(k.Paths()))
	}
	imp := importer.ForCompiler(token.NewFileSet(), "gc", types.Lookup)
	for _, p := range []string{"net", "levelsum/statmech", "gonum.org/v1/gonum/mat"} {
		if _, err := imp.Import(p); err != nil {
			t.Errorf("%s: %v", p, err)
		}
	}
	t.Setenv("PATH", path)
	if _, err := compile.Open(dir, t.TempDir()); err == nil || !strings.Contains(err.Error(), "installed when there was no C compiler; run install.sh again") {
		t.Errorf("with a C compiler: %v", err)
	}
}

func TestListingServesTypes(t *testing.T) {
	_, k := open(t)
	l := compile.List(filepath.Join("..", ".."))
	if got, want := l.Paths(), k.Paths(); !slices.Equal(got, want) {
		t.Errorf("the listing offers %d packages, the kit %d others", len(got), len(want))
	}
	imp := importer.ForCompiler(token.NewFileSet(), "gc", l.Lookup)
	p, err := imp.Import("levelsum/display")
	if err != nil || p.Scope().Lookup("Viewer") == nil {
		t.Errorf("levelsum/display: %v, %v", p, err)
	}
	if _, err := l.Lookup("no/such"); err == nil {
		t.Error("Lookup of a package that is not there succeeds")
	}
}
