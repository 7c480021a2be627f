package compile

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"slices"
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
	Executable string     `json:"executable,omitempty"`
	CC         string     `json:"cc"`
	Archives   []*Archive `json:"archives"`
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
	Dir      string
	Manifest Manifest
	Cache    *Cache

	archives map[string]*Archive
	config   []byte // importcfg lines of all archives
	compile  string // the compiler
	link     string // the linker

	mu    sync.Mutex           // guards known
	known map[string]*compiled // packages of cells by path
}

// Open opens the kit in dir, with its built code kept in the folder cache. The
// error is an [*Unavailable] if the kit cannot be used.
func Open(dir, cache string) (*Kit, error) {
	if err := Supported(); err != nil {
		return nil, err
	}
	data, err := os.ReadFile(filepath.Join(dir, manifestName))
	switch {
	case errors.Is(err, fs.ErrNotExist):
		return nil, &Unavailable{Reason: "cells cannot be compiled yet: nothing has been prepared for this levelsum", Do: "run levelsum install"}
	case err != nil:
		return nil, &Unavailable{Reason: "the compiled packages in " + dir + " cannot be read", Do: "run levelsum install", Err: err}
	}
	k := &Kit{Dir: dir, archives: map[string]*Archive{}, known: map[string]*compiled{}, Cache: &Cache{Dir: cache}}
	if err := json.Unmarshal(data, &k.Manifest); err != nil || k.Manifest.Format != format {
		return nil, &Unavailable{Reason: "the compiled packages in " + dir + " are those of another levelsum", Do: "run levelsum install", Err: err}
	}
	m := &k.Manifest
	if m.GOOS != runtime.GOOS || m.GOARCH != runtime.GOARCH {
		return nil, &Unavailable{Reason: fmt.Sprintf("the compiled packages in %s are for %s/%s, this is %s/%s", dir, m.GOOS, m.GOARCH, runtime.GOOS, runtime.GOARCH), Do: "run levelsum install"}
	}
	if err := k.tools(); err != nil {
		return nil, err
	}
	if _, err := exec.LookPath(m.CC); err != nil {
		return nil, &Unavailable{Reason: fmt.Sprintf("the C compiler %s, with which Go links compiled cells, is not found", m.CC), Do: installCC()}
	}
	var b []byte
	missing := 0
	for _, a := range m.Archives {
		k.archives[a.Path] = a
		file := k.file(a.Path)
		if _, err := os.Stat(file); err != nil {
			missing++
		}
		b = fmt.Appendf(b, "packagefile %s=%s\n", a.Path, file)
	}
	if missing > 0 {
		return nil, &Unavailable{Reason: fmt.Sprintf("%d of the %d compiled packages are gone from %s", missing, len(m.Archives), dir), Do: "run levelsum install"}
	}
	k.config = b
	return k, nil
}

// Supported says whether this platform has plugins.
func Supported() error {
	switch runtime.GOOS {
	case "linux", "darwin":
		return nil
	}
	return &Unavailable{Reason: "cells cannot be compiled on " + runtime.GOOS, Do: "Linux and macOS can"}
}

func installCC() string {
	if runtime.GOOS == "darwin" {
		return "install the command line developer tools (xcode-select --install)"
	}
	return "install gcc with your system's packages"
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

// file is the path of a package's archive.
func (k *Kit) file(path string) string {
	return filepath.Join(k.Dir, "pkg", filepath.FromSlash(path)+".a")
}

// Lookup opens the archive of a package, for the type information in it. It is
// the lookup function that go/importer wants.
func (k *Kit) Lookup(path string) (io.ReadCloser, error) {
	if k.archives[path] == nil {
		return nil, fmt.Errorf("package %s is not among those that cells can use", path)
	}
	return os.Open(k.file(path))
}

// Paths lists the packages that cells may import, sorted.
func (k *Kit) Paths() []string {
	var ps []string
	for _, a := range k.Manifest.Archives {
		if a.Import {
			ps = append(ps, a.Path)
		}
	}
	slices.Sort(ps)
	return ps
}

// Name returns the name that a package of the kit gives itself.
func (k *Kit) Name(path string) (string, bool) {
	a := k.archives[path]
	if a == nil {
		return "", false
	}
	return a.Name, true
}
