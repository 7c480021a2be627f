package compile

import (
	"bytes"
	"context"
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"os"
	"os/exec"
	"path"
	"path/filepath"
	"regexp"
	"runtime"
	"slices"
	"strings"
)

// Options say what a kit is made for.
type Options struct {
	// Race makes the kit of a host that was built with -race.
	Race bool
	// Executable is the program that the kit is made for, if it is one that
	// Retire should look after.
	Executable string
	// Cache is the folder for built code; empty means the default.
	Cache string
	// Offer are import paths of further packages that cells may import; tests
	// have some.
	Offer []string
	// Docs stores the documentation of what cells may import in the kit, so that
	// it is there without the source.
	Docs bool
	// Log is told, a line at a time, what takes long. Nil means nobody.
	Log io.Writer
}

// offered are the patterns of the packages that cells may import, beside the
// standard library. Those of the module itself are relative to it.
var offered = []string{
	"./statmech/...",
	"./display/...",
	"gonum.org/v1/gonum/...",
	"gonum.org/v1/plot/...",
}

// needed are packages that compiled cells import without the user's doing, if
// the module has them.
var needed = []string{"./kernel/runner/guard"}

// A listed is a package as go list prints it.
type listed struct {
	ImportPath, Name, Export, DepsErrors string
	Dir                                  string
	Standard, DepOnly                    bool
	Imports                              []string
	Module                               *struct {
		Path, GoVersion string
		Main            bool
	}
	Error *struct{ Err string }
}

// Prepare compiles all that cells may import, from the module whose source is
// in the folder source, and makes a kit of it in dir. What was in dir is
// replaced once the new kit is complete. Without a C compiler, or where there
// are no plugins, the kit serves the type checker only; then the error is the
// [*Unavailable] that says so.
func Prepare(ctx context.Context, dir, source string, opt Options) (*Kit, error) {
	if !exists(filepath.Join(source, "go.mod")) {
		return nil, &Unavailable{Reason: "there is no Go module in " + source, Do: "name the folder of levelsum's source with -source"}
	}
	source, err := filepath.Abs(source)
	if err != nil {
		return nil, err
	}
	if dir, err = filepath.Abs(dir); err != nil {
		return nil, err
	}
	t, err := find(ctx, source)
	if err != nil {
		return nil, err
	}
	if t.version != runtime.Version() {
		return nil, otherGo(runtime.Version(), t.version)
	}
	m := Manifest{
		Format: format, Go: t.version, GOROOT: t.goroot, Tools: t.tools, GOOS: runtime.GOOS, GOARCH: runtime.GOARCH,
		Race: opt.Race, Source: source, Executable: opt.Executable, CC: t.cc, TypesOnly: !t.plugins,
	}
	paths, err := t.importable(ctx, source)
	if err != nil {
		return nil, err
	}
	paths = append(paths, opt.Offer...)
	if opt.Log != nil {
		fmt.Fprintf(opt.Log, "compiling %d packages for cells; the first time this takes some minutes\n", len(paths))
	}
	roots := slices.Clone(paths)
	for _, p := range needed {
		if exists(filepath.Join(source, filepath.FromSlash(p))) {
			roots = append(roots, p)
		}
	}
	pkgs, err := t.export(ctx, source, opt.Race, roots)
	if err != nil {
		return nil, err
	}
	if err := m.store(dir, pkgs, paths, opt.Docs); err != nil {
		return nil, err
	}
	cache := opt.Cache
	if cache == "" {
		if cache, err = BuiltDir(); err != nil {
			return nil, err
		}
	}
	return Open(dir, cache)
}

// store puts the packages' archives and the manifest, which it completes, into
// the folder dir. Of the packages, cells may import those in paths; docs stores
// their documentation too.
func (m *Manifest) store(dir string, pkgs []listed, paths []string, docs bool) error {
	if err := os.MkdirAll(filepath.Dir(dir), 0o777); err != nil {
		return &CacheError{filepath.Dir(dir), err}
	}
	tmp, err := os.MkdirTemp(filepath.Dir(dir), filepath.Base(dir)+".new-")
	if err != nil {
		return &CacheError{filepath.Dir(dir), err}
	}
	defer os.RemoveAll(tmp)
	for _, p := range pkgs {
		if p.Module != nil && p.Module.Main {
			m.Module, m.Lang = p.Module.Path, language(p.Module.GoVersion)
		}
		if p.Export == "" {
			continue // unsafe, which others import
		}
		if err := keep(p.Export, filepath.Join(tmp, "pkg", filepath.FromSlash(p.ImportPath)+".a")); err != nil {
			return &CacheError{dir, err}
		}
		hash, err := contentHash(p.Export)
		if err != nil {
			return err
		}
		m.Archives = append(m.Archives, &Archive{
			Path: p.ImportPath, Name: p.Name, Hash: hash, Standard: p.Standard, Import: slices.Contains(paths, p.ImportPath),
		})
	}
	if docs {
		if err := storeDocs(filepath.Join(tmp, docsName), pkgs, paths); err != nil {
			return &CacheError{dir, err}
		}
	}
	slices.SortFunc(m.Archives, func(a, b *Archive) int { return strings.Compare(a.Path, b.Path) })
	m.ID = m.identity()
	data, err := json.MarshalIndent(m, "", "\t")
	if err != nil {
		return err
	}
	err = os.WriteFile(filepath.Join(tmp, manifestName), append(data, '\n'), 0o666)
	if err == nil {
		err = os.Chmod(tmp, 0o755)
	}
	if err == nil {
		err = replace(tmp, dir)
	}
	if err != nil {
		return &CacheError{dir, err}
	}
	return nil
}

// replace moves the folder new to old's place.
func replace(new, old string) error {
	aside := new + ".old"
	err := os.Rename(old, aside)
	if err != nil && !errors.Is(err, os.ErrNotExist) {
		return err
	}
	defer os.RemoveAll(aside)
	if err := os.Rename(new, old); err != nil {
		if exists(filepath.Join(old, manifestName)) {
			return nil // another process was faster with the same kit
		}
		return errors.Join(err, os.Rename(aside, old))
	}
	return nil
}

// language turns go.mod's version into the -lang flag: "1.26.0" into "go1.26".
func language(v string) string {
	parts := strings.SplitN(v, ".", 3)
	if len(parts) < 2 {
		return "go" + v
	}
	return "go" + parts[0] + "." + parts[1]
}

// identity hashes what decides whether built code fits.
func (m *Manifest) identity() string {
	h := sha256.New()
	fmt.Fprintln(h, m.Format, m.Go, m.GOOS, m.GOARCH, m.Race, m.Lang)
	for _, a := range m.Archives {
		fmt.Fprintln(h, a.Path, a.Hash)
	}
	return hex.EncodeToString(h.Sum(nil))[:32]
}

// importable lists the packages that cells may import.
func (t *toolchain) importable(ctx context.Context, source string) ([]string, error) {
	patterns := append([]string{"std"}, offered...)
	pkgs, err := t.list(ctx, source, "-e", "-json=ImportPath,Name,Standard,Imports,Error,DepOnly", patterns)
	if err != nil {
		return nil, err
	}
	var paths []string
	for _, p := range pkgs {
		switch {
		case p.Error != nil, p.Name == "main", p.ImportPath == "unsafe": // unsafe has no archive
		case p.ImportPath == "runtime/cgo", p.ImportPath == "runtime/race": // the toolchain's own; not on every platform
		case slices.Contains(strings.Split(p.ImportPath, "/"), "internal"), strings.HasPrefix(p.ImportPath, "vendor/"):
		case !p.Standard && slices.Contains(p.Imports, "testing"): // helpers of a library's own tests
		default:
			paths = append(paths, p.ImportPath)
		}
	}
	slices.Sort(paths)
	return paths, nil
}

// export compiles packages and what they import, as a plugin's build does, or,
// where there are no plugins, as any build does.
func (t *toolchain) export(ctx context.Context, source string, race bool, paths []string) ([]listed, error) {
	args := []string{"-trimpath", "-pgo=off", "-export", "-deps", "-json=ImportPath,Name,Export,Dir,Standard,Module,Error"}
	if t.plugins {
		args = append(args, "-buildmode=plugin")
		paths = append(slices.Clone(paths), "runtime/cgo") // the linker wants it
	}
	if t.plugins && race {
		args = append(args, "-race")
		paths = append(paths, "runtime/race")
	}
	pkgs, err := t.list(ctx, source, args, "--", paths)
	if err != nil {
		return nil, err
	}
	for _, p := range pkgs {
		if p.Error != nil {
			return nil, fmt.Errorf("package %s cannot be compiled: %s", p.ImportPath, strings.TrimSpace(p.Error.Err))
		}
	}
	return pkgs, nil
}

// list runs go list; each part is an argument or several.
func (t *toolchain) list(ctx context.Context, source string, parts ...any) ([]listed, error) {
	args := []string{"list"}
	for _, p := range parts {
		switch p := p.(type) {
		case string:
			args = append(args, p)
		case []string:
			args = append(args, p...)
		}
	}
	cmd := exec.CommandContext(ctx, t.goCmd, args...)
	cmd.Dir = source
	cmd.Env = append(t.environ(), "PWD="+source)
	var stderr bytes.Buffer
	cmd.Stderr = &stderr
	out, err := cmd.Output()
	if err != nil {
		if ctx.Err() != nil {
			return nil, ctx.Err()
		}
		return nil, &ToolError{"list", err, stderr.String()}
	}
	var pkgs []listed
	for dec := json.NewDecoder(bytes.NewReader(out)); ; {
		var p listed
		if err := dec.Decode(&p); err == io.EOF {
			return pkgs, nil
		} else if err != nil {
			return nil, fmt.Errorf("go list printed what it should not: %w", err)
		}
		pkgs = append(pkgs, p)
	}
}

// keep makes file hold what from holds, for good. The build cache, where the
// archives are, is trimmed by Go; a second name for the same file outlives that
// and costs nothing. Across file systems it is copied.
func keep(from, file string) error {
	if err := os.MkdirAll(filepath.Dir(file), 0o777); err != nil {
		return err
	}
	if os.Link(from, file) == nil {
		return nil
	}
	in, err := os.Open(from)
	if err != nil {
		return err
	}
	defer in.Close()
	out, err := os.Create(file)
	if err != nil {
		return err
	}
	if _, err := io.Copy(out, in); err != nil {
		out.Close()
		return err
	}
	return out.Close()
}

var cached = regexp.MustCompile(`^([0-9a-f]{64})-d$`)

// contentHash hashes a file; one in Go's build cache is named by its hash.
func contentHash(file string) (string, error) {
	if m := cached.FindStringSubmatch(path.Base(filepath.ToSlash(file))); m != nil {
		return m[1], nil
	}
	f, err := os.Open(file)
	if err != nil {
		return "", err
	}
	defer f.Close()
	h := sha256.New()
	if _, err := io.Copy(h, f); err != nil {
		return "", err
	}
	return hex.EncodeToString(h.Sum(nil)), nil
}
