package compile

import (
	"context"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"strings"
	"sync"
)

// manifestName is the manifest's file in a kit's folder.
const manifestName = "manifest.json"

// format is the version of the manifest that this package reads and writes.
const format = 1

// A Manifest says what a kit was made of.
type Manifest struct {
	Format int    `json:"format"`
	ID     string `json:"id"` // hash of all below that changes what is built
	Go     string `json:"go"` // "go1.26.8"
	GOROOT string `json:"goroot"`
	Tools  string `json:"tools"` // folder of the compiler and the linker
	GOOS   string `json:"goos"`
	GOARCH string `json:"goarch"`
	Race   bool   `json:"race"`
	Lang   string `json:"lang"` // language of cells, "go1.26"
	Module string `json:"module"`
	// Source is where the module's source stood when the kit was made.
	Source string `json:"source"`
	// Executable is the program that the kit was made for.
	Executable string `json:"executable,omitempty"`
	CC         string `json:"cc"`
	// TypesOnly says that there was no C compiler, or that the platform has no
	// plugins: the archives serve the type checker only.
	TypesOnly bool       `json:"types_only,omitempty"`
	Archives  []*Archive `json:"archives"`
}

// An Archive is one compiled package of a kit.
type Archive struct {
	Path string `json:"path"`
	// Hash is that of the archive's content.
	Hash     string `json:"hash"`
	Standard bool   `json:"standard,omitempty"`
	// Import says that cells may import it; the others are there because
	// something imports them.
	Import bool `json:"import,omitempty"`
	// Name is what the package's clause says.
	Name string `json:"name"`
}

// A Kit is an opened kit. It is safe for concurrent use.
type Kit struct {
	*Types
	Cache *Cache

	config  []byte // importcfg lines of all archives
	compile string // the compiler
	link    string // the linker

	mu    sync.Mutex           // guards known
	known map[string]*compiled // packages of cells by path
}

// Open opens the kit in dir, with its built code kept in the folder cache. The
// error is an [*Unavailable] if the kit cannot be used.
func Open(dir, cache string) (*Kit, error) {
	if err := Supported(); err != nil {
		return nil, err
	}
	types, err := OpenTypes(dir)
	if err != nil {
		return nil, err
	}
	k := &Kit{Types: types, known: map[string]*compiled{}, Cache: &Cache{Dir: cache}}
	m := &k.Manifest
	if err := k.tools(); err != nil {
		return nil, err
	}
	if err := findCC(m.CC); err != nil {
		return nil, err
	}
	if m.TypesOnly {
		return nil, &Unavailable{Reason: "levelsum was installed when there was no C compiler", Do: "run install.sh again"}
	}
	for _, a := range m.Archives {
		k.config = fmt.Appendf(k.config, "packagefile %s=%s\n", a.Path, k.file(a.Path))
	}
	return k, nil
}

// findCC looks for the C compiler, a command that may have arguments.
func findCC(cc string) error {
	if words := strings.Fields(cc); len(words) > 0 {
		if _, err := exec.LookPath(words[0]); err == nil {
			return nil
		}
	}
	do := "install gcc with your system's packages"
	if runtime.GOOS == "darwin" {
		do = "install the command line developer tools (xcode-select --install)"
	}
	return &Unavailable{Reason: fmt.Sprintf("the C compiler %s, with which Go links compiled cells, is not found", cc), Do: do}
}

// Supported says whether this platform has plugins.
func Supported() error {
	switch runtime.GOOS {
	case "linux", "darwin":
		return nil
	}
	return &Unavailable{Reason: "cells cannot be compiled on " + runtime.GOOS, Do: "Linux and macOS can"}
}

// tools finds compiler and linker of the kit's own Go version: where they were,
// or in the root of the go command on the path.
func (k *Kit) tools() error {
	m := &k.Manifest
	dir := m.Tools
	installed, err := rootVersion(m.GOROOT)
	if err != nil || installed != m.Go || !exists(filepath.Join(dir, "compile")) {
		t, terr := find(context.Background(), "")
		switch {
		case terr != nil && err != nil:
			return &Unavailable{Reason: fmt.Sprintf("the Go toolchain is gone from %s, and there is none on the path", m.GOROOT), Do: "install " + m.Go + ", or any newer Go, and run install.sh again"}
		case terr != nil:
			return otherGo(m.Go, installed)
		case t.version != m.Go:
			return otherGo(m.Go, t.version)
		}
		dir = t.tools
		m.GOROOT = t.goroot
	}
	k.compile = filepath.Join(dir, "compile")
	k.link = filepath.Join(dir, "link")
	for _, tool := range []string{k.compile, k.link} {
		if !exists(tool) {
			return &Unavailable{Reason: "the Go toolchain lacks " + tool, Do: "install " + m.Go + " again"}
		}
	}
	return nil
}

func otherGo(want, have string) error {
	return &Unavailable{Reason: fmt.Sprintf("levelsum was installed with %s, but %s is installed now", want, have), Do: "run install.sh again"}
}

// rootVersion reads the version of the Go installed at root.
func rootVersion(root string) (string, error) {
	data, err := os.ReadFile(filepath.Join(root, "VERSION"))
	if err != nil {
		return "", err
	}
	line, _, _ := strings.Cut(string(data), "\n")
	return strings.TrimSpace(line), nil
}

func exists(file string) bool {
	_, err := os.Stat(file)
	return err == nil
}
