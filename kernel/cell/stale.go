package cell

import (
	"fmt"
	"go/ast"
	"go/token"
	"go/types"
	"maps"
	"slices"
	"strings"
)

// origins tells for each name when it got its meaning and what that was made
// of, so that a value made of what has changed since is known.
type origins struct {
	now  int
	at   map[string]int // name -> when it was declared or assigned last
	made map[string]*origin
}

type origin struct {
	cell  int
	id    string         // the front end's name of the cell
	reads map[string]int // names the cell used, and how old they were
}

// Stale is a variable whose value no longer follows from the session as it is.
type Stale struct {
	Name string
	Cell int    // the cell that gave it its value
	Why  string // "x was changed by In[7]"
}

// note records what a committed cell declared, assigned and read.
func (s *Scope) note(p *Plan, id string) {
	o := &s.origins
	o.now++
	// By statement: what it writes was made of what it reads.
	made := map[string]*origin{}
	record := func(reads, writes map[string]bool) {
		for w := range writes {
			if made[w] == nil {
				made[w] = &origin{cell: p.Source.N, id: id, reads: map[string]int{}}
			}
			for r := range reads {
				if r == w {
					continue
				}
				made[w].reads[r] = o.at[r]
			}
		}
	}
	for _, d := range p.lead {
		reads, _ := dependencies(d, p.info)
		writes := map[string]bool{}
		for _, spec := range d.(*ast.GenDecl).Specs {
			for _, id := range spec.(*ast.ValueSpec).Names {
				writes[id.Name] = true
			}
		}
		record(reads, writes)
	}
	for _, st := range p.stmts {
		record(p.reads(st), p.assigned(st))
	}
	declared := map[string]bool{}
	for _, d := range p.decls {
		for _, n := range d.names {
			o.at[n], declared[n] = o.now, true
		}
	}
	// A cell is run whole: what it sets or declares itself, before or after,
	// is no change since.
	for _, m := range made {
		for r := range m.reads {
			if made[r] != nil || declared[r] {
				m.reads[r] = o.now
			}
		}
	}
	// A cell that is run again with another text no longer makes what it made.
	for n, m := range o.made {
		if id != "" && m.id == id && made[n] == nil {
			m.reads[""] = p.Source.N
		}
	}
	for n, m := range made {
		if s.entities[n] == nil {
			continue
		}
		o.at[n] = o.now
		o.made[n] = m
	}
}

// reads lists the names whose values a statement may use. A variable that is
// only given a value, as err in x, err = f(), is not among them.
func (p *Plan) reads(st ast.Stmt) map[string]bool {
	out, _ := dependencies(st, p.sinfo)
	target := map[*ast.Ident]bool{}
	mark := func(es ...ast.Expr) {
		for _, e := range es {
			if e == nil {
				continue
			}
			if id, ok := ast.Unparen(e).(*ast.Ident); ok {
				target[id] = true
			}
		}
	}
	read, written := map[string]bool{}, map[string]bool{}
	ast.Inspect(st, func(n ast.Node) bool {
		switch n := n.(type) {
		case *ast.AssignStmt:
			if n.Tok == token.ASSIGN || n.Tok == token.DEFINE {
				mark(n.Lhs...)
			}
		case *ast.RangeStmt:
			mark(n.Key, n.Value)
		case *ast.Ident:
			if p.sinfo.Uses[n] == nil {
				break
			}
			if target[n] {
				written[n.Name] = true
				break
			}
			read[n.Name] = true
			if v, ok := p.sinfo.Uses[n].(*types.Var); ok && p.slots[v] != nil { // of this very cell
				out[n.Name] = true
			}
		}
		return true
	})
	for n := range written {
		if !read[n] {
			delete(out, n)
		}
	}
	return out
}

// assigned lists the session variables that a statement assigns.
func (p *Plan) assigned(st ast.Stmt) map[string]bool {
	out := map[string]bool{}
	add := func(e ast.Expr) {
		for {
			switch x := ast.Unparen(e).(type) {
			case *ast.SelectorExpr:
				e = x.X
				continue
			case *ast.IndexExpr:
				e = x.X
				continue
			case *ast.StarExpr:
				e = x.X
				continue
			case *ast.Ident:
				if v, ok := objectOf(x, p.sinfo).(*types.Var); ok && p.slotOf(v, p.sinfo) != nil {
					out[x.Name] = true
				}
			}
			return
		}
	}
	ast.Inspect(st, func(n ast.Node) bool {
		switch n := n.(type) {
		case *ast.AssignStmt:
			for _, e := range n.Lhs {
				add(e)
			}
		case *ast.IncDecStmt:
			add(n.X)
		case *ast.ValueSpec:
			for _, id := range n.Names {
				add(id)
			}
		}
		return true
	})
	return out
}

// Stale lists the variables whose values are older than what they were made
// of, by name.
func (s *Scope) Stale() []Stale {
	o := &s.origins
	why := map[string]string{}
	var look func(n string, seen map[string]bool) string
	look = func(n string, seen map[string]bool) string {
		if w, ok := why[n]; ok {
			return w
		}
		m := o.made[n]
		if m == nil || seen[n] {
			return ""
		}
		seen[n] = true
		var ws []string
		for r, at := range m.reads {
			switch {
			case r == "":
				ws = append(ws, fmt.Sprintf("its cell was run again as In[%d] and no longer sets it", at))
			case s.entities[r] == nil:
				ws = append(ws, r+" is not there any more")
			case o.at[r] > at:
				w := r + " has changed since"
				if by := o.made[r]; by != nil {
					w = fmt.Sprintf("%s was changed by In[%d]", r, by.cell)
				} else if d := s.decls[r]; d != nil {
					w = fmt.Sprintf("%s was changed by %s", r, d.Source.Name())
				}
				ws = append(ws, w)
			case look(r, seen) != "":
				ws = append(ws, r+" is stale")
			}
		}
		slices.Sort(ws)
		why[n] = strings.Join(ws, ", ")
		return why[n]
	}
	var out []Stale
	for _, n := range slices.Sorted(maps.Keys(s.entities)) {
		if s.entities[n].slot == nil {
			continue
		}
		if w := look(n, map[string]bool{}); w != "" {
			out = append(out, Stale{Name: n, Cell: o.made[n].cell, Why: w})
		}
	}
	return out
}

// StaleIn lists the stale variables that a checked cell reads before it gives
// them a new value itself, directly or in functions that it calls.
func (s *Scope) StaleIn(p *Plan) []Stale {
	all := s.Stale()
	if len(all) == 0 {
		return nil
	}
	read, written, seen := map[string]bool{}, map[string]bool{}, map[string]bool{}
	var use func(name string)
	use = func(name string) {
		if seen[name] || written[name] {
			return
		}
		seen[name], read[name] = true, true
		if d := s.decls[name]; d != nil {
			for n := range d.uses {
				use(n)
			}
		}
	}
	for _, d := range p.decls {
		for n := range d.uses {
			use(n)
		}
	}
	for _, d := range p.lead {
		uses, _ := dependencies(d, p.info)
		for n := range uses {
			use(n)
		}
	}
	for _, st := range p.stmts {
		for n := range p.reads(st) {
			use(n)
		}
		if a, ok := st.(*ast.AssignStmt); ok { // other statements may not come to the assignment
			for _, e := range a.Lhs {
				if id, ok := ast.Unparen(e).(*ast.Ident); ok {
					written[id.Name] = true
				}
			}
		}
	}
	return slices.DeleteFunc(all, func(v Stale) bool { return !read[v.Name] })
}
