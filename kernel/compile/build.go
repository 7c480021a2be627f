package compile

import (
	"bytes"
	"context"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"go/parser"
	"go/token"
	"maps"
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"slices"
	"strconv"
	"strings"
	"syscall"
	"time"
)

// A Package is the source of one package of cells. Its path names it in all
// imports and must be used for one content only, since a program can hold one
// package of a path: let a hash of the content be part of it ("cell/k3f9...").
type Package struct {
	Path string
	// Files are the sources by file name ("a.go"). Positions in errors and
	// stacks are those of the line directives in them.
	Files map[string][]byte
}

// A Plugin is what Build made.
type Plugin struct {
	File string // the plugin, for plugin.Open
	// Path is the plugin's own package path.
	Path     string
	Compiled int  // packages compiled now, main included
	Linked   bool // linked now, not found in the cache
	Took     time.Duration
}

// compiled is a package of cells that this kit has been given.
type compiled struct {
	Package
	key     string
	imports []*compiled // those of cells
}

// Build compiles packages and links a plugin of main, whose clause is "package
// main" and whose Path is ignored. The packages may come in any order; they and
// main may also import packages that an earlier call was given, which need not
// be given again. What is in the cache is not built again.
//
// Errors: a [*SourceError] if the compiler refuses a package, a [*CacheError]
// if what was built cannot be kept, a [*ToolError] if a tool does not do its
// work, else the context's.
func (k *Kit) Build(ctx context.Context, pkgs []Package, main Package) (*Plugin, error) {
	start := time.Now()
	order, err := k.admit(pkgs)
	if err != nil {
		return nil, err
	}
	main.Path = ""
	m, err := k.resolve(main, nil)
	if err != nil {
		return nil, err
	}
	m.Path = "cell/main/" + m.key[:24]
	p := &Plugin{Path: m.Path}
	if file, ok := k.Cache.get(m.key, ".so"); ok {
		p.File, p.Took = file, time.Since(start)
		return p, nil
	}
	dir, err := k.Cache.scratch()
	if err != nil {
		return nil, err
	}
	defer os.RemoveAll(dir)
	// Everything that the link needs, and everything that was asked for.
	if p.Compiled, err = k.fill(ctx, dir, deps(m, order)); err != nil {
		return nil, err
	}
	if p.File, err = k.plugin(ctx, dir, m); err != nil {
		return nil, err
	}
	p.Compiled++ // main
	p.Linked, p.Took = true, time.Since(start)
	return p, nil
}

// Compile compiles packages without linking, so that a later Build finds them
// in the cache.
func (k *Kit) Compile(ctx context.Context, pkgs []Package) error {
	order, err := k.admit(pkgs)
	if err != nil {
		return err
	}
	dir, err := k.Cache.scratch()
	if err != nil {
		return err
	}
	defer os.RemoveAll(dir)
	_, err = k.fill(ctx, dir, deps(nil, order))
	return err
}

// admit makes packages known and returns them, imports before importers.
func (k *Kit) admit(pkgs []Package) ([]*compiled, error) {
	given := map[string]Package{}
	for _, p := range pkgs {
		if _, twice := given[p.Path]; twice {
			return nil, fmt.Errorf("package %s is given twice", p.Path)
		}
		if p.Path == "" || k.archives[p.Path] != nil {
			return nil, fmt.Errorf("%q cannot be the path of a package of cells", p.Path)
		}
		given[p.Path] = p
	}
	var order []*compiled
	done := map[string]*compiled{}
	var visit func(path string, above []string) (*compiled, error)
	visit = func(path string, above []string) (*compiled, error) {
		if c := done[path]; c != nil {
			return c, nil
		}
		p, ok := given[path]
		if !ok {
			return nil, nil
		}
		if slices.Contains(above, path) {
			return nil, fmt.Errorf("packages import each other: %s", strings.Join(append(above, path), " -> "))
		}
		c, err := k.resolve(p, func(imp string) (*compiled, error) { return visit(imp, append(above, path)) })
		if err != nil {
			return nil, err
		}
		k.mu.Lock()
		old := k.known[path]
		if old == nil {
			k.known[path] = c
		}
		k.mu.Unlock()
		if old != nil {
			if old.key != c.key {
				return nil, fmt.Errorf("package %s has another content than before", path)
			}
			c = old
		}
		done[path] = c
		order = append(order, c)
		return c, nil
	}
	for _, p := range pkgs {
		if _, err := visit(p.Path, nil); err != nil {
			return nil, err
		}
	}
	return order, nil
}

// resolve finds a package's imports and its key. Imports are looked for with
// find first, if it is not nil, then among the known.
func (k *Kit) resolve(p Package, find func(string) (*compiled, error)) (*compiled, error) {
	c := &compiled{Package: p}
	h := sha256.New()
	fmt.Fprintf(h, "1 %s %s %d\n", k.Manifest.ID, p.Path, len(p.Files))
	seen := map[string]bool{}
	fset := token.NewFileSet()
	for _, name := range slices.Sorted(maps.Keys(p.Files)) {
		if name != filepath.Base(name) || !strings.HasSuffix(name, ".go") {
			return nil, fmt.Errorf("%q cannot be a file of a package of cells", name)
		}
		src := p.Files[name]
		fmt.Fprintf(h, "file %q %d\n", name, len(src))
		h.Write(src)
		f, err := parser.ParseFile(fset, name, src, parser.ImportsOnly)
		if err != nil {
			return nil, &SourceError{Package: p.Path, Lines: diagnostics(err.Error())}
		}
		for _, spec := range f.Imports {
			path, err := strconv.Unquote(spec.Path.Value)
			if err != nil || path == "unsafe" || k.archives[path] != nil || seen[path] {
				continue
			}
			seen[path] = true
			var imp *compiled
			if find != nil {
				if imp, err = find(path); err != nil {
					return nil, err
				}
			}
			if imp == nil {
				k.mu.Lock()
				imp = k.known[path]
				k.mu.Unlock()
			}
			if imp == nil {
				pos := fset.Position(spec.Pos())
				return nil, &SourceError{Package: p.Path, Lines: []Diagnostic{{
					File: pos.Filename, Line: pos.Line, Col: pos.Column,
					Message: fmt.Sprintf("package %s is not among those that cells can use", path),
				}}}
			}
			c.imports = append(c.imports, imp)
			fmt.Fprintf(h, "import %s %s\n", path, imp.key)
		}
	}
	c.key = hex.EncodeToString(h.Sum(nil))
	return c, nil
}

// deps lists all packages that main needs, then the others wanted, imports
// before importers; main may be nil and is not among them.
func deps(main *compiled, others []*compiled) []*compiled {
	var out []*compiled
	seen := map[*compiled]bool{}
	var visit func(*compiled)
	visit = func(c *compiled) {
		if seen[c] {
			return
		}
		seen[c] = true
		for _, i := range c.imports {
			visit(i)
		}
		if c != main {
			out = append(out, c)
		}
	}
	if main != nil {
		visit(main)
	}
	for _, c := range others {
		visit(c)
	}
	return out
}

// fill compiles into the cache those packages that it lacks, as many at once as
// there are processors, each after its imports, and returns their number. If
// several are refused, the error is that of the first in the list.
func (k *Kit) fill(ctx context.Context, dir string, cs []*compiled) (n int, err error) {
	type result struct {
		done chan struct{} // closed when err is set
		err  error
	}
	ctx, cancel := context.WithCancel(ctx)
	defer cancel()
	results := map[*compiled]*result{}
	turn := make(chan struct{}, runtime.GOMAXPROCS(0))
	for _, c := range cs {
		if _, ok := k.Cache.get(c.key, ".a"); ok {
			continue
		}
		n++
		r := &result{done: make(chan struct{})}
		results[c] = r
		var after []*result
		for _, i := range c.imports {
			if results[i] != nil {
				after = append(after, results[i])
			}
		}
		go func() {
			defer close(r.done)
			for _, a := range after {
				<-a.done
				if a.err != nil {
					r.err = a.err
					return
				}
			}
			turn <- struct{}{}
			defer func() { <-turn }()
			var tmp string
			if tmp, r.err = k.compileIn(ctx, dir, c); r.err == nil {
				_, r.err = k.Cache.put(tmp, c.key, ".a")
			}
		}()
	}
	for _, c := range cs {
		r := results[c]
		if r == nil {
			continue
		}
		<-r.done
		if r.err != nil && err == nil {
			err = r.err
			cancel()
		}
	}
	return n, err
}

// compileIn compiles one package in a folder of its own below dir and returns
// the archive.
func (k *Kit) compileIn(ctx context.Context, dir string, c *compiled) (string, error) {
	work := filepath.Join(dir, c.key[:16])
	if err := os.Mkdir(work, 0o777); err != nil {
		return "", &CacheError{k.Cache.Dir, err}
	}
	out := filepath.Join(work, "p.a")
	config := filepath.Join(work, "imports")
	if err := k.write(config, k.importConfig(deps(c, nil))); err != nil {
		return "", err
	}
	args := []string{
		"-o", out, "-trimpath", work + "=>", "-p", c.Path, "-lang=" + k.Manifest.Lang, "-complete", "-pack", "-dynlink",
		"-buildid", c.key[:20] + "/" + c.key[:20], "-goversion", k.Manifest.Go, "-c=2", "-e", "-nolocalimports", "-importcfg", config,
	}
	if k.Manifest.Race {
		args = append(args, "-race")
	}
	for _, name := range slices.Sorted(maps.Keys(c.Files)) {
		file := filepath.Join(work, name)
		if err := k.write(file, c.Files[name]); err != nil {
			return "", err
		}
		args = append(args, file)
	}
	output, err := k.run(ctx, work, k.compile, args)
	if err != nil && ctx.Err() == nil {
		if other := k.replaced(); other != nil {
			return "", other
		}
	}
	var exit *exec.ExitError
	if errors.As(err, &exit) && !k.gone() && exit.ExitCode() > 0 && !noSpace.MatchString(output) {
		if ds := diagnostics(strings.ReplaceAll(output, work+string(filepath.Separator), "")); len(ds) > 0 && ds[0].Line > 0 {
			return "", &SourceError{Package: c.Path, Lines: ds}
		}
	}
	if err != nil {
		return "", k.toolError("compile", err, output)
	}
	return out, nil
}

// plugin compiles main and links it.
func (k *Kit) plugin(ctx context.Context, dir string, m *compiled) (string, error) {
	archive, err := k.compileIn(ctx, dir, m)
	if err != nil {
		return "", err
	}
	out := filepath.Join(dir, "plugin.so")
	config := filepath.Join(dir, "link")
	lines := append(k.importConfig(deps(m, nil)), "packagefile "+m.Path+"="+archive+"\n"...)
	if err := k.write(config, lines); err != nil {
		return "", err
	}
	args := []string{
		"-o", out, "-importcfg", config, "-pluginpath", m.Path, "-buildmode=plugin", "-buildid", m.key[:20], "-s", "-w", "-extld=" + k.Manifest.CC,
	}
	if k.Manifest.GOOS == "linux" {
		// Without these the linker runs the C compiler twice more, to see what
		// it can do.
		args = append(args, "-B", "none", "-compressdwarf=false")
	}
	if k.Manifest.Race {
		args = append(args, "-race")
	}
	output, err := k.run(ctx, dir, k.link, append(args, archive))
	if err != nil {
		return "", k.toolError("link", err, output)
	}
	return k.Cache.put(out, m.key, ".so")
}

// importConfig tells the tools where the archives are.
func (k *Kit) importConfig(cells []*compiled) []byte {
	b := bytes.Clone(k.config)
	for _, c := range cells {
		b = fmt.Appendf(b, "packagefile %s=%s\n", c.Path, k.Cache.name(c.key, ".a"))
	}
	return b
}

func (k *Kit) write(file string, data []byte) error {
	if err := os.WriteFile(file, data, 0o666); err != nil {
		return &CacheError{k.Cache.Dir, err}
	}
	return nil
}

// run runs a tool and returns what it printed.
func (k *Kit) run(ctx context.Context, dir, tool string, args []string) (string, error) {
	cmd := exec.CommandContext(ctx, tool, args...)
	cmd.Dir = dir
	// The linker keeps its work files, and the C compiler's, in TMPDIR.
	cmd.Env = append(withoutGo(os.Environ()), "PWD="+dir, "TMPDIR="+dir)
	var output bytes.Buffer
	cmd.Stdout, cmd.Stderr = &output, &output
	alone(cmd)
	cmd.WaitDelay = 5 * time.Second
	err := cmd.Run()
	if ctx.Err() != nil {
		err = ctx.Err()
	}
	return output.String(), err
}

// gone says whether the kit was removed since it was opened.
func (k *Kit) gone() bool { return !exists(filepath.Join(k.Dir, manifestName)) }

// replaced says whether Go was removed, or another one put in its place, since
// the kit was opened.
func (k *Kit) replaced() error {
	have, err := rootVersion(k.Manifest.GOROOT)
	switch {
	case err != nil || !exists(k.compile):
		return &Unavailable{Reason: "the Go toolchain in " + k.Manifest.GOROOT + " was removed while this kernel ran", Do: "install " + k.Manifest.Go + " again, or any newer Go and run install.sh again; then restart the kernel"}
	case have != k.Manifest.Go:
		return &Unavailable{Reason: fmt.Sprintf("levelsum was installed with %s, and while this kernel ran %s was put in its place", k.Manifest.Go, have), Do: "run install.sh again and restart the kernel"}
	}
	return nil
}

// toolError says why a tool did not do its work.
func (k *Kit) toolError(tool string, err error, output string) error {
	if errors.Is(err, context.Canceled) || errors.Is(err, context.DeadlineExceeded) {
		return err
	}
	if noSpace.MatchString(output) {
		return &CacheError{k.Cache.Dir, syscall.ENOSPC}
	}
	if other := k.replaced(); other != nil {
		return other
	}
	if k.gone() {
		return &Unavailable{Reason: "the packages compiled for cells were removed while this kernel ran, as levelsum install does after a new build", Do: "restart the kernel"}
	}
	return &ToolError{tool, err, output}
}
