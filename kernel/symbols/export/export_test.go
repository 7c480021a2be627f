package export_test

import (
	"errors"
	"go/ast"
	"go/parser"
	"go/types"
	"path/filepath"
	"slices"
	"strings"
	"sync"
	"testing"

	"levelsum/kernel/compile"
	"levelsum/kernel/symbols/export"
)

// source is shared: it asks the go command once for each package.
var source = sync.OnceValue(func() export.Source {
	return compile.List(filepath.Join("..", "..", ".."))
})

func TestImportChecksACell(t *testing.T) {
	imp := export.New(source())
	f, err := parser.ParseFile(imp.Fset, "cell", `package cell
import ("fmt"; "slices"; "gonum.org/v1/gonum/floats"; "levelsum/statmech"; "levelsum/statmech/unit")
type two struct{}
func (two) Reduced(T unit.Temperature) statmech.Reduced { return statmech.Reduced{LogQ: 1} }
var _ statmech.Mode = two{}
var x = fmt.Sprint(floats.Sum(slices.Sorted(slices.Values([]float64{2, 1}))))
`, parser.SkipObjectResolution)
	if err != nil {
		t.Fatal(err)
	}
	p, err := (&types.Config{Importer: imp}).Check("cell", imp.Fset, []*ast.File{f}, nil)
	if err != nil {
		t.Fatal(err)
	}
	if got := p.Scope().Lookup("x").Type().String(); got != "string" {
		t.Errorf("x is a %s", got)
	}
}

func TestRefusals(t *testing.T) {
	imp := export.New(source())
	for path, want := range map[string]string{
		"unsafe":                              "a wrong pointer",
		"C":                                   "C code cannot be part of a cell",
		"syscall":                             "raw system calls",
		"plugin":                              "the kernel itself",
		"internal/abi":                        "internal packages serve only",
		"gonum.org/v1/gonum/internal/asm/f64": "internal packages serve only",
		"levelsum/kernel/compile":             "a part of the kernel",
	} {
		_, err := imp.Import(path)
		var h *export.Hidden
		if !errors.As(err, &h) || !strings.Contains(err.Error(), want) {
			t.Errorf("import %q: got %v, want %q", path, err, want)
		}
	}
	for path, near := range map[string][]string{
		"gonum/mat":    {"gonum.org/v1/gonum/mat"},
		"distuv":       {"gonum.org/v1/gonum/stat/distuv"},
		"no/such/kind": nil,
		"rand":         {"crypto/rand", "math/rand", "math/rand/v2"},
	} {
		_, err := imp.Import(path)
		var m *export.Missing
		if !errors.As(err, &m) || !slices.Equal(m.Near, near) {
			t.Errorf("import %q: got %v, want near %v", path, err, near)
		}
	}
	for _, p := range imp.Paths() {
		if p == "unsafe" || p == "syscall" || p == "plugin" {
			t.Errorf("%s is offered", p)
		}
	}
	// A type of a hidden package that another package shows is no obstacle.
	p, err := imp.Import("os")
	if err != nil {
		t.Fatal(err)
	}
	if got := types.Unalias(p.Scope().Lookup("PathError").Type()).String(); got != "io/fs.PathError" {
		t.Errorf("os.PathError is %s", got)
	}
}

// Outside of the module and without a kit there is the standard library.
func TestStandardLibraryAlone(t *testing.T) {
	imp := export.New(compile.List(t.TempDir()))
	if _, err := imp.Import("fmt"); err != nil {
		t.Error(err)
	}
	for _, path := range []string{"gonum.org/v1/gonum/mat", "levelsum/statmech"} {
		if _, err := imp.Import(path); err == nil || !strings.Contains(err.Error(), "have not been prepared; run levelsum install") {
			t.Errorf("import %q: %v", path, err)
		}
	}
}

func TestImportAtOnce(t *testing.T) {
	imp := export.New(source())
	paths := []string{"fmt", "net/http", "encoding/json", "os", "gonum.org/v1/gonum/mat", "io", "strings", "sort"}
	var wg sync.WaitGroup
	for i := range 16 {
		wg.Go(func() {
			for j := range paths {
				path := paths[(i+j)%len(paths)]
				p, err := imp.Import(path)
				if err != nil {
					t.Error(err)
				} else if !p.Complete() || p.Path() != path {
					t.Errorf("%s is incomplete", path)
				}
			}
		})
	}
	wg.Wait()
	// One world: the io.Writer that fmt speaks of is the one of io.
	f, _ := imp.Import("fmt")
	io, _ := imp.Import("io")
	got := f.Scope().Lookup("Fprint").Type().(*types.Signature).Params().At(0).Type()
	if want := io.Scope().Lookup("Writer").Type(); !types.Identical(got, want) {
		t.Errorf("fmt.Fprint wants %v, which is not %v", got, want)
	}
}

func BenchmarkImport(b *testing.B) {
	s := source()
	s.Paths()
	b.Run("first", func(b *testing.B) {
		for b.Loop() {
			if _, err := export.New(s).Import("net/http"); err != nil {
				b.Fatal(err)
			}
		}
	})
	imp := export.New(s)
	b.Run("again", func(b *testing.B) {
		for b.Loop() {
			if _, err := imp.Import("net/http"); err != nil {
				b.Fatal(err)
			}
		}
	})
}
