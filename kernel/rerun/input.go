package rerun

import (
	"errors"
	"fmt"
	"go/ast"
	"go/parser"
	"go/token"
	"slices"
	"strconv"
	"strings"

	"levelsum/kernel/notebook"
)

// directive is the comment line that marks a code cell as one that holds
// inputs: variables that a run may set.
//
//	//levelsum:input
//	theta := 343 * unit.K // any variable with a value, one a line
const directive = "//levelsum:input"

// ErrInput is matched by the error of a setting that cannot be applied.
var ErrInput = errors.New("cannot set the input")

// A Setting gives an input a value for one run: a Go expression, or plain text
// for an input whose own value is a string literal.
type Setting struct{ Name, Value string }

// ParseSetting reads NAME=VALUE.
func ParseSetting(s string) (Setting, error) {
	name, val, ok := strings.Cut(s, "=")
	name, val = strings.TrimSpace(name), strings.TrimSpace(val)
	if !ok || !token.IsIdentifier(name) || name == "_" || val == "" {
		return Setting{}, fmt.Errorf("%q: want NAME=VALUE, a variable and a Go expression", s)
	}
	return Setting{name, val}, nil
}

// An Input is a variable of an input cell.
type Input struct {
	Name string
	Cell int
	Own  string // the expression in the notebook
	Set  string // the expression of the setting, empty if none was given

	end    int // byte offset of the end of the statement in the source
	string bool
}

// Inputs returns the inputs of a document in order.
func Inputs(d *notebook.Document) ([]Input, error) {
	var all []Input
	for _, c := range d.Cells() {
		if c.Kind() != notebook.Code || !hasDirective(c.Source()) {
			continue
		}
		in, err := cellInputs(c.Source())
		if err != nil {
			return nil, fmt.Errorf("cell %d: %w", c.N, err)
		}
		for _, x := range in {
			x.Cell = c.N
			if i := slices.IndexFunc(all, func(y Input) bool { return y.Name == x.Name }); i >= 0 {
				return nil, fmt.Errorf("cell %d: input %s is declared in cell %d already", c.N, x.Name, all[i].Cell)
			}
			all = append(all, x)
		}
	}
	return all, nil
}

func hasDirective(src string) bool {
	for l := range strings.Lines(src) {
		if strings.TrimSpace(l) == directive {
			return true
		}
	}
	return false
}

// cellInputs finds the variables that a cell declares, one name to one value.
func cellInputs(src string) ([]Input, error) {
	const head = "package p; func _() {\n"
	fset := token.NewFileSet()
	f, err := parser.ParseFile(fset, "", head+src+"\n}", parser.SkipObjectResolution)
	if err != nil {
		return nil, fmt.Errorf("an input cell holds variables with values and nothing else: %w", withoutPosition(err))
	}
	body := f.Decls[len(f.Decls)-1].(*ast.FuncDecl).Body
	offset := func(p token.Pos) int { return fset.Position(p).Offset - len(head) }
	var in []Input
	add := func(name *ast.Ident, val ast.Expr, end token.Pos) {
		lit, ok := val.(*ast.BasicLit)
		in = append(in, Input{Name: name.Name, Own: src[offset(val.Pos()):offset(val.End())], end: offset(end),
			string: ok && lit.Kind == token.STRING})
	}
	for _, s := range body.List {
		switch s := s.(type) {
		case *ast.AssignStmt:
			if id, ok := s.Lhs[0].(*ast.Ident); ok && s.Tok == token.DEFINE && len(s.Lhs) == 1 {
				add(id, s.Rhs[0], s.End())
			}
		case *ast.DeclStmt:
			g := s.Decl.(*ast.GenDecl)
			if g.Tok != token.VAR {
				continue
			}
			for _, spec := range g.Specs {
				if v := spec.(*ast.ValueSpec); len(v.Names) == 1 && len(v.Values) == 1 {
					add(v.Names[0], v.Values[0], g.End())
				}
			}
		}
	}
	return in, nil
}

// withoutPosition takes the place off a parser's message: it is a place in
// text that only this package has seen.
func withoutPosition(err error) error {
	s := err.Error()
	if _, rest, ok := strings.Cut(s, ": "); ok {
		s = rest
	}
	return fmt.Errorf("%s", s)
}

// applySettings changes the sources of the input cells: after the statement
// that gives an input its own value comes an assignment, so that the compiler
// holds the value against the input's type and the document says both.
func applySettings(d *notebook.Document, set []Setting) ([]Input, error) {
	inputs, err := Inputs(d)
	if err != nil {
		if len(set) == 0 {
			return nil, nil // the cell will say itself what is wrong with it
		}
		return nil, fmt.Errorf("%w: %w", ErrInput, err)
	}
	for i, s := range set {
		if slices.ContainsFunc(set[:i], func(t Setting) bool { return t.Name == s.Name }) {
			return nil, fmt.Errorf("%w %s: it is set twice", ErrInput, s.Name)
		}
		at := slices.IndexFunc(inputs, func(x Input) bool { return x.Name == s.Name })
		if at < 0 {
			return nil, fmt.Errorf("%w %s: there is none of this name; %s", ErrInput, s.Name, known(inputs))
		}
		val := s.Value
		if _, err := parser.ParseExpr(val); inputs[at].string && !strings.HasPrefix(val, `"`) && !strings.HasPrefix(val, "`") {
			val = strconv.Quote(val)
		} else if err != nil {
			return nil, fmt.Errorf("%w %s: %q is not one Go expression", ErrInput, s.Name, val)
		}
		inputs[at].Set = val
	}
	for _, c := range d.Cells() {
		src := c.Source()
		// From the end, so that the offsets before stay true.
		for _, x := range slices.Backward(inputs) {
			if x.Cell == c.N && x.Set != "" {
				src = src[:x.end] + fmt.Sprintf("; %s = %s", x.Name, x.Set) + src[x.end:]
			}
		}
		if src != c.Source() {
			c.SetSource(src)
		}
	}
	return inputs, nil
}

func known(inputs []Input) string {
	if len(inputs) == 0 {
		return "no cell is marked with " + directive
	}
	var names []string
	for _, x := range inputs {
		names = append(names, x.Name)
	}
	return "the inputs are " + strings.Join(names, ", ")
}
