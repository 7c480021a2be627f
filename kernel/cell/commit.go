package cell

import (
	"go/token"
	"go/types"
)

// Commit makes the plan part of the scope: its declarations, and the session
// variables for which reached is true (a cell that failed half-way has not
// reached the later ones). It returns the names of decls that lost what they
// depend on.
func (s *Scope) Commit(p *Plan, reached func(name string) bool) (lost []string) {
	if len(p.decls) == 0 {
		defer s.release(p.parsed)
	}
	for n, path := range p.imports {
		s.imports[n] = path
	}
	s.dots = append(s.dots, p.dots...)
	for i, v := range p.drop {
		s.forget(v)
		s.dropped[v] = p.Dropped[i]
	}
	for _, d := range p.broken {
		s.leave(d)
	}
	for _, d := range p.decls {
		objs := map[string]types.Object{}
		for _, n := range d.names {
			objs[n] = p.pkg.Scope().Lookup(n)
		}
		s.addDecl(d, objs)
	}
	remarks := p.remarks()
	for _, v := range p.vars {
		slot := p.slots[v]
		s.keepSlot(slot) // its place exists, whether or not it was set
		if !reached(v.Name()) {
			if e := s.entities[v.Name()]; e != nil && e.slot == slot {
				continue // keeps the value it had
			}
			s.forget(v.Name())
			lost = append(lost, s.orphan(v.Name())...)
			continue
		}
		if !s.clone {
			slot.Cell = p.Source.N
		}
		obj := v
		if v.Parent() == nil || v.Parent().Parent() != types.Universe {
			obj = types.NewVar(v.Pos(), p.pkg, v.Name(), v.Type())
			// The first scope that an object is put into is written into it, and
			// cells are checked ahead while others run.
			types.NewScope(types.Universe, token.NoPos, token.NoPos, "").Insert(obj)
		}
		s.setVar(v.Name(), obj, slot)
		s.remarks[v.Name()] = remarks[v.Name()]
	}
	s.note(p, p.Source.ID)
	return lost
}

// leave takes a decl that no longer compiles out of the scope; it is tried
// again when a name it mentions is declared.
func (s *Scope) leave(d *Decl) {
	s.removeDecl(d)
	b := *d
	b.broken = true
	b.uses = free(d.node)
	for _, n := range b.names {
		if s.entities[n] != nil || s.decls[n] != nil {
			return // declared anew
		}
	}
	s.addDecl(&b, nil)
}

// orphan leaves all decls that depend on a name which does not exist.
func (s *Scope) orphan(name string) (lost []string) {
	for d := range s.users[name] {
		if d.broken {
			continue
		}
		s.leave(d)
		for _, n := range d.names {
			lost = append(lost, n)
			lost = append(lost, s.orphan(n)...)
		}
	}
	return lost
}
