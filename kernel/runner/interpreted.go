package runner

import (
	"errors"
	"fmt"
	"go/types"
	"io"
	"maps"
	"reflect"
	"runtime"
	"strings"

	"github.com/traefik/yaegi/interp"

	"levelsum/kernel/cell"
	"levelsum/kernel/runner/guard"
	"levelsum/kernel/symbols"
)

// An interpreter runs scripts. All state of the session is outside of it, so a
// fresh one can take over at any time; that keeps it from growing.
type interpreter struct {
	r       *Runner
	in      *interp.Interpreter
	known   typeTable
	ready   bool
	used    int // scripts that this interpreter has seen
	next    int // for names of functions
	imports map[string]bool
	offered map[string]bool
	decls   map[string]reflect.Value // what cells declare, by cell.CellSymbol
	types   map[string]reflect.Type  // pointers to types, likewise
}

// scriptsPerInterpreter bounds what one interpreter keeps of old scripts.
const scriptsPerInterpreter = 100

func (i *interpreter) init(r *Runner) {
	i.r = r
	i.decls, i.types = map[string]reflect.Value{}, map[string]reflect.Type{}
}

// Has tells whether interpreted code can reach a name of a package.
func (i *interpreter) Has(path, name string) bool { return symbols.Has(path, name) }

// Known tells whether a type's values are the same in all code.
func (i *interpreter) Known(t types.Type) bool {
	if !i.ready {
		i.ready = true
		i.known.init(func(o *types.TypeName) reflect.Type {
			u := i.r.scope.UnitOf(o)
			if u == nil {
				return nil
			}
			return i.types[cell.CellSymbol(u, o.Name())]
		})
	}
	return i.known.of(t) != nil
}

// add takes what a unit declares.
func (i *interpreter) add(u *cell.Unit, offers map[string]any) {
	for key, v := range offers {
		kind, name, _ := strings.Cut(key, " ")
		switch kind {
		case "func":
			i.decls[cell.CellSymbol(u, name)] = reflect.ValueOf(v)
		case "type":
			i.decls[cell.CellSymbol(u, name)] = reflect.ValueOf(v)
			i.types[cell.CellSymbol(u, name)] = reflect.TypeOf(v)
		}
	}
}

// fresh makes a new interpreter if the present one has seen enough.
func (i *interpreter) fresh() error {
	if i.in != nil && i.used < scriptsPerInterpreter {
		i.used++
		return nil
	}
	i.in = interp.New(interp.Options{Stdin: strings.NewReader(""), Stdout: standardOut{}, Stderr: io.Discard, Unrestricted: true})
	i.used, i.imports, i.offered = 1, map[string]bool{}, map[string]bool{}
	table := maps.Clone(symbols.Table())
	table["fmt/fmt"] = maps.Clone(table["fmt/fmt"])
	maps.Copy(table["fmt/fmt"], plainText)
	if err := i.in.Use(table); err != nil {
		return err
	}
	// The interpreter has put a logger of its own in place of the program's.
	if err := i.in.Use(interp.Exports{"log/log": table["log/log"]}); err != nil {
		return err
	}
	if err := i.offer(map[string]reflect.Value{
		"Show": reflect.ValueOf(func(v any) { guard.Show(v) }),
		"Zero": reflect.ValueOf(i.r.slots.zero),
	}); err != nil {
		return err
	}
	return i.importPackage(cell.Inner+"s", cell.Session)
}

// plainText does for interpreted code what package cell does for compiled code:
// text that is made of values has no marker letters in it.
var plainText = map[string]reflect.Value{
	"Sprint":   reflect.ValueOf(func(a ...any) string { return guard.Plain(fmt.Sprint(a...)) }),
	"Sprintf":  reflect.ValueOf(func(f string, a ...any) string { return guard.Plain(fmt.Sprintf(f, a...)) }),
	"Sprintln": reflect.ValueOf(func(a ...any) string { return guard.Plain(fmt.Sprintln(a...)) }),
	"Fprint":   reflect.ValueOf(func(w io.Writer, a ...any) (int, error) { return fmt.Fprint(guard.Out(w), a...) }),
	"Fprintf":  reflect.ValueOf(func(w io.Writer, f string, a ...any) (int, error) { return fmt.Fprintf(guard.Out(w), f, a...) }),
	"Fprintln": reflect.ValueOf(func(w io.Writer, a ...any) (int, error) { return fmt.Fprintln(guard.Out(w), a...) }),
}

func (i *interpreter) offer(m map[string]reflect.Value) error {
	return i.in.Use(interp.Exports{cell.Session + "/session": m})
}

func (i *interpreter) importPackage(alias, path string) error {
	if i.imports[alias] {
		return nil
	}
	i.imports[alias] = true
	_, err := i.in.Eval(fmt.Sprintf("import %s %q", alias, path))
	return err
}

// prepare compiles a script for the interpreter and returns what runs it.
func (i *interpreter) prepare(src *cell.Source, s *cell.Script) (func(), error) {
	if err := i.fresh(); err != nil {
		return nil, err
	}
	for alias, path := range s.Imports {
		if err := i.importPackage(alias, path); err != nil {
			return nil, err
		}
	}
	offer := map[string]reflect.Value{}
	for _, l := range s.Slots {
		if name := l.Var(); !i.offered[name] {
			typ := i.known.of(l.Type)
			if typ == nil {
				return nil, fmt.Errorf("the type of %s is not known", l.Name)
			}
			p, err := i.r.slots.pointer(l.ID, typ)
			if err != nil {
				return nil, err
			}
			i.offered[name] = true
			offer[name] = p
		}
	}
	for name, v := range i.decls { // few, and only those that are not there yet
		if !i.offered[name] {
			i.offered[name] = true
			offer[name] = v
		}
	}
	if len(offer) > 0 {
		if err := i.offer(offer); err != nil {
			return nil, err
		}
	}
	progs := make([]*interp.Program, len(s.Steps))
	for k, st := range s.Steps {
		if st.Text == "" {
			continue
		}
		i.next++
		name := fmt.Sprintf("%sf%d", cell.Inner, i.next)
		if _, err := i.in.Eval("func " + name + "() { " + st.Text + " }"); err != nil {
			return nil, err
		}
		p, err := i.in.Compile(name + "()")
		if err != nil {
			return nil, err
		}
		progs[k] = p
	}
	in := i.in
	return func() {
		for k, st := range s.Steps {
			if guard.Stop != 0 {
				guard.Halt()
			}
			guard.At = st.Stmt
			if progs[k] != nil {
				i.step(in, progs[k], st, src)
			}
			for _, l := range st.Check {
				i.look(cell.Look{Slot: l, Line: st.Line}, src)
			}
		}
		for _, l := range s.End {
			i.look(l, src)
		}
	}, nil
}

// A stepPanic carries a panic out of the interpreter with the user's frames.
type stepPanic struct {
	value  any
	frames []frame
}

func (i *interpreter) step(in *interp.Interpreter, p *interp.Program, st cell.Step, src *cell.Source) {
	_, err := in.Execute(p)
	if err == nil {
		return
	}
	frames := []frame{}
	var ip interp.Panic
	if !errors.As(err, &ip) {
		panic(fmt.Errorf("the interpreter: %w", err))
	}
	frames = append(frames, framesOf(runtime.CallersFrames(ip.Callers))...)
	frames = append(frames, frame{file: src.Name(), line: st.Line})
	panic(stepPanic{ip.Value, frames})
}

// look fails the cell if an error variable holds an error.
func (i *interpreter) look(l cell.Look, src *cell.Source) {
	if err, ok := i.r.slots.value(l.Slot.ID).(error); ok && err != nil {
		panic(stepPanic{
			guard.UnreadError{Name: l.Slot.Name, At: guard.At, Err: err},
			[]frame{{file: src.Name(), line: l.Line}},
		})
	}
}
