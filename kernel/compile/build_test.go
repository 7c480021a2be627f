package compile_test

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"reflect"
	"strings"
	"sync"
	"syscall"
	"testing"

	"levelsum/kernel/compile"
	"levelsum/kernel/compile/kittest"
)

var (
	folder string // the folder of the host that all tests share
	host   = sync.OnceValues(func() (*kittest.Host, error) {
		return kittest.Make(context.Background(), folder, "./kernel/compile/testdata/host", compile.Race)
	})
)

func TestMain(m *testing.M) {
	var err error
	if folder, err = os.MkdirTemp("", "kit"); err != nil {
		fmt.Fprintln(os.Stderr, err)
		os.Exit(1)
	}
	code := m.Run()
	os.RemoveAll(folder)
	os.Exit(code)
}

// open opens the shared kit with an empty cache of its own.
func open(t testing.TB) (*kittest.Host, *compile.Kit) {
	t.Helper()
	h, err := host()
	if err != nil {
		t.Fatal(err)
	}
	k, err := compile.Open(h.Kit.Dir, t.TempDir())
	if err != nil {
		t.Fatal(err)
	}
	return h, k
}

// pack makes a package of one file.
func pack(path, src string) compile.Package {
	return compile.Package{Path: path, Files: map[string][]byte{"a.go": []byte(src)}}
}

// build builds a plugin that exports run, an expression that may use c, the
// package imported from the path imp.
func build(t testing.TB, k *compile.Kit, imp, run string, pkgs ...compile.Package) *compile.Plugin {
	t.Helper()
	p, err := k.Build(t.Context(), pkgs, pack("", fmt.Sprintf("package main\nimport c %q\nvar Symbols = map[string]any{\"Run\": %s}\n", imp, run)))
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// run opens plugins in the host and returns what it printed.
func run(t *testing.T, h *kittest.Host, plugins ...*compile.Plugin) string {
	t.Helper()
	var args []string
	for _, p := range plugins {
		args = append(args, p.File)
	}
	out, err := exec.CommandContext(t.Context(), h.Exe, args...).CombinedOutput()
	if err != nil {
		t.Fatalf("%v\n%s", err, out)
	}
	return string(out)
}

func TestPluginsShareTypesAndVariables(t *testing.T) {
	h, k := open(t)
	first := build(t, k, "cell/a1", "c.Run", pack("cell/a1", `package cell
type P struct{ X int }
func (p *P) Double() int { return 2*p.X }
var Count = 1
func init() { Count *= 10 }
func Run(any) any { Count++; return &P{X: 21} }
`))
	// The second plugin imports the package that the first brought: it is not
	// given again.
	second := build(t, k, "cell/b1", "c.Run", pack("cell/b1", `package cell
import a "cell/a1"
import "fmt"
func Run(x any) any { return fmt.Sprint(x.(*a.P).Double(), " ", a.Count) }
`))
	if first.File == second.File || first.Path == second.Path {
		t.Fatalf("two plugins are one: %v, %v", first, second)
	}
	got := run(t, h, first, second)
	if want := "*cell.P: &{21}\nstring: 42 11\n"; got != want {
		t.Errorf("got %q, want %q", got, want)
	}
}

func TestPluginSharesPackagesWithHost(t *testing.T) {
	h, k := open(t)
	p := build(t, k, "cell/m1", "c.Run", pack("cell/m1", `package cell
import (
	"levelsum/display"
	"levelsum/statmech"
	"levelsum/statmech/unit"
)
type Two struct{}
func (Two) Reduced(T unit.Temperature) statmech.Reduced { return statmech.Reduced{LogQ: float64(T)/150} }
func (Two) View() display.View { return display.Text("two levels") }
func Run(any) any { return Two{} }
`))
	got := run(t, h, p)
	if want := "mode: 2\nview: two levels\ncell.Two: {}\n"; got != want {
		t.Errorf("got %q, want %q", got, want)
	}
}

// The host has no part of gonum: both plugins bring it, and it must be one.
func TestPluginsShareLibraryThatHostLacks(t *testing.T) {
	h, k := open(t)
	first := build(t, k, "cell/g1", "c.Run", pack("cell/g1", `package cell
import "gonum.org/v1/gonum/mat"
func Run(any) any { return mat.NewDense(2, 2, []float64{1, 2, 3, 4}) }
`))
	second := build(t, k, "cell/g2", "c.Run", pack("cell/g2", `package cell
import "gonum.org/v1/gonum/mat"
func Run(x any) any { return mat.Det(x.(*mat.Dense)) }
`))
	got := run(t, h, first, second)
	if !strings.HasSuffix(got, "float64: -2\n") && !strings.Contains(got, "float64: -2.0000000000000") {
		t.Errorf("got %q, want the determinant -2", got)
	}
}

func TestGenericsAcrossPlugins(t *testing.T) {
	h, k := open(t)
	first := build(t, k, "cell/t1", "c.Run", pack("cell/t1", `package cell
type List[T any] struct{ Items []T }
func Map[A, B any](l List[A], f func(A) B) List[B] {
	var m List[B]
	for _, x := range l.Items { m.Items = append(m.Items, f(x)) }
	return m
}
func Run(any) any { return List[int]{[]int{1, 2}} }
`))
	second := build(t, k, "cell/t2", "c.Run", pack("cell/t2", `package cell
import a "cell/t1"
func Run(x any) any { return a.Map(x.(a.List[int]), func(i int) float64 { return float64(i)/4 }) }
`))
	got := run(t, h, first, second)
	if want := "cell.List[int]: {[1 2]}\ncell.List[float64]: {[0.25 0.5]}\n"; got != want {
		t.Errorf("got %q, want %q", got, want)
	}
}

func TestPanicKeepsCellLines(t *testing.T) {
	h, k := open(t)
	p := build(t, k, "cell/p1", "c.Run", pack("cell/p1", `/*line In[3]:1:1*/package cell
func at(s []int, i int) int {
	return s[i] // line 3
}

func Run(any) any {
	return at([]int{1}, 5) // line 7
}
`))
	got := run(t, h, p)
	for _, want := range []string{"panic (runtime.boundsError): runtime error: index out of range [5] with length 1\n", "In[3]:3 cell/p1.at\n", "In[3]:7 cell/p1.Run\n"} {
		if !strings.Contains(got, want) {
			t.Errorf("got %q, which lacks %q", got, want)
		}
	}
}

func TestSourceErrors(t *testing.T) {
	_, k := open(t)
	_, err := k.Build(t.Context(), []compile.Package{pack("cell/e1", `/*line In[7]:1:1*/package cell
func F() int { return "a" }
func G() { undefinedName() }
`)}, pack("", "package main\nimport _ \"cell/e1\"\n"))
	var se *compile.SourceError
	if !errors.As(err, &se) {
		t.Fatalf("got %v, want a SourceError", err)
	}
	want := []compile.Diagnostic{
		{File: "In[7]", Line: 2, Col: 23, Message: `cannot use "a" (untyped string constant) as int value in return statement`},
		{File: "In[7]", Line: 3, Col: 12, Message: "undefined: undefinedName"},
	}
	if !reflect.DeepEqual(se.Lines, want) {
		t.Errorf("got %+v, want %+v", se.Lines, want)
	}
}

// Independent packages are compiled at once; of several that are refused the
// first is told, and what was compiled before stays.
func TestManyPackages(t *testing.T) {
	h, k := open(t)
	var pkgs []compile.Package
	body := "package cell\nimport (\n"
	sum := "0"
	for i := range 12 {
		path := fmt.Sprintf("cell/n%d", i)
		pkgs = append(pkgs, pack(path, fmt.Sprintf("package cell\nfunc F() int { return %d }\n", i)))
		body += fmt.Sprintf("n%d %q\n", i, path)
		sum += fmt.Sprintf("+n%d.F()", i)
	}
	// Given before what it imports.
	all := append([]compile.Package{pack("cell/sum", body+")\nfunc Run(any) any { return "+sum+" }\n")}, pkgs...)
	p := build(t, k, "cell/sum", "c.Run", all...)
	if p.Compiled != 14 {
		t.Errorf("compiled %d packages, want 14", p.Compiled)
	}
	if got := run(t, h, p); got != "int: 66\n" {
		t.Errorf("got %q", got)
	}
	err := k.Compile(t.Context(), []compile.Package{
		pack("cell/o1", "package cell\n"), pack("cell/o2", "package cell\nvar X = a\n"), pack("cell/o3", "package cell\nvar X = b\n"),
		pack("cell/o4", "package cell\nimport _ \"cell/o2\"\n"),
	})
	var se *compile.SourceError
	if !errors.As(err, &se) || se.Package != "cell/o2" {
		t.Errorf("got %v, want the error of cell/o2", err)
	}
}

// The same source gives the same bytes, so that it does not matter which of two
// processes puts its file into the cache last.
func TestBuildIsReproducible(t *testing.T) {
	_, k := open(t)
	_, l := open(t)
	a := pack("cell/r1", "package cell\nimport \"fmt\"\nfunc Run(any) any { return fmt.Sprint(func() {}, map[string]int{\"a\": 1}) }\n")
	one, two := build(t, k, "cell/r1", "c.Run", a), build(t, l, "cell/r1", "c.Run", a)
	x, err := os.ReadFile(one.File)
	if err != nil {
		t.Fatal(err)
	}
	y, err := os.ReadFile(two.File)
	if err != nil {
		t.Fatal(err)
	}
	if one.File == two.File || !bytes.Equal(x, y) {
		t.Errorf("%s and %s differ", one.File, two.File)
	}
}

// After Prepare neither Go's caches nor the go command are used.
func TestBuildNeedsNoCachesOfGo(t *testing.T) {
	h, k := open(t)
	for _, name := range []string{"HOME", "GOCACHE", "GOMODCACHE", "GOPATH", "GOROOT", "XDG_CACHE_HOME"} {
		t.Setenv(name, "/nowhere")
	}
	t.Setenv("GOFLAGS", "-mod=nonsense")
	t.Setenv("GOARCH", "wasm")
	again, err := compile.Open(k.Dir, k.Cache.Dir)
	if err != nil {
		t.Fatal(err)
	}
	p := build(t, again, "cell/off1", "c.Run", pack("cell/off1", "package cell\nimport \"gonum.org/v1/gonum/floats\"\nfunc Run(any) any { return floats.Sum([]float64{1, 2}) }\n"))
	if got := run(t, h, p); got != "float64: 3\n" {
		t.Errorf("got %q", got)
	}
}

func TestFoldersOfAnyName(t *testing.T) {
	h, k := open(t)
	dir := filepath.Join(t.TempDir(), "Zwischen speicher=ö %20 'x'")
	own, err := compile.Open(k.Dir, dir)
	if err != nil {
		t.Fatal(err)
	}
	p := build(t, own, "cell/odd", "c.Run", pack("cell/odd", "/*line In[1]:1:1*/package cell\nfunc Run(any) any { panic(1) }\n"))
	if got := run(t, h, p); !strings.Contains(got, "In[1]:2 cell/odd.Run\n") {
		t.Errorf("got %q", got)
	}
}

func TestEmptyFileInCache(t *testing.T) {
	h, k := open(t)
	p := build(t, k, "cell/empty", "c.Run", pack("cell/empty", "package cell\nfunc Run(any) any { return 3 }\n"))
	files, err := filepath.Glob(filepath.Join(k.Cache.Dir, "??", "*"))
	if err != nil || len(files) != 2 {
		t.Fatalf("the cache holds %v (%v)", files, err)
	}
	for _, f := range files {
		if err := os.Truncate(f, 0); err != nil {
			t.Fatal(err)
		}
	}
	if again := build(t, k, "cell/empty", "c.Run"); again.File != p.File || again.Compiled != 2 {
		t.Errorf("built %+v, want %+v built again", again, p)
	}
	if got := run(t, h, p); got != "int: 3\n" {
		t.Errorf("got %q", got)
	}
}

func TestRefusedImports(t *testing.T) {
	_, k := open(t)
	for _, imp := range []string{"example.com/none", "cell/none"} {
		_, err := k.Build(t.Context(), nil, pack("", fmt.Sprintf("package main\nimport _ %q\n", imp)))
		var se *compile.SourceError
		if !errors.As(err, &se) || !strings.Contains(err.Error(), "package "+imp+" is not among those that cells can use") {
			t.Errorf("import %q: got %v", imp, err)
		}
	}
	_, err := k.Build(t.Context(), []compile.Package{
		pack("cell/x", "package cell\nimport _ \"cell/y\"\n"), pack("cell/y", "package cell\nimport _ \"cell/x\"\n"),
	}, pack("", "package main\n"))
	if err == nil || !strings.Contains(err.Error(), "import each other") {
		t.Errorf("a cycle gives %v", err)
	}
}

func TestPathHasOneContent(t *testing.T) {
	_, k := open(t)
	build(t, k, "cell/one", "c.A", pack("cell/one", "package cell\nconst A = 1\n"), pack("cell/uses", "package cell\n"))
	_, err := k.Build(t.Context(), []compile.Package{pack("cell/one", "package cell\nconst A = 2\n")}, pack("", "package main\n"))
	if err == nil || !strings.Contains(err.Error(), "another content") {
		t.Errorf("got %v, want a refusal", err)
	}
}

func TestCacheServesAnotherProcess(t *testing.T) {
	h, k := open(t)
	a := pack("cell/c1", "package cell\nfunc Run(any) any { return 1 }\n")
	first := build(t, k, "cell/c1", "c.Run", a)
	if first.Compiled != 2 || !first.Linked {
		t.Errorf("first build: %+v, want two packages compiled and a link", first)
	}
	again, err := compile.Open(k.Dir, k.Cache.Dir) // as another process would
	if err != nil {
		t.Fatal(err)
	}
	second := build(t, again, "cell/c1", "c.Run", a)
	if second.Compiled != 0 || second.Linked || second.File != first.File {
		t.Errorf("second build: %+v, want what the first made: %+v", second, first)
	}
	// A kit that has seen a package compiles it again if it was evicted.
	files, err := filepath.Glob(filepath.Join(k.Cache.Dir, "??", "*"))
	if err != nil || len(files) != 2 {
		t.Fatalf("the cache holds %v (%v), want an archive and a plugin", files, err)
	}
	for _, f := range files {
		if err := os.Remove(f); err != nil {
			t.Fatal(err)
		}
	}
	third := build(t, again, "cell/c1", "c.Run")
	if got := run(t, h, third); got != "int: 1\n" {
		t.Errorf("after eviction: %q", got)
	}
}

func TestTwoKitsBuildAtOnce(t *testing.T) {
	h, k := open(t)
	var wg sync.WaitGroup
	files := make([]string, 4)
	for i := range files {
		wg.Go(func() {
			own, err := compile.Open(k.Dir, k.Cache.Dir)
			if err != nil {
				t.Error(err)
				return
			}
			p, err := own.Build(t.Context(), []compile.Package{pack("cell/w1", "package cell\nfunc Run(any) any { return 7 }\n")},
				pack("", "package main\nimport c \"cell/w1\"\nvar Symbols = map[string]any{\"Run\": c.Run}\n"))
			if err != nil {
				t.Error(err)
				return
			}
			files[i] = p.File
		})
	}
	wg.Wait()
	for _, f := range files {
		if f != files[0] {
			t.Errorf("%s and %s were built of one source", f, files[0])
		}
	}
	if got := run(t, h, &compile.Plugin{File: files[0]}); got != "int: 7\n" {
		t.Errorf("got %q", got)
	}
}

func TestCancelledBuildLeavesNothing(t *testing.T) {
	_, k := open(t)
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	_, err := k.Build(ctx, []compile.Package{pack("cell/q1", "package cell\n")}, pack("", "package main\nimport _ \"cell/q1\"\n"))
	if !errors.Is(err, context.Canceled) {
		t.Errorf("got %v", err)
	}
	if left, _ := filepath.Glob(filepath.Join(k.Cache.Dir, "*", "*")); len(left) > 0 {
		t.Errorf("left behind: %v", left)
	}
}

func TestCacheErrorsSayWhatToDo(t *testing.T) {
	_, k := open(t)
	// A file where the folder should be; it fails for every user, root too.
	blocked := filepath.Join(t.TempDir(), "file")
	if err := os.WriteFile(blocked, nil, 0o666); err != nil {
		t.Fatal(err)
	}
	k, err := compile.Open(k.Dir, blocked)
	if err != nil {
		t.Fatal(err)
	}
	_, err = k.Build(t.Context(), nil, pack("", "package main\n"))
	var ce *compile.CacheError
	if !errors.As(err, &ce) || !strings.Contains(err.Error(), blocked) {
		t.Errorf("got %v, want a CacheError that names %s", err, blocked)
	}
	for cause, want := range map[error]string{
		syscall.ENOSPC: "no space left for compiled cells in /c: free some, or name another folder in LEVELSUM_CACHE",
		syscall.EROFS:  "compiled cells cannot be written to /c (read-only file system): allow it, or name another folder in LEVELSUM_CACHE",
	} {
		err := &compile.CacheError{Dir: "/c", Err: &os.PathError{Op: "open", Path: "/c/x", Err: cause}}
		if cause == syscall.EROFS {
			want = strings.Replace(want, "(read", "(open /c/x: read", 1)
		}
		if err.Error() != want {
			t.Errorf("got %q, want %q", err, want)
		}
	}
}

func BenchmarkBuild(b *testing.B) {
	_, k := open(b)
	for name, body := range map[string]string{
		"fmt": "import \"fmt\"\nfunc Run(any) any { return fmt.Sprint(%d) }\n",
		"mat": "import \"gonum.org/v1/gonum/mat\"\nfunc Run(any) any { return mat.NewDense(1, %d, nil) }\n",
	} {
		b.Run(name, func(b *testing.B) {
			n := 0
			for b.Loop() {
				n++
				path := fmt.Sprintf("cell/%s%d", name, n)
				build(b, k, path, "c.Run", pack(path, "package cell\n"+fmt.Sprintf(body, n)))
			}
		})
	}
	b.Run("unchanged", func(b *testing.B) {
		p := pack("cell/u", "package cell\nfunc Run(any) any { return 1 }\n")
		build(b, k, "cell/u", "c.Run", p)
		for b.Loop() {
			build(b, k, "cell/u", "c.Run", p)
		}
	})
}
