package symbols_test

import (
	"go/constant"
	"go/types"
	"path"
	"path/filepath"
	"reflect"
	"slices"
	"strings"
	"testing"

	"github.com/traefik/yaegi/interp"

	"levelsum/kernel/compile"
	"levelsum/kernel/symbols"
	"levelsum/kernel/symbols/export"
)

var source = compile.List(filepath.Join("..", ".."))

// Every exported name of gonum, gonum/plot and levelsum is in its table, if a
// table can hold it, and the tables hold no others. It fails when a package has
// changed: go generate ./kernel/symbols.
func TestTablesMatchPackages(t *testing.T) {
	imp := export.New(source)
	var own []string
	for _, path := range imp.Paths() {
		first, _, _ := strings.Cut(path, "/")
		if !strings.Contains(first, ".") && first != "levelsum" {
			continue
		}
		p, err := imp.Import(path)
		if err != nil {
			t.Errorf("%s: %v", path, err)
			continue
		}
		own = append(own, path+"/"+p.Name())
		table := symbols.Table()[path+"/"+p.Name()]
		if table == nil {
			t.Errorf("%s has no table", path)
			continue
		}
		for _, name := range p.Scope().Names() {
			o := p.Scope().Lookup(name)
			if got, want := symbols.Has(path, name), o.Exported() && fits(o); got != want {
				t.Errorf("%s.%s is in the table: %t, want %t", path, name, got, want)
			}
		}
		for name := range table {
			if name[0] != '_' && p.Scope().Lookup(name) == nil {
				t.Errorf("%s.%s is in the table but not in the package", path, name)
			}
		}
	}
	for key := range symbols.Symbols {
		if !slices.Contains(own, key) {
			t.Errorf("there is a table %s for no package", key)
		}
	}
}

// Every constant in a table is, as a float64, the one that the compiler makes of
// the package's source.
func TestTablesHoldTheCompilersConstants(t *testing.T) {
	imp := export.New(source)
	n := 0
	for key, table := range symbols.Symbols {
		p, err := imp.Import(path.Dir(key))
		if err != nil {
			t.Errorf("%s: %v", key, err)
			continue
		}
		for name, v := range table {
			c, ok := p.Scope().Lookup(name).(*types.Const)
			if !ok || c.Val().Kind() != constant.Int && c.Val().Kind() != constant.Float {
				continue
			}
			n++
			want, _ := constant.Float64Val(c.Val())
			var got float64
			switch x := v.Interface().(type) {
			case constant.Value:
				got, _ = constant.Float64Val(x)
			default:
				got = v.Convert(reflect.TypeFor[float64]()).Float()
			}
			if got != want {
				t.Errorf("%s.%s is %v in the table, %v in the package", key, name, got, want)
			}
		}
	}
	if n < 200 {
		t.Errorf("only %d constants were compared", n)
	}
}

// fits says whether a table can hold an object: generic ones have no value,
// and constraints are no types of values.
func fits(o types.Object) bool {
	switch o := o.(type) {
	case *types.Func:
		return o.Signature().TypeParams().Len() == 0
	case *types.TypeName:
		if n, ok := types.Unalias(o.Type()).(*types.Named); ok && n.TypeParams().Len() > 0 {
			return n.TypeArgs().Len() > 0
		}
		i, ok := o.Type().Underlying().(*types.Interface)
		return !ok || i.IsMethodSet()
	}
	return true
}

func TestHas(t *testing.T) {
	for _, test := range []struct {
		path, name string
		want       bool
	}{
		{"fmt", "Println", true},
		{"strings", "Cut", true},
		{"strings", "Lines", false}, // Go 1.24: newer than the interpreter's tables
		{"slices", "Sort", false},   // generic
		{"math/rand/v2", "Float64", true},
		{"gonum.org/v1/gonum/stat/distuv", "Normal", true},
		{"gonum.org/v1/plot", "New", true},
		{"levelsum/display", "Show", true},
		{"levelsum/statmech", "Mode", true},
		{"fmt", "println", false},
		{"unsafe", "Pointer", false},
		{"syscall", "Kill", false},
		{"no/such", "Name", false},
	} {
		if got := symbols.Has(test.path, test.name); got != test.want {
			t.Errorf("Has(%q, %q) = %t", test.path, test.name, got)
		}
	}
}

func TestInterpreterUsesTables(t *testing.T) {
	i := interp.New(interp.Options{})
	if err := i.Use(symbols.Table()); err != nil {
		t.Fatal(err)
	}
	for _, test := range []struct {
		src  string
		want any
	}{
		{`import "gonum.org/v1/gonum/mat"`, nil},
		{`mat.Trace(mat.NewDense(2, 2, []float64{1, 2, 3, 4}))`, 5.0},
		{`import "gonum.org/v1/gonum/stat/distuv"`, nil},
		{`distuv.Normal{Mu: 2, Sigma: 1}.Mean()`, 2.0},
		{`import "levelsum/statmech/unit"`, nil},
		{`float64(unit.Temperature(3))`, 3.0},
		{`import "levelsum/display"`, nil},
		{`display.Text("x").Data["text/plain"]`, "x"},
	} {
		v, err := i.Eval(test.src)
		if err != nil {
			t.Fatalf("%s: %v", test.src, err)
		}
		if test.want == nil {
			continue
		}
		if got := v.Interface(); !reflect.DeepEqual(got, test.want) {
			t.Errorf("%s is %v, want %v", test.src, got, test.want)
		}
	}
}

func BenchmarkReady(b *testing.B) {
	for b.Loop() {
		if err := interp.New(interp.Options{}).Use(symbols.Table()); err != nil {
			b.Fatal(err)
		}
	}
}
