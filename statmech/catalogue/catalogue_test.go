package catalogue

import (
	"go/ast"
	"go/parser"
	"go/token"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"unicode/utf8"

	"levelsum/statmech/gas"
)

// Every name in the list stands in the package's source as a declaration, and
// every line says something on one line.
func TestEntriesExist(t *testing.T) {
	declared := map[string]map[string]bool{}
	names := func(pkg string) map[string]bool {
		if declared[pkg] != nil {
			return declared[pkg]
		}
		folder := filepath.Join("..", pkg)
		if pkg == "statmech" {
			folder = ".."
		}
		declared[pkg] = map[string]bool{}
		files, err := filepath.Glob(filepath.Join(folder, "*.go"))
		if err != nil || len(files) == 0 {
			t.Fatalf("no source of %s: %v", pkg, err)
		}
		for _, file := range files {
			f, err := parser.ParseFile(token.NewFileSet(), file, nil, 0)
			if err != nil {
				t.Fatal(err)
			}
			for _, d := range f.Decls {
				switch d := d.(type) {
				case *ast.FuncDecl:
					declared[pkg][d.Name.Name] = d.Recv == nil || declared[pkg][d.Name.Name]
				case *ast.GenDecl:
					for _, s := range d.Specs {
						switch s := s.(type) {
						case *ast.TypeSpec:
							declared[pkg][s.Name.Name] = true
						case *ast.ValueSpec:
							for _, n := range s.Names {
								declared[pkg][n.Name] = true
							}
						}
					}
				}
			}
		}
		return declared[pkg]
	}
	seen := map[string]bool{}
	for _, p := range All() {
		if len(p.Entries) == 0 {
			t.Errorf("%s: no entries", p.Title)
		}
		for _, e := range p.Entries {
			call, _, _ := strings.Cut(e.Name, "(")
			pkg, name, ok := strings.Cut(call, ".")
			if strings.Contains(call, "/") {
				if _, err := os.Stat(filepath.Join("..", "..", e.Name)); err != nil {
					t.Error(err)
				}
			} else if !ok || !names(pkg)[name] {
				t.Errorf("%s does not exist", e.Name)
			}
			if e.Line == "" || strings.ContainsAny(e.Line, "\n\t") || !utf8.ValidString(e.Line) {
				t.Errorf("%s: line %q", e.Name, e.Line)
			}
			if seen[e.Name] {
				t.Errorf("%s is there twice", e.Name)
			}
			seen[e.Name] = true
			if strings.HasPrefix(p.Title, "Units") {
				for n := range strings.SplitSeq(e.Line, ", ") {
					if !names("unit")[n] {
						t.Errorf("unit.%s does not exist", n)
					}
				}
			}
		}
	}
	for _, want := range []string{"solid.Debye", "solid.Einstein", "statmech.Levels", "gas.Molecule", "gas.Torsion", "gas.Anharmonic", "gas.Diatomic", "fit.HeatCapacity",
		"calorimetry.ThirdLaw", "reaction.New", "lattice.Onsager", "lattice.Torus", "lattice.NewSimulation", "unit.Temperature", "unit.Energy", "data.Read",
		"testdata/white-collocott-1984/copper.csv", "notebooks/copper-heat-capacity.ipynb"} {
		if !seen[want] {
			t.Errorf("%s is not listed", want)
		}
	}
	books, err := filepath.Glob("../../notebooks/*.ipynb")
	if err != nil {
		t.Fatal(err)
	}
	for _, b := range books {
		if name := "notebooks/" + filepath.Base(b); !seen[name] {
			t.Errorf("%s is not listed", name)
		}
	}
	for _, name := range gas.Library() {
		if !seen[`gas.FromLibrary("`+name+`")`] {
			t.Errorf("%s of the library is not listed", name)
		}
	}
}

// Text from data is escaped in HTML and every entry is a line of the text.
func TestView(t *testing.T) {
	c := Contents{{"Models & more", []Entry{{"a.B", "x < y"}, {"a.Längs", "z"}}}}
	v := c.View()
	if got, want := v.Data["text/plain"], "Models & more\n  a.B      x < y\n  a.Längs  z"; got != want {
		t.Errorf("text %q, want %q", got, want)
	}
	html := v.Data["text/html"].(string)
	for _, want := range []string{"<h4>Models &amp; more</h4>", "<code>a.B</code>", "x &lt; y", "<code>a.Längs</code>"} {
		if !strings.Contains(html, want) {
			t.Errorf("no %q in %s", want, html)
		}
	}
}
