package cell

import (
	"maps"
	"slices"
)

// Clone returns a scope on which can be tried what would come next. The two
// share what never changes: objects, units and decls.
func (s *Scope) Clone() *Scope {
	c := *s
	c.clone = true
	c.entities = maps.Clone(s.entities)
	c.imports = maps.Clone(s.imports)
	c.dots = slices.Clone(s.dots)
	c.decls = maps.Clone(s.decls)
	c.dropped = maps.Clone(s.dropped)
	c.failed = maps.Clone(s.failed)
	c.units = maps.Clone(s.units)
	c.remarks = maps.Clone(s.remarks)
	c.methods = map[string][]*Decl{}
	for k, v := range s.methods {
		c.methods[k] = slices.Clone(v)
	}
	c.slots = map[string][]*Slot{}
	for k, v := range s.slots {
		c.slots[k] = slices.Clone(v)
	}
	c.users = map[string]map[*Decl]bool{}
	for k, v := range s.users {
		c.users[k] = maps.Clone(v)
	}
	c.typed = map[string]map[string]bool{}
	for k, v := range s.typed {
		c.typed[k] = maps.Clone(v)
	}
	c.origins = origins{now: s.origins.now, at: maps.Clone(s.origins.at), made: maps.Clone(s.origins.made)}
	return &c
}

// On returns the plan as one for a clone of the scope it was made for.
func (p *Plan) On(clone *Scope) *Plan {
	q := *p
	q.scope = clone
	q.parsed = nil // its positions are still wanted
	return &q
}

// madeBy returns the number of the cell that set a slot last. Slots belong to
// the session; a clone, which looks ahead while the session runs, leaves their
// numbers alone.
func (s *Scope) madeBy(slot *Slot) int {
	if s.clone {
		return 0
	}
	return slot.Cell
}
