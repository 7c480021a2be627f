package cell

import (
	"fmt"
	"go/ast"
	"go/token"
	"go/types"
	"maps"
	"slices"
)

// A Decl is one declaration as it stands in a cell: a type, a group of types
// or constants, a function or a method.
type Decl struct {
	Source *Source
	names  []string // what it declares; a method declares "T.m"
	recv   string   // the receiver's type name, for a method
	node   ast.Decl
	text   string            // to tell whether it changed
	uses   map[string]bool   // session names it depends on
	pkgs   map[string]string // import names it depends on, with their paths
	unit   *Unit             // where its current version is compiled
	broken bool              // an older cell's declaration that no longer compiles
}

// key names the decl in a scope.
func (d *Decl) key() string { return d.names[0] }

// A Slot is the place of a session variable. A variable that is declared again
// with the same type keeps its slot.
type Slot struct {
	ID   string // unique in the session and the same in every session that runs the same cells
	Name string
	Type types.Type
	Cell int // the cell that declared it last
}

// entity is what a session name means now: a declared object or a variable.
type entity struct {
	obj  types.Object
	decl *Decl // nil for a variable
	slot *Slot // nil for a decl
}

// A Scope is what the cells of a session have declared. It is not safe for
// concurrent use.
type Scope struct {
	clone     bool // made by Clone, to look ahead
	bareHints bool // a test wants to see what a hint falls over

	fset     *token.FileSet
	importer types.Importer
	usual    map[string]string // import names offered without an import: name -> path

	entities map[string]*entity
	imports  map[string]string // names imported by cells: name -> path
	dots     []string          // paths imported with a dot
	decls    map[string]*Decl  // by key, methods too
	methods  map[string][]*Decl
	users    map[string]map[*Decl]bool  // session name -> decls that depend on it
	typed    map[string]map[string]bool // type name -> variables whose type mentions it
	dropped  map[string]string          // variables that were dropped, and why
	failed   map[string]string          // names that a cell would have declared that had an error: the cell
	slots    map[string][]*Slot         // all slots a name has had
	remarks  map[string]remark          // comments on variables
	units    map[*types.Package]*Unit
	origins  origins
}

// NewScope returns an empty scope. The importer gives type information of
// importable packages; usual are the packages that a cell may use without an
// import, by the name it uses.
func NewScope(importer types.Importer, usual map[string]string) *Scope {
	return &Scope{
		fset:     token.NewFileSet(),
		importer: importer,
		usual:    usual,
		entities: map[string]*entity{},
		imports:  map[string]string{},
		decls:    map[string]*Decl{},
		methods:  map[string][]*Decl{},
		users:    map[string]map[*Decl]bool{},
		typed:    map[string]map[string]bool{},
		dropped:  map[string]string{},
		failed:   map[string]string{},
		slots:    map[string][]*Slot{},
		remarks:  map[string]remark{},
		units:    map[*types.Package]*Unit{},
		origins:  origins{at: map[string]int{}, made: map[string]*origin{}},
	}
}

// Names lists what the session has declared, sorted.
func (s *Scope) Names() []string { return slices.Sorted(maps.Keys(s.entities)) }

// Lookup returns the object a name means in the session, or nil.
func (s *Scope) Lookup(name string) types.Object {
	if e := s.entities[name]; e != nil {
		return e.obj
	}
	return nil
}

// Slot returns the slot of a session variable, or nil.
func (s *Scope) Slot(name string) *Slot {
	if e := s.entities[name]; e != nil {
		return e.slot
	}
	return nil
}

// importPath is what an import name means in a new cell, "" if nothing.
func (s *Scope) importPath(name string) string {
	if p, ok := s.imports[name]; ok {
		return p
	}
	return s.usual[name]
}

// slotFor returns the slot for a variable of this name and type: the one it
// has had before if the type is the same, else a new one.
func (s *Scope) slotFor(name string, typ types.Type, cell int) *Slot {
	for _, l := range s.slots[name] {
		if types.Identical(l.Type, typ) {
			return l
		}
	}
	return &Slot{ID: fmt.Sprintf("%s_%d", name, len(s.slots[name])+1), Name: name, Type: typ, Cell: cell}
}

func (s *Scope) keepSlot(l *Slot) {
	if !slices.Contains(s.slots[l.Name], l) {
		s.slots[l.Name] = append(s.slots[l.Name], l)
	}
}

// setVar makes name a variable in slot.
func (s *Scope) setVar(name string, obj types.Object, slot *Slot) {
	s.forget(name)
	s.keepSlot(slot)
	s.entities[name] = &entity{obj: obj, slot: slot}
	for t := range namedIn(slot.Type) {
		if s.typed[t] == nil {
			s.typed[t] = map[string]bool{}
		}
		s.typed[t][name] = true
	}
}

// forget takes a name out of the scope. Decls that use it keep saying so.
func (s *Scope) forget(name string) {
	e := s.entities[name]
	if e == nil {
		return
	}
	delete(s.entities, name)
	if e.slot != nil {
		for t := range namedIn(e.slot.Type) {
			delete(s.typed[t], name)
		}
	}
	if e.decl != nil {
		s.removeDecl(e.decl)
	}
}

// removeDecl takes a decl with all its names out of the scope.
func (s *Scope) removeDecl(d *Decl) {
	for _, n := range d.names {
		if e := s.entities[n]; e != nil && e.decl == d {
			delete(s.entities, n)
		}
		if s.decls[n] == d {
			delete(s.decls, n)
		}
	}
	for n := range d.uses {
		delete(s.users[n], d)
	}
	if d.recv != "" {
		s.methods[d.recv] = slices.DeleteFunc(s.methods[d.recv], func(m *Decl) bool { return m == d })
	}
}

// addDecl makes d what its names mean. objs are the objects of its names; a
// broken decl has none and only waits for its dependencies to change.
func (s *Scope) addDecl(d *Decl, objs map[string]types.Object) {
	for _, n := range d.names {
		if old := s.decls[n]; old != nil && old != d {
			s.removeDecl(old)
		}
		s.decls[n] = d
		if o := objs[n]; o != nil && !d.broken {
			s.forgetVar(n)
			s.entities[n] = &entity{obj: o, decl: d}
		}
	}
	for n := range d.uses {
		if s.users[n] == nil {
			s.users[n] = map[*Decl]bool{}
		}
		s.users[n][d] = true
	}
	if d.recv != "" && !slices.Contains(s.methods[d.recv], d) {
		s.methods[d.recv] = append(s.methods[d.recv], d)
	}
}

// forgetVar takes a variable of this name out of the scope.
func (s *Scope) forgetVar(name string) {
	if e := s.entities[name]; e != nil && e.slot != nil {
		s.forget(name)
	}
}

// namedIn collects the names of the session's types that a type mentions.
func namedIn(t types.Type) map[string]bool {
	out := map[string]bool{}
	seen := map[types.Type]bool{}
	var walk func(types.Type)
	walk = func(t types.Type) {
		if t == nil || seen[t] {
			return
		}
		seen[t] = true
		switch t := t.(type) {
		case *types.Alias:
			if isCell(t.Obj().Pkg()) {
				out[t.Obj().Name()] = true
			}
			walk(types.Unalias(t))
		case *types.Named:
			if isCell(t.Obj().Pkg()) {
				out[t.Obj().Name()] = true
			}
			for i := range t.TypeArgs().Len() {
				walk(t.TypeArgs().At(i))
			}
		case *types.Pointer:
			walk(t.Elem())
		case *types.Slice:
			walk(t.Elem())
		case *types.Array:
			walk(t.Elem())
		case *types.Chan:
			walk(t.Elem())
		case *types.Map:
			walk(t.Key())
			walk(t.Elem())
		case *types.Struct:
			for i := range t.NumFields() {
				walk(t.Field(i).Type())
			}
		case *types.Signature:
			walk(t.Params())
			walk(t.Results())
		case *types.Tuple:
			for i := range t.Len() {
				walk(t.At(i).Type())
			}
		case *types.Interface:
			for i := range t.NumMethods() {
				walk(t.Method(i).Type())
			}
			for i := range t.NumEmbeddeds() {
				walk(t.EmbeddedType(i))
			}
		}
	}
	walk(t)
	return out
}

// cellPath is the package path of everything that cells declare. Objects of
// different cells live in different packages of this one path: go/types then
// lets them share lower-case names, as one package would.
const cellPath = "cell"

func isCell(p *types.Package) bool { return p != nil && p.Path() == cellPath }
