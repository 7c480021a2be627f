package cell

import (
	"go/ast"
	"go/token"
	"go/types"
)

// A Unit is one Go package of compiled code.
type Unit struct {
	Path  string   // import path, "cell/" and a hash of its content
	Text  string   // the Go source
	Uses  []*Unit  // units it imports
	Paths []string // other packages it imports
	Slots []*Slot  // session variables it reaches, each through a variable Slot.Var
	Run   bool     // it has a function that runs the cell's statements
	Decls []*Decl  // decls whose current version is in it

	pkg *types.Package
}

// A Plan is a checked cell and what it would change.
type Plan struct {
	Source   *Source
	Warnings Diagnostics // older decls that no longer compile, unused variables
	Dropped  []string    // variables whose type changed, one line each
	Force    bool        // a directive asks for compiling

	parsed  *parsed
	imports map[string]string
	dots    []string
	decls   []*Decl // new or changed, of this cell and dependents
	broken  []*Decl
	drop    []string
	vars    []*types.Var // session variables the statements declare, in order
	slots   map[types.Object]*Slot

	pkg   *types.Package // decls
	info  *types.Info
	sinfo *types.Info // statements
	body  *ast.BlockStmt
	stmts []ast.Stmt
	lead  []ast.Decl           // variables declared before the first statement
	order []*types.Initializer // their initialisation, in Go's order
	scope *Scope

	unused map[token.Pos]bool // variables inside functions and blocks that nothing reads

	result     ast.Expr     // the last expression, if it is shown
	resultType []types.Type // its static type(s)
}

// Types are the static types of the values that the cell shows, as a reader
// writes them; empty if it shows nothing.
func (p *Plan) Types() []string {
	out := make([]string, len(p.resultType))
	for i, t := range p.resultType {
		out[i] = typeString(t)
	}
	return out
}

// typeString prints a type with packages by name and the session's own types
// bare.
func typeString(t types.Type) string {
	return types.TypeString(t, func(p *types.Package) string {
		if isCell(p) {
			return ""
		}
		return p.Name()
	})
}
